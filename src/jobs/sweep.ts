/** `sweep`: the same figure over apertures, focus positions and other numbers of a rig, and where it is best; how much of each coefficient a
 * task allows; how deep its object may lie. */
import { rigWith } from '../dataset/rig-values.js';
import { InputError } from '../errors.js';
import { parseRig } from '../files/load-rig.js';
import type { Task } from '../files/load-task.js';
import { rigData } from '../files/result-data.js';
import { checkRigKey } from '../files/rig-keys.js';
import type { RigFile } from '../files/schemas/rig.js';
import { checkSeed } from '../numeric/random.js';
import { defaultFields, type FieldPoint, type FieldSpec } from '../optics/field-points.js';
import type { Rig } from '../optics/rig.js';
import { type CoefficientBudget, coefficientBudgets } from '../tasks/budget.js';
import { DecodeCrew } from '../tasks/decode/crew.js';
import { type DepthRange, depthOf } from '../tasks/depth.js';
import { layOut } from '../tasks/evaluate.js';
import { withStop } from '../tasks/lens-parts.js';
import { MetCheck } from '../tasks/met-check.js';
import type { SweepFigure } from '../tasks/scorers.js';
import { type SweepAxis, type SweepPlan, type SweepSample, sweepTask } from '../tasks/sweep.js';
import type { Trials } from '../tasks/verdict.js';
import { taskWarnings } from '../tasks/warnings.js';
import { checkedThreads } from './judge.js';

export type { CoefficientBudget } from '../tasks/budget.js';
export type { DepthRange } from '../tasks/depth.js';
export type { SweepAxis, SweepSample } from '../tasks/sweep.js';

export interface SweepOptions {
  /** A rig, or a rig file with its parts in place as `loadRigFile` reads it: to vary a key that only the file knows
   * (`lens.distortion_percent`, a number of a prescription). */
  rig: Rig | RigFile;
  /** Sweep the least margin of this task. */
  task?: Task;
  /** Or sweep an MTF: of lens and camera at this frequency, worst direction, worst band, lowest over the zones. */
  lpPerMm?: number;
  /** Or sweep the RMS of the wavefront at the lens's own wavelength, piston and tilt taken out, largest over the zones. */
  wavefrontRms?: boolean;
  /** Zones of MTF and RMS; those of a task are its own. Default: axis, top, right, top_right, or all nine places where the rig is not symmetric. */
  fields?: readonly FieldSpec[];
  fNumbers?: readonly number[];
  sensorShiftsUm?: readonly number[];
  /** Values of other numbers of the rig, by path. */
  vary?: readonly { key: string; values: readonly number[] }[];
  /** Leave the electrons of a white scene as the rig states them at every stop: light or exposure make up for it. Default: they go with
   * (N0 / N)^2 from those at the rig's own stop N0, at wider stops up to a full well. */
  keepLight?: boolean;
  /** How much of each coefficient the task allows, at the best place of the sweep; without axes, on the rig as it stands. */
  budget?: boolean;
  /** From how near to how far away the object may lie, there, too. */
  depth?: boolean;
  /** Draws the symbols of `decode`. Default: 1. */
  seed?: number;
  /** Threads that try symbols. Default: one a core. */
  threads?: number;
  signal?: AbortSignal;
  onProgress?: (progress: { stage: string; done: number; total: number }) => void;
}

export interface SweepReport {
  /** Name of the lens. */
  rig: string;
  model: 'third-order';
  /** What the samples' `figure` is. */
  figure: { kind: 'margin'; task: string } | { kind: 'mtf'; lpPerMm: number } | { kind: 'wavefront_rms' };
  /** The stop and the electrons of a white scene from which the light of other stops is reckoned; null: it is kept, or there is no sensor. */
  lightFrom: { fNumber: number; whiteE: number } | null;
  /** The zones looked at. */
  zones: { field: number; azimuthDeg: number; place: string | null }[];
  axes: SweepAxis[];
  samples: SweptFigure[];
  /** The best place found between the samples, and the best sample; null without axes. */
  best: SweptFigure | null;
  bestSampled: SweptFigure | null;
  budget?: CoefficientBudget[];
  /** null: the task is not met there. */
  depth?: DepthRange | null;
  /** Whether the best place meets the task; without axes, whether the rig does as it stands. null without a task. */
  met: boolean | null;
  warnings: string[];
}

