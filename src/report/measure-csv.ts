/** A measurement as CSV: a line for each edge and frequency, or, of a picture without edges, for each disc or
 * else each flat field. What belongs to an edge as a whole stands on each of its lines. */
import type { DotFigures, EdgeFigures, FlatReport, MeasureReport } from '../measure/figures.js';
import { type Cell, csvText } from './csv.js';

interface EdgeRow {
  edge: EdgeFigures;
  sfr: EdgeFigures['sfr'][number];
}

type Columns<Row> = readonly (readonly [name: string, cell: (row: Row) => Cell])[];

/** Columns in order; the names are those of the JSON. */
const EDGE_COLUMNS: Columns<EdgeRow> = [
  ['x', ({ edge }) => edge.x],
  ['y', ({ edge }) => edge.y],
  ['field', ({ edge }) => edge.field],
  ['direction', ({ edge }) => edge.direction],
  ['band', ({ edge }) => edge.band],
  ['normal_deg', ({ edge }) => edge.normalDeg],
  ['angle_deg', ({ edge }) => edge.angleDeg],
  ['length_px', ({ edge }) => edge.lengthPx],
  ['cycles_per_pixel', ({ sfr }) => sfr.cyclesPerPixel],
  ['lp_per_mm', ({ sfr }) => sfr.lpPerMm ?? null],
  ['value', ({ sfr }) => sfr.value],
  ['predicted', ({ sfr }) => sfr.predicted ?? null],
  ['sfr50_cycles_per_pixel', ({ edge }) => edge.sfr50CyclesPerPixel],
  ['edge_width_px', ({ edge }) => edge.edgeWidthPx],
  ['dark', ({ edge }) => edge.dark],
  ['bright', ({ edge }) => edge.bright],
  ['noise', ({ edge }) => edge.noise],
];

const DOT_COLUMNS: Columns<DotFigures> = [
  ['field', ({ field }) => field],
  ['azimuth_deg', ({ azimuthDeg }) => azimuthDeg],
  ['band', ({ band }) => band],
  ['ideal_x', ({ ideal }) => ideal[0]],
  ['ideal_y', ({ ideal }) => ideal[1]],
  ['found_x', ({ found }) => found[0]],
  ['found_y', ({ found }) => found[1]],
  ['expected_x', ({ expected }) => expected?.[0] ?? null],
  ['expected_y', ({ expected }) => expected?.[1] ?? null],
];

const FLAT_COLUMNS: Columns<FlatReport> = [
  ['x', ({ region }) => region.x],
  ['y', ({ region }) => region.y],
  ['width', ({ region }) => region.width],
  ['height', ({ region }) => region.height],
  ['band', ({ band }) => band],
  ['mean', ({ mean }) => mean],
  ['noise', ({ noise }) => noise],
  ['snr', ({ snr }) => snr],
  ['snr_db', ({ snrDb }) => snrDb],
];

export function measureCsv({ edges, dots, flats }: MeasureReport): string {
  if (edges.length > 0)
    return csvText(
      edges.flatMap((edge) => edge.sfr.map((sfr) => ({ edge, sfr }))),
      EDGE_COLUMNS,
    );
  return dots.length > 0 ? csvText(dots, DOT_COLUMNS) : csvText(flats, FLAT_COLUMNS);
}
