/** The frame divided into cells: what lens and camera do in the middle of each. */
import { bandLines, bandMtf, pixelMtf } from './otf.js';
import { isSymmetric, pixelPitchMm, type Rig } from './rig.js';
import { wavefrontAt, wavefrontRmsWaves } from './wavefront.js';
import type { BothDirections } from './zones.js';

/** One cell, by its middle. */
export interface FrameCell {
  column: number;
  row: number;
  /** From the optical axis, + right and + down: the ideal image point. */
  xMm: number;
  yMm: number;
  /** Image height over full field. */
  field: number;
  /** Of the cell that shows the same, turned over: the first such in reading order, itself in a tilted or shifted frame. */
  twin: number;
  /** At the lens's own wavelength, piston and tilt taken out. */
  wavefrontRmsWaves: number;
  /** For each band in the order of the camera. */
  bands: {
    /** Of lens and camera, for each frequency asked for. */
    mtf: BothDirections[];
  }[];
}

export interface FrameMap {
  columns: number;
  rows: number;
  lpPerMm: number[];
  bands: string[];
  /** Row by row from the top. */
  cells: FrameCell[];
}

/** Cells as square as odd numbers of columns and rows make them, so that one has the sensor's middle in it. The outermost cells have their
 * middles at the outermost pixels' middles: corners and edges are shown as they are.
 * @param lpPerMm frequencies above 0 */
export function frameMap(rig: Rig, lpPerMm: readonly number[]): FrameMap {
  const { camera, lens, mount } = rig;
  const [width, height] = camera.pixels;
  const [columns, rows] = cellCounts(width, height);
  const pitchMm = pixelPitchMm(camera);
  const places = Array.from({ length: rows * columns }, (_, at) => {
    const column = at % columns;
    const row = Math.floor(at / columns);
    const xMm = pitchMm * ((column / Math.max(1, columns - 1)) * (width - 1) - mount.axisPx[0]);
    const yMm = pitchMm * ((row / Math.max(1, rows - 1)) * (height - 1) - mount.axisPx[1]);
    const wavefront = wavefrontAt(rig, xMm, yMm, lens.wavelengthNm);
    return {
      column,
      row,
      xMm,
      yMm,
      field: Math.hypot(xMm, yMm) / lens.fullFieldMm,
      wavefrontRmsWaves: wavefrontRmsWaves(wavefront),
    };
  });
  const folds = isSymmetric(rig);
  const cells: FrameCell[] = [];
  for (const [at, place] of places.entries()) {
    const twin = folds
      ? Math.min(place.row, rows - 1 - place.row) * columns +
        Math.min(place.column, columns - 1 - place.column)
      : at;
    const bands =
      twin < at ? cells[twin].bands : camera.bands.map((band) => figures(rig, band, place, lpPerMm));
    cells.push({ ...place, twin, bands });
  }
  return { columns, rows, lpPerMm: [...lpPerMm], bands: camera.bands.map(({ name }) => name), cells };
}

function figures(
  rig: Rig,
  band: Rig['camera']['bands'][number],
  { xMm, yMm }: { xMm: number; yMm: number },
  lpPerMm: readonly number[],
): FrameCell['bands'][number] {
  const lines = bandLines(rig, xMm, yMm, band);
  const { fNumber } = rig.mount;
  return {
    mtf: lpPerMm.map((frequency) => {
      const pixel = pixelMtf(rig.camera, frequency);
      return {
        tangential: bandMtf(lines, fNumber, frequency, 'tangential') * pixel,
        sagittal: bandMtf(lines, fNumber, frequency, 'sagittal') * pixel,
      };
    }),
  };
}

/** About 60 cells, at most 9 beside one another (as many as a phone shows), at least 3. */
function cellCounts(width: number, height: number): [columns: number, rows: number] {
  const aspect = width / height;
  const odd = (count: number) => Math.max(3, Math.min(9, 2 * Math.round((count - 1) / 2) + 1));
  return aspect >= 1 ? [9, odd(9 / aspect)] : [odd(9 * aspect), 9];
}
