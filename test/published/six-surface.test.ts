/** A complete invented lens (`sixSurfaceLens`), surface by surface and by exact rays.
 *
 * No outside source for the lens: the figures were computed apart from this code in 60-digit arithmetic,
 * where sums and fits to exact rays agree to 3.5e-18 of the largest coefficient. Formulas: Hopkins, Wave
 * Theory of Aberrations (1950); Welford, Aberrations of Optical Systems (1986), cited from memory.
 */
import { describe, expect, test } from 'vitest';
import { referenceSums, thirdOrderWaves } from '../../src/prescription/coefficients.js';
import { launch, Ray, trace } from '../../src/prescription/exact.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { pathToSphere } from '../../src/prescription/opd.js';
import { D_LINE, sixSurfaceLens } from '../prescription/lenses.js';

const model = lensModel(sixSurfaceLens());
const { paraxial, system } = model.reference;
const sums = referenceSums(model);

/** [S_I, S_II, S_III, S_IV, S_V], mm. */
const SURFACES = [
  [0.02528213817381046, 0.018243142849904095, 0.01316392857099263, 0.0651109817119577, 0.0564817880528207],
  [0.08219982516762651, -0.129296237565277, 0.2033765523764223, 0.023016637121209535, -0.35610522957626617],
  [-0.26415040967222897, 0.21882055479228205, -0.18126958522993403, -0.1047222026028794, 0.23691381647776483],
  [
    -0.17522210448961287, -0.17593234282432269, -0.17664546001095338, -0.10213814825293822,
    -0.2799136186941081,
  ],
  [0.026603852335108244, 0.06080382873378448, 0.1389688057999196, 0.011483209501927084, 0.3438621766440122],
  [
    0.31891054973696303, 0.007918521864854243, 0.0001966162253832369, 0.11375657827917682,
    0.002829448141488566,
  ],
];
const TOTAL = [
  0.01362385125166642, 0.0005574678512251719, -0.002209142268169642, 0.006507055758453506,
  0.004068381045712059,
];
const NAMES = ['S_I', 'S_II', 'S_III', 'S_IV', 'S_V'] as const;

/** 1e-9 of the largest surface term. */
const SUM_LIMIT = 1e-9 * 0.356;

describe('first-order properties', () => {
  test.each<[string, number, number]>([
    ['focal length', paraxial.focalLengthMm, 49.95333755975776],
    ['back focus', paraxial.backFocusMm, 47.21220081270789],
    ['f-number', paraxial.workingFNumber, 3.9962670047806212],
    ['entrance pupil from surface 1', paraxial.entrancePupilMm, 10.369988144028882],
    ['exit pupil from surface 6', paraxial.exitPupilMm, -14.602819700245337],
    ['Lagrange invariant', paraxial.lagrangeMm, 2.0307481014556648],
    ['image height', paraxial.imageHeightMm, 16.230823265736323],
    ['Petzval radius', paraxial.petzvalRadiusMm, 1 / 0.0015778743503573635],
  ])('%s', (_, value, expected) => {
    expect(Math.abs(value / expected - 1)).toBeLessThan(1e-11);
  });

  test('marginal and chief ray', () => {
    const close = (values: Float64Array, expected: number[]) =>
      expected.forEach((value, i) => {
        expect(Math.abs(values[i] - value)).toBeLessThan(1e-11);
      });
    const { marginal, chief } = paraxial;
    close(
      marginal.y,
      [6.25, 5.953964765949205, 4.6714862890147035, 4.655173439383186, 5.649849666919534, 5.9070378375905905],
    );
    close(
      chief.y,
      [
        -3.3694133976967042, -2.608268087479264, 0, 0.32268764343207174, 3.030856502403482,
        3.8342749669787537,
      ],
    );
    close(
      marginal.u.slice(1),
      [
        -0.09867841135026473, -0.21374641282241696, -0.013594041359598347, 0.16440929380766084,
        0.08572939022368556, -0.125116765071469,
      ],
    );
    close(
      chief.u.slice(1),
      [
        0.2537151034058134, 0.4347113479132107, 0.2689063695267264, 0.4476312163589108, 0.267806154858424,
        0.26257086272963676,
      ],
    );
  });
});

