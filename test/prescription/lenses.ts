/** Invented lenses for the tests. */
import type { Glass, Prescription, Surface } from '../../src/prescription/prescription.js';

/** nm, the d line. */
export const D_LINE = 587.5618;

export const degrees = (tangent: number) => (Math.atan(tangent) * 180) / Math.PI;

/** A six-surface lens of f 49.95 mm and f/4 over 18 degrees that leans on its higher orders. */
export function sixSurfaceLens(overrides: Partial<Prescription> = {}): Prescription {
  return {
    name: 'six surfaces',
    wavelengthNm: D_LINE,
    surfaces: [
      { radiusMm: 24.25, thicknessMm: 3, glass: { nd: 1.62041, vd: 60.3 } },
      { radiusMm: -68.6, thicknessMm: 6 },
      { radiusMm: -15.02, thicknessMm: 1.2, glass: { nd: 1.61659, vd: 36.6 }, stop: true },
      { radiusMm: 15.4, thicknessMm: 6.05 },
      { radiusMm: 137.5, thicknessMm: 3, glass: { nd: 1.62041, vd: 60.3 } },
      { radiusMm: -13.88 },
    ],
    aperture: { entrancePupilMm: 12.5 },
    field: { halfAngleDeg: 18 },
    ...overrides,
  };
}

/** The same with its stop in the plane `z` of the entrance pupil, measured from the first surface of glass.
 */
export function withStopAt(lens: Prescription, z: number): Prescription {
  const surfaces: Surface[] = [
    { stop: true, thicknessMm: -z },
    ...lens.surfaces.map(({ stop: _, ...surface }) => surface),
  ];
  const { objectDistanceMm } = lens;
  return {
    ...lens,
    surfaces,
    objectDistanceMm: objectDistanceMm === undefined ? undefined : objectDistanceMm + z,
  };
}

/** A biconvex lens of f 50 mm at f/8 over 6 degrees, stop in front. */
export function singlet(overrides: Partial<Prescription> = {}): Prescription {
  return {
    name: 'singlet',
    wavelengthNm: 550,
    surfaces: [
      { stop: true, thicknessMm: 4 },
      { radiusMm: 42, thicknessMm: 3.5, glass: { nd: 1.5168, vd: 64.17 } },
      { radiusMm: -66 },
    ],
    scaleToFocalLengthMm: 50,
    aperture: { fNumber: 8 },
    field: { halfAngleDeg: 6 },
    ...overrides,
  };
}

/** A cemented doublet of f 60 mm at f/6 over 4 degrees, with an aspheric last surface and a near object. */
export function doublet(overrides: Partial<Prescription> = {}): Prescription {
  return {
    name: 'doublet',
    wavelengthNm: 600,
    surfaces: [
      { radiusMm: 37.5, thicknessMm: 5, glass: { code: 517642 }, stop: true },
      { radiusMm: -27, thicknessMm: 2, glass: { nd: 1.62, vd: 36.4 } },
      { radiusMm: -92, conic: -3, asphericMm: { A4: 2e-7 } },
    ],
    scaleToFocalLengthMm: 60,
    objectDistanceMm: 500,
    aperture: { fNumber: 7 },
    field: { halfAngleDeg: 4 },
    ...overrides,
  };
}

/** A thin lens in air (two surfaces without thickness) of shape q = (r2 + r1)/(r2 - r1), stop at the lens. */
export function thinLensSurfaces(glass: Glass, n: number, q: number, focalMm: number): Surface[] {
  const radius = (shape: number) => (shape === 0 ? undefined : (2 * focalMm * (n - 1)) / shape);
  return [
    { radiusMm: radius(q + 1), thicknessMm: 0, glass },
    { radiusMm: radius(q - 1), thicknessMm: 0 },
  ];
}

/** A three-element lens of f 12 mm at f/4 to 4.6 mm image height, for a camera over the belt of a packing
 * hall. Its rims cut a little of the beam in the corners. */
export function packhouseLens(overrides: Partial<Prescription> = {}): Prescription {
  const crown = { nd: 1.6935, vd: 53.2 };
  const flint = { nd: 1.6727, vd: 32.2 };
  return {
    name: 'three-element lens, packing hall',
    wavelengthNm: 550,
    surfaces: [
      { radiusMm: 3.83, thicknessMm: 1.64, glass: crown, semiDiameterMm: 2.2 },
      { radiusMm: -98, thicknessMm: 0.25, semiDiameterMm: 1.75 },
      { radiusMm: -18, thicknessMm: 0.6, glass: flint, semiDiameterMm: 1.55 },
      { radiusMm: 3.41, thicknessMm: 0.23, semiDiameterMm: 1.25 },
      { stop: true, thicknessMm: 0.92 },
      { radiusMm: 9.32, thicknessMm: 3.8, glass: crown, semiDiameterMm: 1.7 },
      { radiusMm: -24.7, semiDiameterMm: 2.5 },
    ],
    scaleToFocalLengthMm: 12,
    aperture: { fNumber: 4 },
    field: { imageHeightMm: 4.6 },
    ...overrides,
  };
}
