/** The same figure over apertures, focus positions and any other numbers of a rig, and where it is best. */
import { InputError } from '../errors.js';
import { nestedMaximum, type SearchRange } from '../numeric/nested-maximum.js';
import type { FieldPoint, FieldSpec } from '../optics/field-points.js';
import type { Rig } from '../optics/rig.js';
import { type LaidOut, layOut } from './evaluate.js';
import { marginAtLeast } from './figures.js';
import type { PixelRule, PixelRuleOf } from './rules.js';
import { type Scorer, type SweepFigure, scorersOf, standInScorers } from './scorers.js';
import { type Trials, tryAt } from './verdict.js';

/** A number of the rig and the values to look at. */
export interface SweepAxis {
  /** Its path in the rig file, such as `mount.f_number`. */
  key: string;
  /** In rising order. */
  values: readonly number[];
}

export interface SweepPlan {
  axes: readonly SweepAxis[];
  /** The rig with these values, one an axis, the light of its stop included. */
  rigAt(values: readonly number[]): Rig;
  figure: SweepFigure;
  fields: readonly FieldSpec[];
}

/** The figure at one place of the sweep. */
export interface SweepSample {
  /** One an axis. */
  values: number[];
  /** The least margin of the task, or what stands for it (see `Scorer`); null where the rig cannot be computed there. */
  margin: number | null;
  /** Always true of an MTF or an RMS. */
  met: boolean;
  /** The rule with the least margin, the value there, and the zone. */
  rule?: PixelRule['kind'];
  value?: number;
  zone?: number;
  /** The least margin in each zone, trials not counted. */
  zones?: number[];
  /** The rate of `decode` in the zone where it is read worst. Left out: not tried, since another rule is not met. */
  decode?: { value: number; zone: number; met: boolean };
  /** Why it cannot be computed. */
  refused?: string;
}

export interface SweepResult {
  samples: SweepSample[];
  /** The best place between the samples. */
  best: SweepSample;
  /** The best of the samples themselves. */
  bestSampled: SweepSample;
  /** The sampled zones, as on the rig that the sweep begins with. */
  points: FieldPoint[];
}

/** A sample with what it is compared by where verdict and margin do not tell. */
interface RankedSample extends SweepSample {
  rank: number;
}

/** Look at every combination of the axes' values and search on from the best.
 * @param onSample called after each sample
 * @throws {InputError} where no combination can be computed: the first refusal
 */
export async function sweepTask(
  plan: SweepPlan,
  trials: Trials,
  onSample: (done: number, total: number) => void,
): Promise<SweepResult> {
  const places = combinations(plan.axes.map(({ values }) => values));
  const samples: SweepSample[] = [];
  let refusal: InputError | undefined;
  let bestSampled: RankedSample | undefined;
  for (const place of places) {
    try {
      const sample = await sampleAt(plan, place, trials);
      samples.push(withoutRank(sample));
      if (bestSampled === undefined || isBetter(sample, bestSampled)) bestSampled = sample;
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      refusal ??= error;
      samples.push({ values: place, margin: null, met: false, refused: error.message });
    }
    onSample(samples.length, places.length);
  }
  if (bestSampled === undefined) throw refusal!;
  const found = search(plan, bestSampled);
  const refined = found === undefined ? bestSampled : await sampleAt(plan, found, trials);
  const best = isBetter(refined, bestSampled) ? refined : bestSampled; // what the search saw roughly must hold in full
  const { points } = layOutAt(plan, best.values);
  return { samples, best: withoutRank(best), bestSampled: withoutRank(bestSampled), points };
}

function withoutRank({ rank: _rank, ...sample }: RankedSample): SweepSample {
  return sample;
}

/** All combinations; the last axis runs fastest. */
function combinations(lists: readonly (readonly number[])[]): number[][] {
  return lists.reduce<number[][]>(
    (all, list) => all.flatMap((place) => list.map((value) => [...place, value])),
    [[]],
  );
}

function layOutAt({ rigAt, figure, fields }: SweepPlan, values: readonly number[]): LaidOut {
  return layOut(rigAt(values), figure.kind === 'margin' ? figure.rules : [], fields);
}

/** The figure in full at one place. Where the closed-form rules are not met, no symbols are tried. */
async function sampleAt(plan: SweepPlan, values: readonly number[], trials: Trials): Promise<RankedSample> {
  const laidOut = layOutAt(plan, values);
  const isTask = plan.figure.kind === 'margin';
  const optics = leastOf(laidOut, scorersOf(plan.figure, laidOut.rules));
  const rank = optics?.margin ?? standInMargin(laidOut);
  let sample: RankedSample = { values: [...values], rank, met: true, margin: Number.POSITIVE_INFINITY };
  if (optics !== undefined) sample = { ...sample, ...optics, met: !isTask || optics.margin >= 0 };
  if (!sample.met) return sample;
  for (const rule of laidOut.rules.filter((one) => one.kind === 'decode')) {
    const decode = await worstRate(laidOut, rule, trials);
    sample = { ...sample, decode };
    if (decode.met && optics !== undefined) continue; // the margin of a rate ends at 1, where it says nothing any more
    const { value, zone, met } = decode;
    const margin = marginAtLeast(value, rule.successAtLeast);
    if (margin < sample.margin!) sample = { ...sample, margin, met, rule: 'decode', value, zone };
    if (!met) return { ...sample, rank: Math.min(rank, standInMargin(laidOut)) };
  }
  return sample;
}

