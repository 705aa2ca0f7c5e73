/** Refractive indices against published formulas and codes. */
import { describe, expect, test } from 'vitest';
import {
  abbeIndex,
  abbeNumber,
  fromGlassCode,
  glassCode,
  refractiveIndex,
  SPECTRAL_LINES_NM,
} from '../../src/prescription/glass.js';
import type { Glass } from '../../src/prescription/prescription.js';

const square = (value: number) => value * value;

/** Source: I. H. Malitson, J. Opt. Soc. Am. 55 (1965) 1205 (coefficients and citation from memory). */
const FUSED_SILICA: Glass = {
  sellmeier: { B: [0.6961663, 0.4079426, 0.8974794], CUm2: [0.0684043, 0.1162414, 9.896161].map(square) },
};

/** A borosilicate crown, n_d 1.51680, V_d 64.17. Source: the Sellmeier coefficients of N-BK7 in the Schott
 * catalogue (from memory). */
const CROWN: Glass = {
  sellmeier: { B: [1.03961212, 0.231792344, 1.01046945], CUm2: [0.00600069867, 0.0200179144, 103.560653] },
};

/** A flint, n_d 1.62004, V_d 36.37. Source: the Sellmeier coefficients of F2 in the Schott catalogue (from
 * memory). */
const FLINT: Glass = {
  sellmeier: { B: [1.34533359, 0.209073176, 0.937357162], CUm2: [0.00997743871, 0.0470450767, 111.886764] },
};

/** A dense flint, n_d 1.78472, V_d 25.68. Source: the Sellmeier coefficients of SF11 in the Schott catalogue
 * (from memory). */
const DENSE_FLINT: Glass = {
  sellmeier: { B: [1.73759695, 0.313747346, 1.89878101], CUm2: [0.013188707, 0.0623068142, 155.23629] },
};

describe('fused silica by its Sellmeier formula', () => {
  test.each([
    [587.5618, 1.458463687137226],
    [486.1327, 1.4631264847470242],
    [656.2725, 1.4563666202951375],
    [546.074, 1.4600781292447798],
    [479.9914, 1.4635027114405734],
    [643.8469, 1.4567040558558164],
  ])('n at %f nm', (nm, n) => {
    expect(Math.abs(refractiveIndex(FUSED_SILICA, nm) - n)).toBeLessThan(1e-12);
  });

  test('V_d and V_e', () => {
    expect(Math.abs(abbeNumber(FUSED_SILICA) - 67.82143198289538)).toBeLessThan(1e-9);
    expect(Math.abs(abbeNumber(FUSED_SILICA, 546.074, 479.9914, 643.8469) - 67.67192770822255)).toBeLessThan(
      1e-9,
    );
  });
});

// Source: MIL-G-174 and common catalogue practice (from memory)
test.each([
  [1.5168, 64.17, 517642],
  [1.62041, 60.3, 620603],
  [1.61659, 36.6, 617366],
  [1.7847, 26.08, 785261],
  [1.458463687137226, 67.82143198289538, 458678],
])('six-digit code of n_d %f, V_d %f', (nd, vd, code) => {
  expect(glassCode(nd, vd)).toBe(code);
  const back = fromGlassCode(code);
  expect(Math.abs(back.nd - nd)).toBeLessThan(0.5e-3 + 1e-12); // half a unit of the code
  expect(Math.abs(back.vd - vd)).toBeLessThan(0.05 + 1e-9);
});

describe('index from n_d and V_d', () => {
  test.each([
    [1.5168, 64.17],
    [1.62004, 36.37],
    [1.9, 20],
  ])('n_d %f, V_d %f come back exactly (definition of V_d: Abbe, ISO 7944)', (nd, vd) => {
    expect(Math.abs(abbeIndex(nd, vd, SPECTRAL_LINES_NM.d) - nd)).toBeLessThan(1e-15);
    expect(Math.abs(abbeNumber({ nd, vd }) / vd - 1)).toBeLessThan(1e-12);
    expect(refractiveIndex({ nd, vd }, 700)).toBe(abbeIndex(nd, vd, 700));
  });

  // what the normal line is off for these glasses; measured, with a quarter to spare
  test.each<[string, Glass, number, number, number]>([
    ['crown', CROWN, 1.5168, 64.17, 2.5e-4],
    ['flint', FLINT, 1.62004, 36.37, 0.8e-4],
    ['dense flint', DENSE_FLINT, 1.78472, 25.68, 6e-4],
    ['fused silica', FUSED_SILICA, 1.45846, 67.82, 3.6e-4],
  ])('against the Sellmeier formula of a %s, 436 to 1014 nm', (_, glass, nd, vd, limit) => {
    // the handbook's n_d and V_d, so the coefficients above are those of the glass
    expect(Math.abs(refractiveIndex(glass, SPECTRAL_LINES_NM.d) - nd)).toBeLessThan(1e-5);
    expect(Math.abs(abbeNumber(glass) - vd)).toBeLessThan(0.01);
    const fromTwo = { nd: refractiveIndex(glass, SPECTRAL_LINES_NM.d), vd: abbeNumber(glass) };
    for (let nm = 436; nm <= 1014; nm += 17)
      expect(Math.abs(refractiveIndex(fromTwo, nm) - refractiveIndex(glass, nm))).toBeLessThan(limit);
  });

  test('crown and flint keep a secondary spectrum: their partial dispersions differ', () => {
    const { g, F, C } = SPECTRAL_LINES_NM;
    const partial = (glass: Glass) =>
      (refractiveIndex(glass, g) - refractiveIndex(glass, F)) /
      (refractiveIndex(glass, F) - refractiveIndex(glass, C));
    const difference = partial({ nd: 1.62004, vd: 36.37 }) - partial({ nd: 1.5168, vd: 64.17 });
    // the true difference of the two glasses is 0.0479; the two glasses lie within 0.001 of the normal line
    expect(Math.abs(difference - (partial(FLINT) - partial(CROWN)))).toBeLessThan(0.0015);
  });
});