describe('sums', () => {
  test('of each surface', () => {
    expect(sums.surfaces).toHaveLength(6);
    SURFACES.forEach((row, i) => {
      row.forEach((value, j) => {
        expect(Math.abs(sums.surfaces[i][NAMES[j]] - value)).toBeLessThan(SUM_LIMIT);
      });
    });
  });

  test('of the lens', () => {
    TOTAL.forEach((value, j) => {
      expect(Math.abs(sums.total[NAMES[j]] - value)).toBeLessThan(SUM_LIMIT);
    });
  });

  test('chromatic, F minus C: of each surface, of the lens, and as waves dW020 = C_I/2, dW111 = C_II', () => {
    [
      [0.01022786187295447, 0.007380243866821409],
      [0.01136170524798318, -0.01787139738915707],
      [-0.0255466956011567, 0.021162723584230617],
      [-0.022640338742957594, -0.022732108194836412],
      [0.007371967281213662, 0.016848831904184246],
      [0.020654663635803972, 0.0005128535438737383],
    ].forEach(([axial, lateral], i) => {
      expect(Math.abs(sums.surfaces[i].C_I - axial)).toBeLessThan(1e-9 * 0.026);
      expect(Math.abs(sums.surfaces[i].C_II - lateral)).toBeLessThan(1e-9 * 0.026);
    });
    const waves = 1e6 / D_LINE;
    expect(Math.abs((sums.total.C_I / 2) * waves - 1.2161815947199033)).toBeLessThan(1e-9);
    expect(Math.abs(sums.total.C_II * waves - 9.022280405425489)).toBeLessThan(1e-9);
  });

  test('coefficients in waves', () => {
    const waves = thirdOrderWaves(model, model.reference);
    const expected = {
      W040: 2.8983868700421,
      W131: 0.47439082256978915,
      W222: -1.879923327358622,
      W220: 1.8287069931553852,
      W311: 3.462087771628499,
      W020: 0,
      W111: 0,
    };
    // stated tolerance 1e-7; ten digits are there
    for (const [name, value] of Object.entries(expected))
      expect(Math.abs(waves[name as keyof typeof expected] - value)).toBeLessThan(1e-9);
  });

  test('third-order foci at full field: T, S and the Petzval surface', () => {
    const { W222, W220 } = thirdOrderWaves(model, model.reference);
    const perWave = -8 * paraxial.workingFNumber ** 2 * D_LINE * 1e-6;
    expect(Math.abs(perWave * (W220 + W222) - 0.003844687315943886)).toBeLessThan(1e-8);
    expect(Math.abs(perWave * W220 - -0.13727664602590947)).toBeLessThan(1e-8);
    expect(Math.abs(perWave * (W220 - W222 / 2) - -0.20783731269683614)).toBeLessThan(1e-8);
  });
});

test('near object: 400 mm in front, pupil radius 6.25, object height 133.337', () => {
  const near = lensModel(
    sixSurfaceLens({ objectDistanceMm: 400, field: { objectHeightMm: 133.33729189085923 } }),
  );
  expect(Math.abs(near.reference.paraxial.workingFNumber - 4.432265709590149)).toBeLessThan(1e-8);
  expect(Math.abs(near.reference.paraxial.imageDistanceMm - 53.956311966737644)).toBeLessThan(1e-8);
  const waves = thirdOrderWaves(near, near.reference);
  const expected = {
    W040: 3.1397550205913953,
    W131: -2.419576150470436,
    W222: -3.940434377324569,
    W220: 0.7984514681724116,
    W311: 15.878749799321598,
  };
  for (const [name, value] of Object.entries(expected))
    expect(Math.abs(waves[name as keyof typeof expected] - value)).toBeLessThan(1e-8);
});

describe('exact rays at full aperture and field', () => {
  const ray = new Ray();

  test('the axial ray at y 6.25 crosses the axis 47.7562513477 behind surface 6', () => {
    launch(ray, system, 0, 0, 6.25);
    expect(trace(ray, system)).toBe(true);
    expect(Math.abs(ray.z - (ray.y * ray.N) / ray.M - 47.756251347737546)).toBeLessThan(1e-8);
  });

  test('on-axis optical path difference of that ray: -0.759294 waves, where third order says 2.898387', () => {
    const curvature = 1 / (paraxial.imageDistanceMm - paraxial.exitPupilMm);
    const path = (y: number) => {
      launch(ray, system, 0, 0, y);
      trace(ray, system);
      return pathToSphere(ray, model.reference, 0, curvature);
    };
    const waves = ((path(0) - path(6.25)) * 1e6) / D_LINE;
    expect(Math.abs(waves - -0.7592943754433977)).toBeLessThan(1e-8);
  });

  test('the chief ray through the middle of the paraxial entrance pupil: height, distortion', () => {
    launch(ray, system, paraxial.fieldScale, 0, -paraxial.entrancePupilMm * paraxial.fieldScale);
    expect(trace(ray, system)).toBe(true);
    const height = ray.y + (ray.M / ray.N) * (paraxial.imageDistanceMm - ray.z);
    expect(Math.abs(height - 16.2378317547908)).toBeLessThan(1e-8);
    const ideal = paraxial.imageHeightMm;
    expect(Math.abs((100 * (height - ideal)) / ideal - 0.043180120562782025)).toBeLessThan(1e-8);
    const { W311 } = thirdOrderWaves(model, model.reference);
    const third = (-200 * paraxial.workingFNumber * D_LINE * 1e-6 * W311) / ideal;
    expect(Math.abs(third - -0.10016951493875077)).toBeLessThan(1e-8);
  });
});
