import { describe, expect, it } from 'vitest';
import { exposureFor } from '../../src/camera/exposure.js';
import { simulateSensor } from '../../src/camera/simulate-sensor.js';
import { InputError } from '../../src/errors.js';
import { parseTask } from '../../src/files/load-task.js';
import { bandLines } from '../../src/optics/otf.js';
import { KernelMaker } from '../../src/optics/psf.js';
import type { Rig } from '../../src/optics/rig.js';
import { detectAt } from '../../src/tasks/detect.js';
import { layOut } from '../../src/tasks/evaluate.js';
import { benchAt, COLOUR, type RigParts, SENSOR, taskRig } from './rigs.js';

const CAMERA = { sensor: SENSOR };
const detect = (parts: RigParts, h: number, diameterPx: number, contrast = 0.05) => {
  const [bench, place] = benchAt({ camera: CAMERA, ...parts }, h);
  return detectAt(bench, place, { kind: 'detect', diameterPx, contrast, ratioAtLeast: 5 });
};

/** C mu sqrt(area) / sigma of a disc in white noise, nothing blurred: EMVA 1288's noise of a pixel at `mu` electrons. */
function closedForm(diameterPx: number, contrast: number, mu: number): number {
  const gain = (4095 - 6 * 5.22) / 10000; // a 12-bit converter whose pedestal is 6 deviations of the dark signal; its rounding is next to nothing
  const variance = mu + 5 ** 2 + (0.007 * mu) ** 2 + 1.5 ** 2 + 1 / (12 * gain ** 2);
  return (contrast * mu * Math.sqrt((Math.PI * diameterPx ** 2) / 4)) / Math.sqrt(variance);
}

describe('detect', () => {
  // The pixel and diffraction at f/2 take (2/3) (5 um + about 2 um) / D out of the energy of a disc: 1 % of the ratio at 40 pixels
  it.each([40, 80, 200])(
    'is the closed form of a disc in white noise within 2 %: %d pixels',
    (diameterPx) => {
      const sharp = { lens: { f_number: 2 } };
      expect(
        Math.abs(detect(sharp, 0, diameterPx).value / closedForm(diameterPx, 0.05, 8000) - 1),
      ).toBeLessThan(0.02);
    },
  );

  it.each([
    ['sharp', {}, 0],
    ['blurred', { W131: 1.5, W222: 1.2 }, 1],
  ])('is what a matched filter finds in noisy pictures: %s', (_, waves, h) => {
    const rig = taskRig({ camera: CAMERA, waves });
    // a statistical check with fixed seeds: the deviation of 400 outputs is known to 1/sqrt(800) = 3.5 %
    expect(Math.abs(detect({ waves }, h, 6).value / matchedFilterRatio(rig, h, 6, 0.05) - 1)).toBeLessThan(
      0.1,
    );
  });

  it('loses to blur, to darkness and to a smaller contrast', () => {
    const plain = detect({}, 1, 5).value;
    expect(detect({ waves: { W020: 2 } }, 1, 5).value).toBeLessThan(0.8 * plain);
    expect(
      detect(
        {
          lens: {
            relative_illumination: [
              [0, 1],
              [1, 0.25],
            ],
          },
        },
        1,
        5,
      ).value,
    ).toBeLessThan(0.6 * plain);
    expect(detect({}, 1, 5, 0.025).value).toBeCloseTo(plain / 2, 9);
  });

  it('sees a band with the pixels that see it: a mosaic takes the root of their share', () => {
    const bands = { camera: { ...CAMERA, ...COLOUR, bands_nm: { red: [540], green: [540], blue: [540] } } };
    const mosaic = { camera: { ...bands.camera, mosaic: 'rggb' } };
    expect(detect(mosaic, 0, 8).value).toBeCloseTo(detect(bands, 0, 8).value / 2, 9);
    expect(detect(mosaic, 0, 8).band).not.toBe('green');
  });

  it('loses the contrast that lies above a full well', () => {
    const camera = { sensor: { ...SENSOR, white_e: 10200 } };
    const { value } = detect({ camera }, 0, 20);
    // 10000 of 10200 electrons, the disc at 9690: 310 left of 510
    expect(value).toBeLessThan(0.65 * closedForm(20, 0.05, 10200));
    expect(detect({ camera: { sensor: { ...SENSOR, white_e: 30000 } } }, 0, 20).value).toBe(0);
  });

  it('refuses a camera without noise', () => {
    const { rules } = parseTask({ require: [{ detect: { feature_px: 8, contrast: 0.2 } }] });
    expect(() => layOut(taskRig(), rules, [0])).toThrow(InputError);
    expect(() => layOut(taskRig(), rules, [0])).toThrow(/camera\.sensor.*detect/);
  });
});

/** Mean output of a filter matched to the blurred disc over its deviation, by pictures drawn with the camera's own noise. */
function matchedFilterRatio(rig: Rig, h: number, diameterPx: number, contrast: number): number {
  const disc = blurredDisc(rig, h, diameterPx);
  const side = Math.sqrt(disc.length);
  const energy = disc.reduce((sum, value) => sum + value * value, 0);
  const outputs: number[] = [];
  const camera = { ...rig.camera, pixels: [side, side] as const };
  const light = Float32Array.from(disc, (share) => 1 - contrast * share);
  for (let seed = 1; seed <= 400; seed++) {
    const { picture } = simulateSensor([light], exposureFor(camera, { seed, cameraSeed: seed }));
    outputs.push(picture[0].reduce((sum, value, i) => sum + (1 - value) * disc[i], 0) / energy);
  }
  const mean = outputs.reduce((sum, value) => sum + value, 0) / outputs.length;
  const variance = outputs.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (outputs.length - 1);
  return contrast / Math.sqrt(variance); // the mean is the contrast, to within the noise
}

/** The share of ink in each pixel: a disc of points, 5 a pixel on each side, through the samples of the PSF. */
function blurredDisc(rig: Rig, h: number, diameterPx: number): Float64Array {
  const fine = 5;
  const kernelPx = 141;
  const side = 32;
  const maker = new KernelMaker({ fNumber: 4, pitchUm: 1, boxUm: 5, shortestNm: 550, kernelPx });
  const kernel = new Float64Array(kernelPx * kernelPx);
  maker.bandKernel(bandLines(rig, h * 2, 0, rig.camera.bands[0]), kernel);
  const out = new Float64Array(side * side);
  const reach = Math.ceil((diameterPx * fine) / 2);
  for (let dy = -reach; dy <= reach; dy++)
    for (let dx = -reach; dx <= reach; dx++) {
      if (Math.hypot(dx, dy) > (diameterPx * fine) / 2) continue;
      for (let row = 0; row < side; row++)
        for (let column = 0; column < side; column++) {
          const y = (row - side / 2) * fine - dy + (kernelPx - 1) / 2;
          const x = (column - side / 2) * fine - dx + (kernelPx - 1) / 2;
          if (x >= 0 && y >= 0 && x < kernelPx && y < kernelPx)
            out[row * side + column] += kernel[y * kernelPx + x];
        }
    }
  return out;
}
