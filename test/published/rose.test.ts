import { describe, expect, it } from 'vitest';
import { detectAt } from '../../src/tasks/detect.js';
import { benchAt } from '../tasks/rigs.js';

describe('the photons that a detail needs', () => {
  // Source: A. Rose, JOSA 38 (1948) 196: k = C sqrt(photons in the detail), k about 5 (from memory)
  it.each([
    [0.02, 62500],
    [0.05, 10000],
    [0.1, 2500],
    [0.5, 100],
  ])('of contrast %d', (contrast, photons) => {
    const diameterPx = 100;
    const whiteE = photons / ((Math.PI * diameterPx ** 2) / 4);
    const sensor = {
      white_e: whiteE,
      full_well_e: 50,
      dark_noise_e: 0,
      prnu_percent: 0,
      dsnu_e: 0,
      bit_depth: 16,
    };
    const [bench, place] = benchAt({ camera: { sensor }, lens: { f_number: 2 } }, 0);
    const rule = { kind: 'detect', diameterPx, contrast, ratioAtLeast: 5 } as const;
    // the edge of the disc is blurred by a pixel: 1 % at 100 pixels
    expect(Math.abs(detectAt(bench, place, rule).value / 5 - 1)).toBeLessThan(0.02);
  });
});
