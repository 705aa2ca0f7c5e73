/** Text for a terminal: numbers, columns under a two-line head, lines that fit. */

/** How text is made to stand out; plain text where nothing is to be coloured. */
export interface Paint {
  strong(text: string): string;
  faint(text: string): string;
}

export const PLAIN: Paint = { strong: (text) => text, faint: (text) => text };

export const COLOURED: Paint = {
  strong: (text) => `\x1b[1m${text}\x1b[22m`,
  faint: (text) => `\x1b[2m${text}\x1b[22m`,
};

export interface Column {
  head: string;
  cells: readonly string[];
  /** Default: right, as numbers are read. */
  align?: 'left' | 'right';
}

/** Columns that belong together under one title. They are never torn apart. */
export interface ColumnGroup {
  title: string;
  columns: readonly Column[];
}

const GROUP_GAP = '  ';
const COLUMN_GAP = ' ';

/** A number with a fixed count of decimals; `-` where there is none. */
export function fixed(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '-';
  const text = value.toFixed(decimals);
  return Number(text) === 0 ? text.replace('-', '') : text; // no minus in front of what is rounded to zero
}

/** A number with as many decimals as it needs, at most `digits` digits in all. */
export function significant(value: number, digits: number): string {
  return String(Number(value.toPrecision(digits)));
}

/** The decimals with which the largest of some numbers shows so many digits: at most 9. */
export function decimalsFor(largest: number, digits: number): number {
  if (!(largest > 0)) return 0;
  return Math.min(9, Math.max(0, digits - 1 - Math.floor(Math.log10(largest))));
}

/** Lay out tables below one another: the `lead` columns begin each, and the groups follow as long as `width` lasts.
 * @returns tables, each as its lines; every table has the rows in the same order
 */
export function layOutColumns(
  lead: ColumnGroup,
  groups: readonly ColumnGroup[],
  width: number,
  paint = PLAIN,
): string[][] {
  const leadWidth = groupWidth(lead);
  const tables: ColumnGroup[][] = [];
  let room = 0;
  for (const group of groups) {
    const needed = GROUP_GAP.length + groupWidth(group);
    if (tables.length === 0 || needed > room) {
      tables.push([lead]);
      room = width - leadWidth;
    }
    tables.at(-1)!.push(group);
    room -= needed;
  }
  return tables.map((table) => tableLines(table, paint));
}

function tableLines(groups: readonly ColumnGroup[], paint: Paint): string[] {
  const line = (cellsOf: (column: Column) => string): string =>
    groups
      .map((group) => groupBody(group, cellsOf).padStart(groupWidth(group)))
      .join(GROUP_GAP)
      .trimEnd();
  const titles = groups
    .map((group) => group.title.padEnd(groupWidth(group)))
    .join(GROUP_GAP)
    .trimEnd();
  const rows = groups[0].columns[0].cells.map((_, row) => line((column) => column.cells[row]));
  const head = [titles, line((column) => column.head)].filter((text) => text !== '');
  return [...head.map((text) => paint.strong(text)), ...rows];
}

function groupBody(group: ColumnGroup, cellOf: (column: Column) => string): string {
  return group.columns
    .map((column) => {
      const cell = cellOf(column);
      return column.align === 'left' ? cell.padEnd(columnWidth(column)) : cell.padStart(columnWidth(column));
    })
    .join(COLUMN_GAP);
}

function groupWidth({ title, columns }: ColumnGroup): number {
  const body = columns.reduce(
    (sum, column) => sum + columnWidth(column),
    COLUMN_GAP.length * (columns.length - 1),
  );
  return Math.max(title.length, body);
}

function columnWidth({ head, cells }: Column): number {
  return Math.max(head.length, ...cells.map((cell) => cell.length));
}

/** Break a text at spaces into lines of at most `width` characters; a longer word keeps a line to itself. */
export function wrapText(text: string, width: number): string[] {
  const lines: string[] = [];
  for (const word of text.split(' ')) {
    const last = lines.at(-1);
    if (last !== undefined && last.length + 1 + word.length <= width)
      lines[lines.length - 1] = `${last} ${word}`;
    else lines.push(word);
  }
  return lines;
}
