/** Curves behind the figures of `zones`: contrast against image height, frequency and focus; distortion against image height. */
import { bandShiftUm, distortionPercent } from './distortion.js';
import { type FieldPoint, fieldPoint, PLACES } from './field-points.js';
import { bestFocusUm } from './focus.js';
import { bandDiffractionMtf, bandLines, bandMtf, pixelMtf } from './otf.js';
import { pixelPitchMm, type Rig } from './rig.js';
import { defocusWaves } from './wavefront.js';
import type { BothDirections, ZonesReport } from './zones.js';

/** Values of a curve in both directions, in the order of its abscissae. */
export type CurvePair = BothDirections<number[]>;

export interface ZoneCurves {
  /** Contrast of lens and camera from the axis to the farthest corner of the sensor. */
  height: {
    /** Direction in which the curve runs, from +x toward +y. Only a tilted sensor makes it matter. */
    azimuthDeg: number;
    imageHeightMm: number[];
    /** For each band and each frequency of the report. */
    curves: { band: string; lpPerMm: number; mtf: CurvePair }[];
    /** Sensor shift of best focus at the middle frequency, for each band; null where the stop cuts it off. */
    bestFocus: { band: string; um: BothDirections<(number | null)[]> }[];
  };
  /** Contrast of lens and camera against frequency, for each zone of the report, in its order. */
  frequency: { lpPerMm: number[]; curves: { mtf: CurvePair; diffractionLimit: number[] }[] };
  /** Contrast of lens and camera at one frequency against sensor shift, for each zone of the report, in its order. */
  focus: { lpPerMm: number; shiftUm: number[]; curves: CurvePair[] };
  distortion: {
    imageHeightMm: number[];
    percent: number[];
    /** Shift of each band against the lens's own wavelength, + outward. */
    lateralUm: { band: string; um: number[] }[];
    grid: DistortionGrid;
  };
}

/** A grid over the frame, as it is and as distortion bends it, the bend multiplied by a factor so that it can be seen. */
export interface DistortionGrid {
  /** 1, 2, 5, 10, 20, ...: the largest that moves nothing by more than a step of the grid; 0 without distortion. */
  factor: number;
  /** Width and height of the frame. */
  frameMm: [width: number, height: number];
  /** Lines along x, then along y: points in mm from the middle of the frame, + right and + down. */
  lines: { ideal: [number, number][]; bent: [number, number][] }[];
}

const HEIGHTS = 49;
const FREQUENCIES = 65;
const SHIFTS = 49;

/** @param report what `zonesOf` made of the same rig */
export function zoneCurves(rig: Rig, report: ZonesReport): ZoneCurves {
  const { bands } = rig.camera;
  const frequencies = report.zones[0].mtf.map(({ lpPerMm }) => lpPerMm);
  const focusLpPerMm = frequencies.toSorted((a, b) => a - b)[(frequencies.length - 1) >> 1];
  const corner = farthestPlace(rig);
  const points = spread(0, 1, HEIGHTS).map((share) => ({ xMm: share * corner.xMm, yMm: share * corner.yMm }));
  const heights = points.map(({ xMm, yMm }) => Math.hypot(xMm, yMm));
  const zoneLines = report.zones.map((zone) => linesOfZone(rig, zone));
  return {
    height: {
      azimuthDeg: corner.azimuthDeg,
      imageHeightMm: heights,
      curves: bands.flatMap((band) => {
        const lines = points.map(({ xMm, yMm }) => bandLines(rig, xMm, yMm, band));
        return frequencies.map((lpPerMm) => ({
          band: band.name,
          lpPerMm,
          mtf: pair((direction) => lines.map((at) => cameraMtf(rig, at, lpPerMm, direction))),
        }));
      }),
      bestFocus: bands.map((band) => ({
        band: band.name,
        um: pair((direction) =>
          points.map(({ xMm, yMm }) =>
            bestFocusUm(bandLines(rig, xMm, yMm, band), rig.mount.fNumber, focusLpPerMm, direction),
          ),
        ),
      })),
    },
    frequency: frequencyCurves(rig, report, zoneLines, frequencies),
    focus: focusCurves(rig, report, zoneLines, focusLpPerMm),
    distortion: {
      imageHeightMm: heights,
      percent: heights.map((mm) => distortionPercent(rig.lens, mm / rig.lens.fullFieldMm)),
      lateralUm: bands.map((band) => ({
        band: band.name,
        um: heights.map((mm) => bandShiftUm(rig.lens, mm / rig.lens.fullFieldMm, band)),
      })),
      grid: distortionGrid(rig),
    },
  };
}

type Lines = ReturnType<typeof bandLines>;
type Zone = ZonesReport['zones'][number];

function frequencyCurves(
  rig: Rig,
  { zones }: ZonesReport,
  zoneLines: readonly Lines[],
  asked: readonly number[],
): ZoneCurves['frequency'] {
  const highest = Math.max(0.5 / pixelPitchMm(rig.camera), ...asked);
  const lpPerMm = spread(0, highest, FREQUENCIES);
  return {
    lpPerMm,
    curves: zones.map((zone, at) => ({
      mtf: pair((direction) => lpPerMm.map((f) => cameraMtf(rig, zoneLines[at], f, direction))),
      diffractionLimit: lpPerMm.map((f) => bandDiffractionMtf(bandOf(rig, zone), rig.mount.fNumber, f)),
    })),
  };
}

