/** All discs of a chart in every band, and what they say of distortion and lateral colour. */
import type { ChartTruth, DotTruth } from '../charts/truth.js';
import { InputError } from '../errors.js';
import type { Band, Rig } from '../optics/rig.js';
import { type DotGuess, measureDot } from './dot.js';
import type {
  DistortionFigures,
  DotFigures,
  LateralColourFigures,
  RadialFigures,
  Skipped,
} from './figures.js';
import { type OpticalFrame, opticalFrame } from './optical-frame.js';
import type { Plane } from './plane.js';
import { dotPlace, radialMap } from './predict.js';
import { cubicMap, fitRadialMap, type RadialPair } from './radial-fit.js';

export interface BandPlane {
  plane: Plane;
  name: string;
  /** The rig's own band. */
  band?: Band;
}

export interface DotsFound {
  dots: DotFigures[];
  distortion: DistortionFigures[];
  lateralColour: LateralColourFigures[];
  radialFit: RadialFigures[];
  skipped: Skipped[];
}

/** Measure the discs of a chart. Where to look, the rig says; without it the discs found so far, from the
 * axis outward. */
export function chartDots(bands: readonly BandPlane[], truth: ChartTruth, rig?: Rig): DotsFound {
  const frame = opticalFrame(undefined, truth)!;
  const roomPx = roomOf(truth.dots ?? []);
  const skipped: Skipped[] = [];
  const dots = bands.flatMap((band) => {
    const found = bandDots(band, truth, rig, roomPx, frame);
    skipped.push(...found.skipped);
    return found.dots;
  });
  const named = bands.map(({ name }) => name).filter((name) => dots.some(({ band }) => band === name));
  const fits = named.map((name) => radialFigures(name, dots, frame));
  return {
    dots,
    distortion: fits.flatMap((fit) => distortionOf(fit, dots, frame)),
    lateralColour: lateralColourOf(named, dots, frame),
    radialFit: fits,
    skipped,
  };
}

/** Half of the way to the nearest neighbour, or a few radii. */
function roomOf(dots: readonly DotTruth[]): number {
  let nearest = Number.POSITIVE_INFINITY;
  for (const [at, a] of dots.entries())
    for (let i = 0; i < at; i++) nearest = Math.min(nearest, Math.hypot(a.x - dots[i].x, a.y - dots[i].y));
  const largest = Math.max(0, ...dots.map(({ radiusPx }) => radiusPx));
  return Math.min(nearest / 2 - 1, 3 * largest + 8);
}

function bandDots(
  { plane, name, band }: BandPlane,
  truth: ChartTruth,
  rig: Rig | undefined,
  roomPx: number,
  frame: OpticalFrame,
): { dots: DotFigures[]; skipped: Skipped[] } {
  const found = new Map<DotTruth, DotFigures>();
  const skipped = new Map<DotTruth, Skipped>();
  const pairs: RadialPair[] = [];
  const all = truth.dots ?? [];
  for (const dot of all.toSorted((a, b) => a.field - b.field)) {
    const { x, y, radiusPx, field, azimuthDeg } = dot;
    const expected = rig && band && dotPlace(rig, band, x, y, radiusPx);
    const [nearX, nearY] = expected ?? radialMap(frame.axisPx, frame.pitchMm, cubicMap(pairs)).landed(x, y);
    const guess: DotGuess = { x: nearX, y: nearY, radiusPx, roomPx };
    try {
      const place = measureDot(plane, guess);
      const figures: DotFigures = { ideal: [x, y], found: place, expected, field, azimuthDeg, band: name };
      found.set(dot, figures);
      pairs.push(radialPair(figures, frame));
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      skipped.set(dot, { what: 'dot', x, y, band: name, reason: error.message });
    }
  }
  return {
    dots: all.map((dot) => found.get(dot)).filter((dot) => dot !== undefined),
    skipped: all.map((dot) => skipped.get(dot)).filter((dot) => dot !== undefined),
  };
}

/** Distances from the axis, the found one along the radius of the ideal place. On the axis itself both are 0.
 */
function radialPair({ ideal, found }: DotFigures, { axisPx, pitchMm }: OpticalFrame): RadialPair {
  const [dx, dy] = [ideal[0] - axisPx[0], ideal[1] - axisPx[1]];
  const radius = Math.hypot(dx, dy);
  if (radius < 1e-6) return { idealMm: 0, foundMm: 0 };
  const along = ((found[0] - axisPx[0]) * dx + (found[1] - axisPx[1]) * dy) / radius;
  return { idealMm: radius * pitchMm, foundMm: along * pitchMm };
}

function radialFigures(band: string, dots: readonly DotFigures[], frame: OpticalFrame): RadialFigures {
  const own = dots.filter((dot) => dot.band === band);
  const map = fitRadialMap(own.map((dot) => radialPair(dot, frame)));
  const place = radialMap(frame.axisPx, frame.pitchMm, map);
  const squares = own.reduce((sum, { ideal, found }) => {
    const [x, y] = place.landed(...ideal);
    return sum + (found[0] - x) ** 2 + (found[1] - y) ** 2;
  }, 0);
  return { band, scale: map.a, cubicPerMm2: map.c, rmsPx: Math.sqrt(squares / own.length) };
}

function distortionOf(
  { band, scale }: RadialFigures,
  dots: readonly DotFigures[],
  frame: OpticalFrame,
): DistortionFigures[] {
  return rings(dots.filter((dot) => dot.band === band)).map(({ field, members }) => {
    const pairs = members.map((dot) => radialPair(dot, frame));
    return {
      field,
      band,
      percent: mean(pairs.map(({ idealMm, foundMm }) => (100 * (foundMm - scale * idealMm)) / idealMm)),
      radialShiftPx: mean(pairs.map(({ idealMm, foundMm }) => (foundMm - idealMm) / frame.pitchMm)),
      dots: members.length,
    };
  });
}

/** The band that the others are compared with: green, for want of it the first. */
export function referenceBand(names: readonly string[]): string | undefined {
  return names.includes('green') ? 'green' : names[0];
}

function lateralColourOf(
  names: readonly string[],
  dots: readonly DotFigures[],
  frame: OpticalFrame,
): LateralColourFigures[] {
  const against = referenceBand(names);
  const key = ({ ideal }: DotFigures) => ideal.join();
  const reference = new Map(dots.filter(({ band }) => band === against).map((dot) => [key(dot), dot]));
  return names
    .filter((band) => band !== against)
    .flatMap((band) => {
      const own = dots.filter((dot) => dot.band === band && reference.has(key(dot)));
      return rings(own).map(({ field, members }) => {
        const px = mean(
          members.map(
            (dot) =>
              (radialPair(dot, frame).foundMm - radialPair(reference.get(key(dot))!, frame).foundMm) /
              frame.pitchMm,
          ),
        );
        return { field, band, against: against!, px, um: 1000 * px * frame.pitchMm, dots: members.length };
      });
    });
}

/** Discs of the same field, without the one on the axis, which has no radius to move along. */
function rings(dots: readonly DotFigures[]): { field: number; members: DotFigures[] }[] {
  const byField = new Map<number, DotFigures[]>();
  for (const dot of dots) {
    const field = Math.round(dot.field * 1e6) / 1e6;
    if (field > 0) byField.set(field, [...(byField.get(field) ?? []), dot]);
  }
  return [...byField].sort(([a], [b]) => a - b).map(([field, members]) => ({ field, members }));
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
