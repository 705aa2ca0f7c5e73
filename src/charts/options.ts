/** What the drawer of a chart may choose, and the choices made for it. */
import { type Fault, InputError } from '../errors.js';
import type { FieldSpec } from '../optics/field-points.js';
import { CHART_KINDS, type ChartKind } from './truth.js';

export interface ChartChoices {
  /** Samples a pixel on each side, 1 to 16. Default: 4. */
  oversample?: number;
  /** Light of the white parts over that of the dark ones, above 1. Default: 4 for `edges`, 20 for the others.
   */
  contrast?: number;
  /** Linear light of the white parts, above 0 and up to 1. Default: 0.8. */
  white?: number;
  /** Patches across and down, spread evenly over the frame (`edges`, `dots`, `star`, `bars`). Default: as
   * many as fit well. */
  grid?: readonly [columns: number, rows: number];
  /** Patches at these field points in place of the grid (`edges`, `dots`, `star`, `bars`). */
  fields?: readonly FieldSpec[];
  /** Side of the squares (`edges`), diameter of the discs (`dots`) or stars (`star`), length of the bars
   * (`bars`), side of the cells (`checker`), in sensor pixels. */
  sizePx?: number;
  /** Slant of the edges against the radius, 2 to 40 (`edges`, default 5), or of the rows of cells against the
   * pixels, 0 to 45 (`checker`, default 0), in degrees. */
  angleDeg?: number;
  /** Pairs of a dark and a white sector, 4 to 180 (`star`). Default: 36. */
  sectors?: number;
  /** Frequencies of the groups, up to 1 (`bars`). Default: 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5. */
  cyclesPerPixel?: readonly number[];
}

/** The choices of one chart, checked, without those that depend on the frame. */
export interface SettledChoices extends ChartChoices {
  kind: ChartKind;
  oversample: number;
  contrast: number;
  white: number;
  dark: number;
  angleDeg: number;
  sectors: number;
  cyclesPerPixel: readonly number[];
}

/** Which kinds of chart a choice is for. */
const BELONGS_TO: Readonly<Partial<Record<keyof ChartChoices, readonly ChartKind[]>>> = {
  grid: ['edges', 'dots', 'star', 'bars'],
  fields: ['edges', 'dots', 'star', 'bars'],
  angleDeg: ['edges', 'checker'],
  sectors: ['star'],
  cyclesPerPixel: ['bars'],
};

/** Names of the choices on the command line, for messages. */
const OPTION_NAMES: Readonly<Record<keyof ChartChoices, string>> = {
  oversample: '--oversample',
  contrast: '--contrast',
  white: '--white',
  grid: '--grid',
  fields: '--fields',
  sizePx: '--size',
  angleDeg: '--angle',
  sectors: '--sectors',
  cyclesPerPixel: '--cycles-per-pixel',
};

/** Patches at most: more make no better measurement, and a truth file that nobody reads. */
export const MOST_PATCHES = 2000;

/** @throws {InputError} every choice that is out of range or for another kind */
export function settleChoices(kind: ChartKind, choices: ChartChoices): SettledChoices {
  const faults: Fault[] = [];
  const refuse = (name: keyof ChartChoices, message: string, found: unknown, allowed: string) =>
    faults.push({ key: OPTION_NAMES[name], message, found: String(found), allowed });
  if (!CHART_KINDS.includes(kind)) {
    throw new InputError({
      key: 'KIND',
      message: 'there is no such chart',
      found: `'${kind}'`,
      allowed: CHART_KINDS.join(', '),
    });
  }
  for (const [name, kinds] of Object.entries(BELONGS_TO) as [keyof ChartChoices, ChartKind[]][]) {
    if (choices[name] !== undefined && !kinds.includes(kind))
      refuse(name, `means nothing to the chart '${kind}'`, choices[name], `with ${kinds.join(', ')}`);
  }
  const {
    oversample = 4,
    contrast = kind === 'edges' ? 4 : 20,
    white = 0.8,
    angleDeg = kind === 'edges' ? 5 : 0,
    sectors = 36,
    cyclesPerPixel = [0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5],
    grid,
    fields,
    sizePx,
  } = choices;
  const check = (name: keyof ChartChoices, isAllowed: boolean, found: unknown, allowed: string) => {
    if (!isAllowed) refuse(name, 'is out of range', found, allowed);
  };
  const isWhole = (value: number, least: number, most: number) =>
    Number.isInteger(value) && value >= least && value <= most;
  check('oversample', isWhole(oversample, 1, 16), oversample, 'a whole number from 1 to 16');
  check('contrast', contrast > 1 && contrast <= 1e6, contrast, 'a number above 1, up to 1000000');
  check('white', white > 0 && white <= 1, white, 'a number above 0, up to 1');
  check('sizePx', sizePx === undefined || (sizePx >= 4 && sizePx <= 1e5), sizePx, 'a number from 4 up (px)');
  check('sectors', isWhole(sectors, 4, 180), sectors, 'a whole number from 4 to 180');
  if (kind === 'edges')
    check('angleDeg', angleDeg >= 2 && angleDeg <= 40, angleDeg, 'a number from 2 to 40 (degrees)');
  if (kind === 'checker')
    check('angleDeg', angleDeg >= 0 && angleDeg <= 45, angleDeg, 'a number from 0 to 45 (degrees)');
  check(
    'cyclesPerPixel',
    cyclesPerPixel.length > 0 &&
      cyclesPerPixel.length <= 20 &&
      cyclesPerPixel.every((f) => f >= 0.005 && f <= 1),
    cyclesPerPixel.join(','),
    '1 to 20 numbers from 0.005 to 1',
  );
  if (grid !== undefined) {
    const isGrid =
      grid.every((count) => isWhole(count, 1, MOST_PATCHES)) && grid[0] * grid[1] <= MOST_PATCHES;
    check(
      'grid',
      isGrid,
      grid.join('x'),
      `two whole numbers from 1 up, at most ${MOST_PATCHES} patches in all`,
    );
  }
  if (fields !== undefined && grid !== undefined)
    faults.push({
      key: '--fields',
      message: 'says where patches stand, and so does --grid; give one of them',
    });
  if (fields?.length === 0 || (fields?.length ?? 0) > MOST_PATCHES)
    check('fields', false, fields?.length, `1 to ${MOST_PATCHES} field points`);
  if (faults.length > 0) throw new InputError(faults);
  return {
    ...choices,
    kind,
    oversample,
    contrast,
    white,
    dark: white / contrast,
    angleDeg,
    sectors,
    cyclesPerPixel,
  };
}
