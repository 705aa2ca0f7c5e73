/** The part of a measurement that reports show. */

export interface EdgeShown {
  x: number;
  y: number;
  field: number | null;
  direction: string | null;
  band: string;
  normalDeg: number;
  angleDeg: number;
  lengthPx: number;
  sfr: readonly { cyclesPerPixel: number; lpPerMm?: number; value: number; predicted?: number }[];
  sfr50CyclesPerPixel: number | null;
  edgeWidthPx: number | null;
  dark: number;
  bright: number;
  noise: number;
}

export interface DotShown {
  ideal: readonly [x: number, y: number];
  found: readonly [x: number, y: number];
  expected?: readonly [x: number, y: number];
  field: number;
  azimuthDeg: number;
  band: string;
}

export interface MeasurementShown {
  image: string | null;
  encoding: string;
  pixels: readonly [width: number, height: number];
  chart: string | null;
  edges: readonly EdgeShown[];
  dots: readonly DotShown[];
  distortion: readonly {
    field: number;
    band: string;
    percent: number;
    radialShiftPx: number;
    dots: number;
  }[];
  lateralColour: readonly { field: number; band: string; against: string; px: number; um: number }[];
  radialFit: readonly { band: string; scale: number; rmsPx: number }[];
  flats: readonly {
    region: { x: number; y: number; width: number; height: number };
    band: string;
    mean: number;
    noise: number;
    snr: number | null;
    snrDb: number | null;
  }[];
}
