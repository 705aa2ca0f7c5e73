/** `render --sheet`: scene and picture side by side, with what the optics do there. */
import { extname } from 'node:path';
import { InputError } from '../errors.js';
import { rasterise } from '../files/pictures/rasterise.js';
import { assertWritable } from '../files/write-whole.js';
import { type CropPlan, cropOf, planCrops } from '../imaging/crops.js';
import { psfSamples } from '../imaging/psf-samples.js';
import type { Raster } from '../imaging/raster.js';
import { bandLines, bandMtf, pixelMtf } from '../optics/otf.js';
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import { strehlRatio } from '../optics/strehl.js';

/** @throws {InputError} an ending other than .png and .svg, a name that cannot be written */
export function checkSheet(file: string): void {
  if (!['.png', '.svg'].includes(extname(file).toLowerCase()))
    throw new InputError({
      key: '--sheet',
      message: 'the file has no ending of a sheet',
      found: `'${file}'`,
      allowed: '.png, .svg',
    });
  assertWritable(file, '--sheet');
}

/** The pieces of the scene that a sheet shows, kept before the picture takes the scene's place in memory. */
export interface KeptScene {
  plan: CropPlan;
  ideal: Raster[];
}

/** @param scene the ideal image at `oversample` samples a pixel */
export function keepScene(rig: Rig, scene: Raster, oversample: number): KeptScene {
  const plan = planCrops(rig, scene, oversample);
  return { plan, ideal: plan.crops.map(({ ideal }) => cropOf(scene, ideal, plan, oversample)) };
}

/** The sheet as the bytes of its file: PNG, or SVG after the file's ending. */
export async function sheetFile(
  file: string,
  rig: Rig,
  { plan, ideal }: KeptScene,
  picture: Raster,
): Promise<Buffer> {
  const { camera, lens, mount } = rig;
  const band = camera.bands[(camera.bands.length - 1) >> 1];
  const lpPerMm = 0.25 / pixelPitchMm(camera);
  const pixel = pixelMtf(camera, lpPerMm);
  const places = plan.crops.map((crop, at) => {
    const lines = bandLines(rig, crop.xMm, crop.yMm, band);
    const contrast = (direction: 'tangential' | 'sagittal') =>
      pixel * bandMtf(lines, mount.fNumber, lpPerMm, direction);
    return {
      crop,
      ideal: ideal[at],
      recorded: cropOf(picture, crop.recorded, plan),
      strehl: strehlRatio(lines, mount.fNumber),
      mtf: { tangential: contrast('tangential'), sagittal: contrast('sagittal') },
    };
  });
  const { sheetSvg } = await import('../report/sheet.js');
  const shift = mount.sensorShiftUm === 0 ? '' : `, sensor shifted by ${mount.sensorShiftUm} um`;
  const svg = await sheetSvg({
    rig: lens.name,
    settings: `at f/${mount.fNumber}${shift}, ${camera.pixels.join(' x ')} pixels of ${camera.pixelPitchUm} um; crops of ${plan.width} x ${plan.height} pixels`,
    pixels: camera.pixels,
    bands: camera.bands.map(({ name }) => name),
    plan,
    places,
    psfs: psfSamples(rig, plan.crops),
    lpPerMm,
    band: camera.bands.length > 1 ? band.name : undefined,
  });
  return extname(file).toLowerCase() === '.svg' ? Buffer.from(svg) : rasterise(svg);
}
