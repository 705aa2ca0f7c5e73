/** From what the pixels receive to what the camera gives out: raw numbers and the developed picture. */
import { type RawLevels, rawLevels } from '../camera/converter.js';
import { type Exposure, exposureFor, type Seeds } from '../camera/exposure.js';
import type { Camera } from '../optics/rig.js';
import type { Crew, JobWatch } from './crew.js';

export interface RecordedImage {
  /** The developed picture in linear light, one plane a band. */
  picture: Float32Array[];
  /** The sensor's own numbers, one plane with a mosaic, else one a band; left out where neither noise nor mosaic nor `wantsRaw` asks for them. */
  raw?: Uint16Array[];
  levels: RawLevels;
}

const ROWS_PER_TASK = 64;

/** Record the light of a picture.
 * @param light    one plane a band in the crew's arena; overwritten by the picture
 * @param wantsRaw whether the raw numbers are asked for
 */
export async function recordImage(
  crew: Crew,
  camera: Camera,
  light: Float32Array[],
  seeds: Seeds,
  wantsRaw: boolean,
  watch: JobWatch = {},
): Promise<RecordedImage> {
  const exposure = exposureFor(camera, seeds);
  const levels = rawLevels(exposure.sensor, exposure.converter);
  const isExact = exposure.sensor === undefined && exposure.sites === undefined; // a camera that adds nothing
  if (isExact && !wantsRaw) return { picture: light, levels };
  const raw = await expose(crew, exposure, light, watch);
  if (isExact) return { picture: light, raw, levels };
  await crew.run(
    {
      kind: 'develop',
      exposure,
      rawAt: raw.map((plane) => plane.byteOffset),
      pictureAt: light.map((plane) => plane.byteOffset),
      ...rowTasks(exposure),
    },
    watch,
  );
  return { picture: light, raw, levels };
}

async function expose(
  crew: Crew,
  exposure: Exposure,
  light: Float32Array[],
  watch: JobWatch,
): Promise<Uint16Array[]> {
  const { arena } = crew;
  const pixels = exposure.width * exposure.height;
  const planes = exposure.sites === undefined ? light.length : 1;
  const rawAt = Array.from({ length: planes }, () => arena.allocate(2 * pixels));
  const lightAt = light.map((plane) => plane.byteOffset);
  await crew.run({ kind: 'expose', exposure, lightAt, rawAt, ...rowTasks(exposure) }, watch);
  return rawAt.map((address) => arena.shorts(address, pixels));
}

function rowTasks({ height }: Exposure): { rowsPerTask: number; count: number } {
  return { rowsPerTask: ROWS_PER_TASK, count: Math.ceil(height / ROWS_PER_TASK) };
}
