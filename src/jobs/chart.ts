/** `chart`: a test chart sized for a rig, and what stands where on it. */
import { basename, dirname, extname, join } from 'node:path';
import { drawChart } from '../charts/draw-chart.js';
import type { ChartChoices } from '../charts/options.js';
import type { ChartKind, ChartTruth } from '../charts/truth.js';
import { InputError, InterruptedError } from '../errors.js';
import {
  encodePicture,
  formatOf,
  MAX_MEGAPIXELS,
  type Picture,
  refuseLinearFormat,
} from '../files/pictures/index.js';
import { resultData } from '../files/result-data.js';
import { dataText } from '../files/write-data.js';
import { assertWritable, writeAllWhole } from '../files/write-whole.js';
import type { Rig } from '../optics/rig.js';

export type { ChartChoices } from '../charts/options.js';
export type {
  BarTruth,
  ChartKind,
  ChartPlace,
  ChartTruth,
  CornerTruth,
  DotTruth,
  EdgeTruth,
  Modulation,
  SectorTruth,
} from '../charts/truth.js';

export interface ChartOptions extends ChartChoices {
  kind: ChartKind;
  rig: Rig;
  /** The scene to write, 16-bit linear light (.png or .tif); left out: it is returned only. */
  out?: string;
  /** The truth file (.json, .yaml). Default: beside `out`, with the ending `.truth.json`. */
  truthFile?: string;
  signal?: AbortSignal;
}

export interface ChartResult {
  /** One plane in linear light, oversample times the camera's pixels on each side: a scene for `render` with
   * the same oversampling. */
  scene: Picture;
  truth: ChartTruth;
  /** What was written. */
  files: { out?: string; truth?: string };
}

/** Draw a chart for a rig, and write it with its truth file.
 * @throws {InputError} choices out of range, patches that do not fit, files that cannot be written; nothing
 *   is half-written
 */
export async function chart(options: ChartOptions): Promise<ChartResult> {
  const { kind, rig, out, signal, oversample = 4 } = options;
  const format = out === undefined ? undefined : formatOf(out, '--out');
  if (format !== undefined) refuseLinearFormat(format, '--out');
  const truthFile = options.truthFile ?? (out === undefined ? undefined : truthBeside(out));
  if (out !== undefined) assertWritable(out, '--out');
  if (truthFile !== undefined) assertWritable(truthFile, '--truth');
  refuseTooManySamples(rig, oversample);
  const { plane, truth } = drawChart(kind, rig, options);
  const scene: Picture = { width: plane.width, height: plane.height, planes: [plane.samples] };
  if (signal?.aborted) throw new InterruptedError();
  const files: { path: string; data: Uint8Array | string }[] = [];
  if (out !== undefined && format !== undefined)
    files.push({ path: out, data: await encodePicture(scene, format, { linear: true }) });
  if (truthFile !== undefined) files.push({ path: truthFile, data: dataText(truthFile, resultData(truth)) });
  if (signal?.aborted) throw new InterruptedError();
  await writeAllWhole(files);
  return { scene, truth, files: { out, truth: truthFile } };
}

/** `scene.png` -> `scene.truth.json`. */
export function truthBeside(scene: string): string {
  return join(dirname(scene), `${basename(scene, extname(scene))}.truth.json`);
}

function refuseTooManySamples(rig: Rig, oversample: number): void {
  const [width, height] = rig.camera.pixels.map((side) => side * oversample);
  if (!(width * height > MAX_MEGAPIXELS * 1e6)) return;
  throw new InputError({
    key: '--oversample',
    message: 'the scene would be too large to be read again',
    found: `${oversample}, for ${width} x ${height} samples`,
    allowed: `up to ${Math.floor(Math.sqrt((MAX_MEGAPIXELS * 1e6) / (rig.camera.pixels[0] * rig.camera.pixels[1])))} for this camera (${MAX_MEGAPIXELS} megapixels)`,
  });
}
