/** What the camera contributes to a picture, settled before the first pixel. */
import { checkSeed } from '../numeric/random.js';
import type { Camera, Sensor } from '../optics/rig.js';
import { type Converter, converterFor } from './converter.js';
import { type MosaicSites, mosaicSites } from './mosaic.js';

/** All that the raw numbers depend on besides the light. Plain data, so that it can be sent to a worker. */
export interface Exposure {
  width: number;
  height: number;
  /** Left out: no noise; the converter then takes linear values for electrons. */
  sensor?: Sensor;
  converter: Converter;
  /** Left out: every pixel sees every band, and there is a raw plane for each. */
  sites?: MosaicSites;
  /** Draws the shot noise and the dark noise: another number for every picture. */
  seed: number;
  /** Draws PRNU and DSNU: the number of the camera, the same for all its pictures. */
  cameraSeed: number;
}

/** Whole numbers from 0 to 2^53 - 1. */
export interface Seeds {
  seed: number;
  cameraSeed: number;
}

/** The exposure of a camera.
 * @throws {InputError} for another seed, a sensor without range or a mosaic without its bands */
export function exposureFor(camera: Camera, seeds: Seeds): Exposure {
  checkSeed(seeds.seed);
  checkSeed(seeds.cameraSeed, 'camera seed');
  const [width, height] = camera.pixels;
  const bandNames = camera.bands.map((band) => band.name);
  return {
    width,
    height,
    sensor: camera.sensor,
    converter: converterFor(camera.sensor),
    sites: mosaicSites(camera.mosaic, bandNames),
    seed: seeds.seed,
    cameraSeed: seeds.cameraSeed,
  };
}
