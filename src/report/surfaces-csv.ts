/** What each surface of a lens adds to the sums as CSV: a line for each surface, in mm. */
import type { DeriveReport } from '../prescription/derive-report.js';
import { SEIDEL_SUMS } from '../prescription/seidel.js';
import { csvText } from './csv.js';

export function surfacesCsv({ surfaces }: Pick<DeriveReport, 'surfaces'>): string {
  return csvText(surfaces, [
    ['surface', ({ surface }) => surface],
    ...SEIDEL_SUMS.map(
      (name) => [`${name}_mm`, (surface: (typeof surfaces)[number]) => surface[name]] as const,
    ),
  ]);
}
