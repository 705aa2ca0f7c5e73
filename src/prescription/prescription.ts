/** A lens as the list of its surfaces, in the terms of a prescription file. Light comes from the left; a
 * radius is positive where the centre of curvature lies to the right of the vertex. Surfaces are counted from
 * 1 in everything that people read. */

/** A transparent material: a plain index; n_d and V_d; the six-digit code made of the two; or Sellmeier's
 * formula. */
export type Glass =
  | { n: number }
  | { nd: number; vd: number }
  | { code: number }
  | { sellmeier: { B: readonly number[]; CUm2: readonly number[] } };

/** Even aspheric terms: sag += sum of A_j r^j, each in mm^(1-j). */
export type AsphericTerms = Readonly<Partial<Record<AsphericTerm, number>>>;

export type AsphericTerm = (typeof ASPHERIC_TERMS)[number];

export const ASPHERIC_TERMS = ['A4', 'A6', 'A8', 'A10', 'A12', 'A14', 'A16', 'A18', 'A20'] as const;

export interface Surface {
  /** Radius of curvature at the vertex. Left out or infinite: flat. */
  radiusMm?: number;
  /** Conic constant k: 0 sphere, -1 paraboloid, below -1 hyperboloid. Left out: 0. */
  conic?: number;
  asphericMm?: AsphericTerms;
  /** To the next surface along the axis, + to the right (so usually negative after an odd number of mirrors).
   * The last one reaches to the sensor; left out, the sensor stands at the paraxial focus. */
  thicknessMm?: number;
  /** What follows the surface. Left out: air. A mirror keeps what came before it. */
  glass?: Glass;
  mirror?: boolean;
  /** The aperture stop lies in this surface's vertex plane or, where it is curved, on the surface. */
  stop?: boolean;
  /** Half the clear diameter: rays outside are vignetted. Left out: nothing is cut here. */
  semiDiameterMm?: number;
}

/** How wide the beam is: the working f-number 1/(2 |n' u'|) on the image side, the diameter of the entrance
 * pupil, or n sin U on the object side. */
export type Aperture = { fNumber: number } | { entrancePupilMm: number } | { objectNa: number };

/** Where h = 1 lies: by the ideal image height on the sensor, the angle of the chief ray to the axis in front
 * of the lens, or the height of the object. */
export type FieldSize = { imageHeightMm: number } | { halfAngleDeg: number } | { objectHeightMm: number };

export interface Prescription {
  name: string;
  /** The lens's own wavelength: the focus, the f-number and the field hold for it, and waves are counted in
   * it. */
  wavelengthNm: number;
  surfaces: readonly Surface[];
  /** From the object to the first surface, + for an object in front of the lens, - for a virtual one behind.
   * Left out: infinite. */
  objectDistanceMm?: number;
  aperture: Aperture;
  field: FieldSize;
  /** Scale all surfaces (radii, aspheric terms, thicknesses, semi-diameters) so that the lens gets this focal
   * length. Object distance, aperture and field are those of the scaled lens. */
  scaleToFocalLengthMm?: number;
}
