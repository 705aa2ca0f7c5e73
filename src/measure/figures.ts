/** What a measurement gives out. Places are in pixels of the picture, pixel (0, 0) having its middle at (0,
 * 0); angles in degrees from +x toward +y. Frequencies count along the normal of an edge; along the rows of
 * pixels such a frequency is f cos(angle_deg). */
import type { Modulation } from '../charts/truth.js';
import type { FlatFigures } from './flat-field.js';
import type { PixelRect } from './plane.js';

export interface SfrValue {
  cyclesPerPixel: number;
  /** Left out where the pixel's pitch is not known. */
  lpPerMm?: number;
  value: number;
  /** MTF of the rig's lens and camera in the same direction, averaged along the edge; left out without a rig.
   */
  predicted?: number;
}

export interface EdgeFigures {
  /** The middle of the measured part of the edge. */
  x: number;
  y: number;
  /** Field and azimuth of its ideal place; null where the axis is not known. */
  field: number | null;
  azimuthDeg: number | null;
  /** The modulation measured. */
  direction: Modulation | null;
  /** Of the normal against the radius (tangential) or the perpendicular of it (sagittal). */
  offRadiusDeg: number | null;
  band: string;
  /** Across the edge, from dark to bright. */
  normalDeg: number;
  /** Of the edge against the nearest row or column of pixels, 0 to 45. */
  angleDeg: number;
  lengthPx: number;
  sfr: SfrValue[];
  /** The lowest frequency at which the response falls to a half; null where it does not up to 1 cycle a
   * pixel. */
  sfr50CyclesPerPixel: number | null;
  sfr50LpPerMm?: number | null;
  /** From 10 to 90 % of the step. */
  edgeWidthPx: number | null;
  /** Light on both sides. */
  dark: number;
  bright: number;
  /** RMS of the single pixels on the flat parts. */
  noise: number;
}

export interface DotFigures {
  ideal: [x: number, y: number];
  /** The disc's centroid. */
  found: [x: number, y: number];
  /** Where the rig's distortion, lateral colour and coma put the disc's centroid; left out without a rig. */
  expected?: [x: number, y: number];
  field: number;
  azimuthDeg: number;
  band: string;
}

/** Distortion of the discs at one field, their mean. */
export interface DistortionFigures {
  field: number;
  band: string;
  /** 100 (r' - a r) / r, a being the scale of the band's radial fit: changes of scale are no distortion. */
  percent: number;
  /** r' - r. */
  radialShiftPx: number;
  dots: number;
}

/** Place of a band's discs against those of the reference band, outward, their mean at one field. */
export interface LateralColourFigures {
  field: number;
  band: string;
  against: string;
  px: number;
  um: number;
  dots: number;
}

/** r' = scale r + cubicPerMm2 r^3 through the discs of a band. */
export interface RadialFigures {
  band: string;
  scale: number;
  cubicPerMm2: number;
  /** RMS distance of the discs from the fit. */
  rmsPx: number;
}

/** What could not be measured. */
export interface Skipped {
  what: 'edge' | 'dot';
  /** Its ideal place. */
  x: number;
  y: number;
  band: string;
  reason: string;
}

/** Flat regions in the order asked for, each in all bands. */
export interface FlatReport extends FlatFigures {
  region: PixelRect;
  band: string;
}

/** How the numbers of a picture stand for light. */
export type Encoding = 'linear' | 'srgb' | 'raw';

export interface MeasureReport {
  /** Name of the file; null for a picture from memory. */
  image: string | null;
  encoding: Encoding;
  pixels: [width: number, height: number];
  /** Kind of the chart; null without a truth. */
  chart: string | null;
  /** Edges of the truth, then of the regions, band by band. */
  edges: EdgeFigures[];
  dots: DotFigures[];
  distortion: DistortionFigures[];
  lateralColour: LateralColourFigures[];
  radialFit: RadialFigures[];
  flats: FlatReport[];
  /** Parts of the chart that could not be measured, with the reason. */
  skipped: Skipped[];
  warnings: string[];
}
