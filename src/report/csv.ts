/** CSV (RFC 4180, with line feeds alone), so that a spreadsheet or a data frame takes it as it is. */

export type Cell = string | number | null;

/** @param columns  names, and what stands in a row */
export function csvText<Row>(
  rows: readonly Row[],
  columns: readonly (readonly [name: string, cell: (row: Row) => Cell])[],
): string {
  const lines = [columns.map(([name]) => name), ...rows.map((row) => columns.map(([, cell]) => cell(row)))];
  return `${lines.map((line) => line.map(csvCell).join(',')).join('\n')}\n`;
}

function csvCell(cell: Cell): string {
  if (cell === null) return '';
  const text = String(cell);
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