/** The least margin of some looks over the zones, where it is, and that of each zone; undefined without looks. */
function leastOf({ bench, points }: LaidOut, scorers: readonly Scorer[]) {
  const zones = points.map(() => Number.POSITIVE_INFINITY);
  let least: { margin: number; rule?: PixelRule['kind']; value: number; zone: number } | undefined;
  for (const { rule, look } of scorers)
    for (const [zone, point] of points.entries()) {
      const { margin, value } = look(bench, point, 'full');
      zones[zone] = Math.min(zones[zone], margin);
      if (least === undefined || margin < least.margin) least = { margin, rule, value, zone };
    }
  return least === undefined ? undefined : { ...least, zones };
}

function standInMargin(laidOut: LaidOut): number {
  return leastOf(laidOut, standInScorers(laidOut.rules))?.margin ?? Number.POSITIVE_INFINITY;
}

/** The lowest rate over the zones, from the last zone on; the first that is not met ends it. */
async function worstRate(
  { bench, points }: LaidOut,
  rule: PixelRuleOf<'decode'>,
  trials: Trials,
): Promise<{ value: number; zone: number; met: boolean }> {
  let worst = { value: Number.POSITIVE_INFINITY, zone: 0, met: true };
  for (let zone = points.length - 1; zone >= 0 && worst.met; zone--) {
    const { value, met } = await tryAt(bench.rig, rule, points[zone], trials);
    if (value < worst.value) worst = { value, zone, met };
  }
  return worst;
}

/** What is met before what is not; then the larger margin, as long as the task is not met; then the larger rank. */
function isBetter(one: RankedSample, than: RankedSample): boolean {
  if (one.met !== than.met) return one.met;
  if (!one.met && one.margin !== than.margin) return one.margin! > than.margin!;
  return one.rank > than.rank;
}

/** Search between the samples for the largest least margin of the closed-form rules.
 * @returns undefined where no axis has more than one value */
function search(plan: SweepPlan, start: SweepSample): number[] | undefined {
  const moving = plan.axes
    .map(({ values }, at) => ({ values, at }))
    .filter(({ values }) => values.length > 1);
  if (moving.length === 0) return undefined;
  const scale = moving.map(({ at }) => scaleOf(plan.axes[at].key));
  const full = (place: readonly number[]) => {
    const values = [...start.values];
    for (const [i, { at }] of moving.entries()) values[at] = scale[i].value(place[i]);
    return values;
  };
  const ranges = moving.map(({ values }, i): SearchRange => {
    const samples = values.map(scale[i].position);
    const spacing = (samples[samples.length - 1] - samples[0]) / (samples.length - 1);
    return { samples, tolerance: 0.02 * spacing };
  });
  // where all hangs on symbols, the edges of their modules show the way
  const looks = ({ rules }: LaidOut) => [
    ...scorersOf(plan.figure, rules),
    ...(start.rule === 'decode' ? standInScorers(rules) : []),
  ];
  const height = (place: readonly number[], floor: number) => roughMargin(plan, full(place), looks, floor);
  const from = moving.map(({ at }, i) => scale[i].position(start.values[at]));
  return full(nestedMaximum(height, ranges, from).place);
}

/** f-numbers are searched in stops, all others as they are. */
function scaleOf(key: string): { position(value: number): number; value(position: number): number } {
  return key.endsWith('f_number')
    ? { position: (value) => 2 * Math.log2(value), value: (position) => 2 ** (position / 2) }
    : { position: (value) => value, value: (position) => position };
}

function roughMargin(
  plan: SweepPlan,
  values: readonly number[],
  looks: (laidOut: LaidOut) => Scorer[],
  floor: number,
): number {
  let laidOut: LaidOut;
  try {
    laidOut = layOutAt(plan, values);
  } catch (error) {
    if (error instanceof InputError) return Number.NEGATIVE_INFINITY;
    throw error;
  }
  const { bench, points } = laidOut;
  const scorers = looks(laidOut);
  let least = Number.POSITIVE_INFINITY;
  for (const point of points.toReversed()) // the farthest zone comes last, and is the likeliest to end it
    for (const { look } of scorers) {
      least = Math.min(least, look(bench, point, 'rough').margin);
      if (least <= floor) return least;
    }
  return least;
}
