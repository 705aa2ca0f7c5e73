/** Small makers of what the optics take: a wavefront, the lines of a band, a rig. What is not named is 0 or
 * plain. */
import type { WavefrontLine } from '../../src/optics/psf.js';
import type { Camera, Lens, Mount, Rig, Waves } from '../../src/optics/rig.js';
import type { LocalWavefront } from '../../src/optics/wavefront.js';

export function wavefront(terms: Partial<LocalWavefront> = {}): LocalWavefront {
  return { w40: 0, w31: 0, w22: 0, w20: 0, w11: 0, cos: 1, sin: 0, ...terms };
}

/** One line. */
export function line(terms: Partial<LocalWavefront> = {}, nm = 550): WavefrontLine[] {
  return [{ nm, weight: 1, wavefront: wavefront(terms) }];
}

export interface RigParts {
  waves?: Partial<Waves>;
  lens?: Partial<Lens>;
  camera?: Partial<Camera>;
  mount?: Partial<Mount>;
}

/** A 12 mm lens at f/4, h = 1 at 4 mm, on 2000 x 1500 pixels of 3.45 um in one band of 550 nm. */
export function sampleRig({ waves, lens, camera, mount }: RigParts = {}): Rig {
  const pixels = camera?.pixels ?? [2000, 1500];
  const fNumber = mount?.fNumber ?? lens?.fNumber ?? 4;
  return {
    lens: {
      name: 'sample',
      focalLengthMm: 12,
      fNumber: 4,
      fullFieldMm: 4,
      wavelengthNm: 550,
      waves: { W040: 0, W131: 0, W222: 0, W220: 0, W311: 0, W020: 0, W111: 0, ...waves },
      axialUm: [],
      lateralUm: [],
      relativeIllumination: 'cos4',
      ...lens,
    },
    camera: {
      pixels,
      pixelPitchUm: 3.45,
      fillFactor: 1,
      bands: [{ name: 'mono', lines: [{ nm: 550, weight: 1 }] }],
      mosaic: 'none',
      ...camera,
    },
    mount: {
      sensorShiftUm: 0,
      sensorTiltDeg: [0, 0],
      axisPx: [(pixels[0] - 1) / 2, (pixels[1] - 1) / 2],
      ...mount,
      fNumber,
    },
  };
}
