/** The verdict on each rule in each zone. */
import type { FieldPoint } from '../optics/field-points.js';
import type { DecodeCrew } from './decode/crew.js';
import type { Rate } from './decode/rate.js';
import { isOpticsRule, judgeRule, type LaidOut, type RuleFigure } from './evaluate.js';
import { marginAtLeast } from './figures.js';
import type { PixelRule, PixelRuleOf } from './rules.js';

/** A rule at a field point. */
export interface ZoneVerdict {
  field: number;
  azimuthDeg: number;
  place: string | null;
  imageHeightMm: number;
  value: number;
  limit: number;
  /** (value - limit) / limit, its sign such that more is better. */
  margin: number;
  met: boolean;
  /** The band that counts: the worst one. Left out for symbols, which are read in grey. */
  band?: string;
  /** The figure along the radius and across it, where it has a direction, and the direction that counts. */
  tangential?: number;
  sagittal?: number;
  directionDeg?: number;
  /** Of `decode`: tries made, how many were read rightly and how many as something else, and where the rate lies with 95 % confidence. */
  trials?: number;
  read?: number;
  misread?: number;
  interval?: [low: number, high: number];
}

/** A rule over all zones. */
export interface RuleVerdict {
  rule: PixelRule['kind'];
  /** The unit of value and limit; null where they are shares or ratios. */
  unit: 'px' | 'mm' | null;
  /** What is asked, in pixels and line pairs per mm of this sensor. */
  asked: { lpPerMm?: number; featurePx?: number; modulePx?: number; symbol?: string; modelOrder?: number };
  met: boolean;
  /** The least over the zones. */
  margin: number;
  zones: ZoneVerdict[];
}

/** What trials need beside the optics. */
export interface Trials {
  crew: DecodeCrew;
  seed: number;
  signal?: AbortSignal;
  /** Called after each place at which symbols were tried. */
  onPlace?: () => void;
}

/** All rules of a task in all its zones, in the order of the task. */
export async function verdicts({ bench, rules, points }: LaidOut, trials: Trials): Promise<RuleVerdict[]> {
  const all: RuleVerdict[] = [];
  for (const rule of rules) {
    const zones: ZoneVerdict[] = [];
    for (const point of points) {
      const figure = isOpticsRule(rule)
        ? judgeRule(bench, rule, point)
        : decodeFigure(await tryAt(bench.rig, rule, point, trials), rule);
      zones.push({ ...placeOf(point), ...figure });
    }
    all.push({
      rule: rule.kind,
      unit: 'limit' in rule ? rule.limit.unit : null,
      asked: askedOf(rule),
      met: zones.every(({ met }) => met),
      margin: Math.min(...zones.map(({ margin }) => margin)),
      zones,
    });
  }
  return all;
}

/** The rate at which a rule's symbols are read at a place. */
export async function tryAt(
  rig: LaidOut['bench']['rig'],
  { symbol, modulePx, trials, successAtLeast }: PixelRuleOf<'decode'>,
  { xMm, yMm }: { xMm: number; yMm: number },
  { crew, seed, signal, onPlace }: Trials,
): Promise<Rate> {
  const setup = { rig, place: { xMm, yMm }, symbol, modulePx, seed };
  const rate = await crew.rate(setup, { trials, successAtLeast }, signal);
  onPlace?.();
  return rate;
}

function decodeFigure(rate: Rate, rule: PixelRuleOf<'decode'>): Omit<RuleFigure, 'band'> {
  const limit = rule.successAtLeast;
  return { ...rate, limit, margin: marginAtLeast(rate.value, limit) };
}

function placeOf({ field, azimuthDeg, place, xMm, yMm }: FieldPoint) {
  return { field, azimuthDeg, place, imageHeightMm: Math.hypot(xMm, yMm) };
}

function askedOf(rule: PixelRule): RuleVerdict['asked'] {
  switch (rule.kind) {
    case 'contrast':
      return { lpPerMm: rule.lpPerMm };
    case 'detect':
      return { featurePx: rule.diameterPx };
    case 'decode':
      return { symbol: rule.symbol, modulePx: rule.modulePx };
    case 'placement':
      return rule.modelOrder === null ? {} : { modelOrder: rule.modelOrder };
    case 'edge_blur':
      return {};
  }
}