/** The figure at one place of a sweep. */
export interface SweptFigure {
  /** One value an axis, in their order. */
  values: number[];
  /** The least margin of the task, the lowest MTF or the largest RMS; null where the rig cannot be computed. */
  figure: number | null;
  /** Of a task. */
  met?: boolean;
  /** The rule and the zone (counted from 0) that it comes from. */
  rule?: string;
  zone?: number;
  /** The figure in each zone; of a task, of its rules without trials. */
  zones?: number[];
  /** The lowest rate of `decode`. Left out: not tried, since another rule is not met. */
  decode?: { value: number; zone: number; met: boolean };
  /** Electrons of a white scene at this stop. */
  whiteE?: number;
  /** Why it cannot be computed. */
  refused?: string;
}

/** Sweep a rig.
 * @throws {InputError} nothing to sweep, keys that are no numbers of a rig, values that make no rig, a stop below the lens's, a task that the rig
 *   cannot answer, a place that can nowhere be computed
 */
export async function sweep(options: SweepOptions): Promise<SweepReport> {
  const { task, keepLight = false, seed = 1, signal, onProgress } = options;
  refuseWithoutPurpose(options);
  checkSeed(seed);
  const file = fileOf(options.rig);
  const rig = parseRig(file);
  const axes = axesOf(options);
  refuseWideStops(rig, axes);
  const figure = figureOf(options);
  const rules = task?.rules ?? [];
  const fields = (task === undefined ? options.fields : task.zones) ?? defaultFields(rig);
  const laidOut = layOut(rig, rules, fields);
  const crew = new DecodeCrew(checkedThreads(options.threads));
  const trials: Trials = { crew, seed, signal };
  const progress = (stage: string) => (done: number, total: number) => onProgress?.({ stage, done, total });
  try {
    const rigAt = rigMaker(file, axes, keepLight);
    refuseValues(axes, rigAt);
    const plan: SweepPlan = { axes, rigAt, figure, fields };
    const swept = axes.length > 0 ? await sweepTask(plan, trials, progress('sweep')) : undefined;
    const shown = (sample: SweepSample) => sweptFigure(sample, rigAt, figure);
    const check = new MetCheck(rules, fields, trials);
    const report: SweepReport = {
      rig: rig.lens.name,
      model: 'third-order',
      figure: figure.kind === 'margin' ? { kind: 'margin', task: task?.name ?? '' } : figure,
      lightFrom: lightFrom(rig, axes, keepLight),
      zones: (swept?.points ?? laidOut.points).map(zoneOf),
      axes,
      samples: swept?.samples.map(shown) ?? [],
      best: swept === undefined ? null : shown(swept.best),
      bestSampled: swept === undefined ? null : shown(swept.bestSampled),
      met: null,
      warnings: taskWarnings(laidOut),
    };
    const there = swept === undefined ? rig : rigAt(swept.best.values);
    if (options.budget) report.budget = await coefficientBudgets(there, check, progress('budget'));
    if (options.depth) report.depth = await depthOf(there, check);
    if (task !== undefined) report.met = swept?.best.met ?? (await check.isMet(rig));
    return report;
  } finally {
    await crew.close();
  }
}

const STOP = 'mount.f_number';
const SHIFT = 'mount.sensor_shift_um';

function figureOf({ task, lpPerMm }: SweepOptions): SweepFigure {
  if (task !== undefined) return { kind: 'margin', rules: task.rules };
  return lpPerMm === undefined ? { kind: 'wavefront_rms' } : { kind: 'mtf', lpPerMm };
}

function refuseWithoutPurpose(options: SweepOptions): void {
  const { task, lpPerMm, wavefrontRms = false, fields, budget, depth, ...axes } = options;
  const refuse = (message: string, advice: string) => {
    throw new InputError({ message, advice });
  };
  if ([task !== undefined, lpPerMm !== undefined, wavefrontRms].filter(Boolean).length !== 1)
    refuse(
      'a sweep looks at a task, at an MTF or at the RMS of the wavefront, one of the three',
      'Give --task FILE, --lp-per-mm F or --wavefront-rms.',
    );
  if (lpPerMm !== undefined && !(lpPerMm > 0 && Number.isFinite(lpPerMm)))
    refuse(`${lpPerMm} is no frequency in line pairs per mm`, 'Give a number above 0.');
  if (task === undefined && (budget || depth))
    refuse('a budget and a depth say where a task ends to be met', 'Give --task FILE.');
  if (task !== undefined && fields !== undefined)
    refuse('a task has zones of its own', 'Leave --fields out, or name the zones in the task.');
  const count = (axes.fNumbers?.length ?? 0) + (axes.sensorShiftsUm?.length ?? 0) + (axes.vary?.length ?? 0);
  if (count === 0 && !budget && !depth)
    refuse('nothing is swept', 'Give --f-number, --sensor-shift or --vary, or ask for --budget or --depth.');
}

