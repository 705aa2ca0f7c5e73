/** What a chart holds and where: the file beside the scene that a measurement is judged by.
 *
 * Places are ideal: where the light would land without distortion, in sensor pixels, x to the right, y down,
 * the middle of pixel (0, 0) at (0, 0). Angles are in degrees from +x toward +y. `field` is h, the distance
 * from the optical axis over the lens's full field; `azimuthDeg` the direction of the field point from the
 * axis. In the file the keys are in snake_case (`azimuth_deg`).
 */

export const CHART_KINDS = ['edges', 'dots', 'star', 'bars', 'checker'] as const;

export type ChartKind = (typeof CHART_KINDS)[number];

/** The modulation that an element measures: along the radius (tangential) or across it (sagittal). */
export type Modulation = 'tangential' | 'sagittal';

/** A place in the field. */
export interface ChartPlace {
  x: number;
  y: number;
  field: number;
  azimuthDeg: number;
}

/** A straight edge; x and y are its middle. */
export interface EdgeTruth extends ChartPlace {
  /** Counts the squares; four edges belong to one. */
  patch: number;
  /** Ends of the edge. */
  from: [x: number, y: number];
  to: [x: number, y: number];
  direction: Modulation;
  /** Across the edge, from dark to bright: the direction of the modulation that it measures. */
  normalDeg: number;
  /** Of the normal against the radius (tangential) or the perpendicular of it (sagittal), through the middle
   * of the edge; -45 to 45. */
  offRadiusDeg: number;
  /** Of the edge against the nearest row or column of pixels, 0 to 45. */
  angleDeg: number;
  /** Nothing else of the chart lies so near to the edge on either side. */
  roomPx: number;
}

/** A dark disc. */
export interface DotTruth extends ChartPlace {
  radiusPx: number;
}

/** A dark sector of a star; x and y are the middle of the star. */
export interface SectorTruth extends ChartPlace {
  star: number;
  fromDeg: number;
  toDeg: number;
  innerPx: number;
  outerPx: number;
}

/** A dark bar; x and y are its middle. */
export interface BarTruth extends ChartPlace {
  group: number;
  cyclesPerPixel: number;
  direction: Modulation;
  /** The way that the bar runs: across the modulation. */
  runsDeg: number;
  lengthPx: number;
  widthPx: number;
}

/** A point where four cells meet. */
export type CornerTruth = ChartPlace;

export interface ChartTruth {
  foreglass: string;
  chart: ChartKind;
  /** Name of the rig's lens. */
  rig: string;
  /** The sensor that the chart is drawn for. */
  pixels: [width: number, height: number];
  pixelPitchUm: number;
  axisPx: [x: number, y: number];
  fullFieldMm: number;
  /** Samples of the scene a pixel, on each side; each is the mean over its own square. */
  oversample: number;
  /** Linear light, 1 being full scale. */
  levels: { white: number; dark: number };
  edges?: EdgeTruth[];
  dots?: DotTruth[];
  sectors?: SectorTruth[];
  bars?: BarTruth[];
  corners?: CornerTruth[];
  /** Side of a checker's cells and the way that its rows run. */
  cell?: { sizePx: number; angleDeg: number };
}