/** Over one range for all zones: all foci, the place of the sensor, and the fall to either side. */
function focusCurves(
  rig: Rig,
  { zones }: ZonesReport,
  zoneLines: readonly Lines[],
  lpPerMm: number,
): ZoneCurves['focus'] {
  const { fNumber } = rig.mount;
  const foci = zones.flatMap(({ bestFocusUm: um }) => [um.tangential ?? 0, um.sagittal ?? 0]);
  // geometrically, the contrast of a defocused spot of N delta is gone where the spot spans 1.22 periods
  const depthUm = (1.22e3 / lpPerMm) * fNumber;
  const shiftUm = spread(Math.min(0, ...foci) - depthUm, Math.max(0, ...foci) + depthUm, SHIFTS);
  const moved = (lines: Lines, um: number): Lines =>
    lines.map(({ nm, weight, wavefront }) => ({
      nm,
      weight,
      wavefront: { ...wavefront, w20: wavefront.w20 + defocusWaves(um, fNumber, nm / 1000) },
    }));
  return {
    lpPerMm,
    shiftUm,
    curves: zoneLines.map((lines) =>
      pair((direction) => shiftUm.map((um) => cameraMtf(rig, moved(lines, um), lpPerMm, direction))),
    ),
  };
}

const GRID_STEPS = 8;
const POINTS_PER_LINE = 33;
const LARGEST_FACTOR = 1000;

function distortionGrid({ lens, camera, mount }: Rig): DistortionGrid {
  const [width, height] = camera.pixels;
  const pitchMm = pixelPitchMm(camera);
  const frameMm: [number, number] = [width * pitchMm, height * pitchMm];
  const stepMm = Math.max(...frameMm) / GRID_STEPS;
  const axisMm = [0, 1].map((i) => (mount.axisPx[i] - (camera.pixels[i] - 1) / 2) * pitchMm);
  const shareAt = (x: number, y: number) =>
    distortionPercent(lens, Math.hypot(x - axisMm[0], y - axisMm[1]) / lens.fullFieldMm) / 100;
  const places = (sideMm: number, count: number) => spread(-sideMm / 2, sideMm / 2, count);
  const across = (sideMm: number) => Math.max(3, Math.round(sideMm / stepMm) + 1);
  const ideal = [
    ...places(frameMm[1], across(frameMm[1])).map((y) =>
      places(frameMm[0], POINTS_PER_LINE).map((x): [number, number] => [x, y]),
    ),
    ...places(frameMm[0], across(frameMm[0])).map((x) =>
      places(frameMm[1], POINTS_PER_LINE).map((y): [number, number] => [x, y]),
    ),
  ];
  const largestMm = Math.max(
    ...ideal.flat().map(([x, y]) => Math.abs(shareAt(x, y)) * Math.hypot(x - axisMm[0], y - axisMm[1])),
  );
  const factors = [1, 2, 5, 10, 20, 50, 100, 200, 500, LARGEST_FACTOR];
  const factor = largestMm === 0 ? 0 : (factors.findLast((f) => f * largestMm <= stepMm) ?? 1);
  const bend = ([x, y]: [number, number]): [number, number] => {
    const share = factor * shareAt(x, y);
    return [x + share * (x - axisMm[0]), y + share * (y - axisMm[1])];
  };
  return { factor, frameMm, lines: ideal.map((line) => ({ ideal: line, bent: line.map(bend) })) };
}

function linesOfZone(rig: Rig, zone: Zone): Lines {
  const { place, field, azimuthDeg } = zone;
  const { xMm, yMm } = fieldPoint(rig, place ?? { field, azimuthDeg });
  return bandLines(rig, xMm, yMm, bandOf(rig, zone));
}

function bandOf({ camera }: Rig, zone: Zone) {
  return camera.bands.find(({ name }) => name === zone.band)!;
}

/** MTF of lens and pixel together. */
function cameraMtf(
  { camera, mount }: Rig,
  lines: Lines,
  lpPerMm: number,
  direction: 'tangential' | 'sagittal',
): number {
  return bandMtf(lines, mount.fNumber, lpPerMm, direction) * pixelMtf(camera, lpPerMm);
}

function farthestPlace(rig: Rig): FieldPoint {
  const places = PLACES.map((place) => fieldPoint(rig, { place }));
  return places.reduce((far, point) => (point.field > far.field + 1e-9 ? point : far));
}

function pair<T>(of: (direction: 'tangential' | 'sagittal') => T): BothDirections<T> {
  return { tangential: of('tangential'), sagittal: of('sagittal') };
}

/** `count` numbers at equal steps, both ends among them. */
function spread(from: number, to: number, count: number): number[] {
  return Array.from({ length: count }, (_, i) => from + ((to - from) * i) / (count - 1));
}