/** The axes in the order stop, shift, others; values in rising order. */
function axesOf({ fNumbers, sensorShiftsUm, vary = [] }: SweepOptions): SweepAxis[] {
  const axes = [
    ...(fNumbers === undefined ? [] : [{ key: STOP, values: fNumbers }]),
    ...(sensorShiftsUm === undefined ? [] : [{ key: SHIFT, values: sensorShiftsUm }]),
    ...vary,
  ];
  for (const [at, { key, values }] of axes.entries()) {
    checkRigKey(key, '--vary');
    const fault = (message: string, found?: string) => new InputError({ key, message, found });
    if (values.length === 0) throw fault('has no values');
    if (values.some((value) => !Number.isFinite(value)))
      throw fault('has a value that is no number', `${values}`);
    if (new Set(values).size < values.length) throw fault('has a value twice', `${values}`);
    if (axes.findIndex((axis) => axis.key === key) < at) throw fault('is swept twice');
  }
  return axes.map(({ key, values }) => ({ key, values: values.toSorted((a, b) => a - b) }));
}

function refuseWideStops({ lens }: Rig, axes: readonly SweepAxis[]): void {
  const stops = axes.find(({ key }) => key === STOP)?.values ?? [];
  const isLensSwept = axes.some(({ key }) => key === 'lens.f_number');
  if (isLensSwept || stops.every((stop) => stop >= lens.fNumber)) return;
  throw new InputError({
    key: '--f-number',
    message: "is below the lens's f-number, so the coefficients do not hold",
    found: String(stops[0]),
    allowed: `${lens.fNumber} (lens.f_number) or more`,
  });
}

function fileOf(rig: Rig | RigFile): RigFile {
  const isOfOptics = 'axisPx' in Object(rig.mount); // an object of the caller may leave the mount out
  return (isOfOptics ? rigData(rig as Rig) : rig) as RigFile;
}

/** The rig at a place of the sweep. */
function rigMaker(
  file: RigFile,
  axes: readonly SweepAxis[],
  keepLight: boolean,
): (values: readonly number[]) => Rig {
  const others = axes.map(({ key }, at) => ({ key, at })).filter(({ key }) => key !== STOP && key !== SHIFT);
  const stopAt = axes.findIndex(({ key }) => key === STOP);
  const shiftAt = axes.findIndex(({ key }) => key === SHIFT);
  const base = { path: 'rig', file };
  let last: { values: string; rig: Rig } | undefined; // the search changes stop and focus more often than the rest
  return (values) => {
    const varied = others.map(({ key, at }) => ({ key, value: values[at] }));
    const key = JSON.stringify(varied);
    if (last?.values !== key) last = { values: key, rig: rigWith(base, varied) };
    let { rig } = last;
    if (stopAt >= 0) {
      const fNumber = values[stopAt];
      rig = keepLight ? { ...rig, mount: { ...rig.mount, fNumber } } : withStop(rig, fNumber);
    }
    if (shiftAt >= 0) rig = { ...rig, mount: { ...rig.mount, sensorShiftUm: values[shiftAt] } };
    return rig;
  };
}

/** Values that make no rig are faults of the caller, not places that cannot be computed. */
function refuseValues(axes: readonly SweepAxis[], rigAt: (values: readonly number[]) => Rig): void {
  const first = axes.map(({ values }) => values[0]);
  for (const [at, { values }] of axes.entries()) for (const value of values) rigAt(first.with(at, value));
}

function lightFrom(rig: Rig, axes: readonly SweepAxis[], keepLight: boolean): SweepReport['lightFrom'] {
  const { sensor } = rig.camera;
  if (keepLight || sensor === undefined || !axes.some(({ key }) => key === STOP)) return null;
  return { fNumber: rig.mount.fNumber, whiteE: sensor.whiteE };
}

function zoneOf({ field, azimuthDeg, place }: FieldPoint) {
  return { field, azimuthDeg, place };
}

/** What stands for a margin (see `Scorer`), as the figure that it is. */
function sweptFigure(
  { values, margin, met, rule, zone, zones, decode, refused }: SweepSample,
  rigAt: (values: readonly number[]) => Rig,
  { kind }: SweepFigure,
): SweptFigure {
  if (margin === null) return { values, figure: null, refused };
  const whiteE = rigAt(values).camera.sensor?.whiteE;
  if (kind === 'margin') return { values, figure: margin, met, rule, zone, zones, decode, whiteE };
  const sign = kind === 'mtf' ? 1 : -1;
  return { values, figure: sign * margin, zone, zones: zones?.map((one) => sign * one), whiteE };
}
