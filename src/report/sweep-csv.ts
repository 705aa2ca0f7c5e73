/** The samples of a sweep as CSV: a line a sample, a column an axis, named by its path in the rig file. */
import { type Cell, csvText } from './csv.js';
import type { SweepFigures } from './sweep-table.js';
import { zoneName } from './zone-table.js';

type Sample = SweepFigures['samples'][number];

export function sweepCsv({ axes, zones, figure, samples }: SweepFigures): string {
  const name = figure.kind;
  const columns: (readonly [string, (sample: Sample) => Cell])[] = [
    ...axes.map(({ key }, at) => [key, (sample: Sample) => sample.values[at]] as const),
    [name, (sample) => sample.figure],
    ...(figure.kind === 'margin' ? [['met', (sample: Sample) => String(sample.met ?? '')] as const] : []),
    ['rule', (sample) => sample.rule ?? null],
    ['zone', (sample) => (sample.zone === undefined ? null : zoneName(zones[sample.zone]))],
    ...zones.map(
      (zone, at) => [`${name} at ${zoneName(zone)}`, (sample: Sample) => sample.zones?.[at] ?? null] as const,
    ),
    ['decode_rate', (sample) => sample.decode?.value ?? null],
    ['white_e', (sample) => sample.whiteE ?? null],
  ];
  return csvText(samples, columns);
}
