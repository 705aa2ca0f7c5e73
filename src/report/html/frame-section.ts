/** The map of contrast over the frame, with the figures and the PSF of one cell beside it. */
import type { PsfSamples } from '../../imaging/psf-samples.js';
import type { FrameCell, FrameMap } from '../../optics/frame-map.js';
import { inkOn, rampColour } from '../plots/colour-ramp.js';
import { fixed, significant } from '../text.js';
import { html, jsonBlock, type Markup, type Piece } from './markup.js';
import { type PsfUse, psfPicture } from './psf-sprite.js';

const WAYS = ['lower of both directions', 'along the radius (tangential)', 'across the radius (sagittal)'];

/** What the cells and their PSFs need. */
export interface FrameFigures {
  map: FrameMap;
  psfs: PsfSamples;
  /** For each cell its picture among the PSFs. */
  uses: readonly PsfUse[];
  ramp: readonly string[];
}

/** Which of the map's cells have pictures of their own, and how each cell shows one of them. */
export function psfUses({ cells }: FrameMap): { own: FrameCell[]; uses: PsfUse[] } {
  const own = cells.filter(({ twin }, i) => twin === i);
  const uses = cells.map(({ twin, column, row }) => ({
    picture: own.indexOf(cells[twin]),
    flipX: column !== cells[twin].column,
    flipY: row !== cells[twin].row,
  }));
  return { own, uses };
}

/** @param middle which of the frequencies is shown at first */
export function frameSection(figures: FrameFigures, middle: number): Markup {
  const { map, uses, ramp } = figures;
  const tops = map.lpPerMm.map((_, at) => topOf(map, at));
  const axis = nearestToAxis(map);
  return html`<p>Contrast (MTF) of lens and camera together, the middle of each cell as it is there; the outermost cells show the edges and corners of the frame.</p>
<div class="choices" id="frame-choices" hidden>
${select(
  'pick-frequency',
  'Frequency',
  map.lpPerMm.map((lpPerMm) => `${significant(lpPerMm, 4)} lp/mm`),
  middle,
)}
${map.bands.length > 1 && select('pick-band', 'Band', map.bands, 0)}
${select('pick-direction', 'Direction', WAYS, 0)}
</div>
<div class="frame"><div>
${mapTable(map, ramp, tops[middle], middle)}
<div class="scale"><span>0</span><span class="bar" role="img" aria-label="Colour scale from dark, no contrast, to light" style="background: linear-gradient(90deg, ${ramp.filter((_, i) => i % 10 === 0).join(', ')})"></span><span id="scale-top">${fixed(tops[middle], 1)}</span></div>
<p class="lead" id="frame-help" hidden>Point at a cell, tap it, or use the arrow keys.</p>
</div>
${zoneCard(figures, axis)}
</div>
${jsonBlock('frame-data', {
  columns: map.columns,
  rows: map.rows,
  axis,
  start: middle,
  lp: map.lpPerMm.map((lpPerMm) => significant(lpPerMm, 4)),
  bands: map.bands,
  ways: WAYS,
  tops,
  ramp,
  inks: ramp.map(inkOn),
  cells: map.cells.map((cell, i) => ({
    where: whereIs(cell),
    psf: uses[i].picture,
    flip: [uses[i].flipX ? -1 : 1, uses[i].flipY ? -1 : 1],
    rms: rounded(cell.wavefrontRmsWaves),
    mtf: cell.bands.map(({ mtf }) =>
      mtf.map(({ tangential, sagittal }) => [rounded(tangential), rounded(sagittal)]),
    ),
  })),
})}
`;
}

function mapTable(map: FrameMap, ramp: readonly string[], top: number, at: number): Markup {
  const { columns, rows, cells } = map;
  const caption = `${WAYS[0]} at ${significant(map.lpPerMm[at], 4)} lp/mm${map.bands.length > 1 ? `, band ${map.bands[0]}` : ''}`;
  return html`<table class="map" id="frame-map"><caption>Contrast over the frame, <span id="map-what">${caption}</span></caption>
<thead><tr><th scope="col">y \\ x, mm</th>${cells.slice(0, columns).map(({ xMm }) => html`<th scope="col">${fixed(xMm, 1)}</th>`)}</tr></thead>
<tbody>${Array.from({ length: rows }, (_, row) => {
    const line = cells.slice(row * columns, (row + 1) * columns);
    return html`<tr><th scope="row">${fixed(line[0].yMm, 1)}</th>${line.map((cell) => {
      const { tangential, sagittal } = cell.bands[0].mtf[at];
      const value = Math.min(tangential, sagittal);
      const colour = rampColour(ramp, value / top);
      return html`<td style="background:${colour};color:${inkOn(colour)}">${fixed(value, 2)}</td>`;
    })}</tr>
`;
  })}</tbody></table>`;
}

/** Figures and PSF of one cell. */
function zoneCard({ map, psfs, uses }: FrameFigures, at: number): Markup {
  const cell = map.cells[at];
  const rows = cell.bands.flatMap(({ mtf }, band) =>
    mtf.map((both, i) => ({ band: map.bands[band], lpPerMm: map.lpPerMm[i], both })),
  );
  const hasBands = map.bands.length > 1;
  return html`<div class="zone-card" role="group" aria-label="Figures of one cell"><h3 id="zone-where" aria-live="polite">${whereIs(cell)}</h3>
${psfPicture(uses[at], `PSF at ${whereIs(cell)}`, 'zone-psf')}
<p class="lead">PSF of the lens, ${significant(psfs.sidePx, 3)} px (${significant(psfs.sideUm, 3)} µm) a side. Wavefront RMS <span id="zone-rms">${fixed(cell.wavefrontRmsWaves, 3)}</span> waves.</p>
<table id="zone-figures"><caption>Contrast of lens and camera</caption>
<thead><tr>${hasBands && html`<th scope="col" class="text">band</th>`}<th scope="col">lp/mm</th><th scope="col">along</th><th scope="col">across</th></tr></thead>
<tbody>${rows.map(({ band, lpPerMm, both }): Piece => html`<tr>${hasBands && html`<td class="text">${band}</td>`}<td>${significant(lpPerMm, 4)}</td><td class="figure">${fixed(both.tangential, 3)}</td><td class="figure">${fixed(both.sagittal, 3)}</td></tr>`)}</tbody></table>
</div>`;
}

/** The PSFs in the places of the frame where they are. */
export function psfSection({ map, psfs, uses }: FrameFigures): Markup {
  const colour = map.bands.length > 1 ? ' The bands lie where lateral colour puts them.' : '';
  return html`<p>Each square is ${significant(psfs.sidePx, 3)} px (${significant(psfs.sideUm, 3)} µm) of the sensor, in the place where the point lands; each is as bright as its own peak allows, and the sRGB curve lifts the faint skirts. The lens alone: pixels are left out.${colour}</p>
<div class="psfs" style="grid-template-columns: repeat(${map.columns}, minmax(0, 1fr))">${map.cells.map(
    (cell, i) => {
      const rms = fixed(cell.wavefrontRmsWaves, 3);
      return psfPicture(uses[i], `PSF at ${whereIs(cell)}, wavefront RMS ${rms} waves`);
    },
  )}</div>
`;
}

function select(id: string, label: string, options: readonly string[], selected: number): Markup {
  return html`<label>${label} <select id="${id}">${options.map((text, i) => (i === selected ? html`<option value="${i}" selected>${text}</option>` : html`<option value="${i}">${text}</option>`))}</select></label>`;
}

function whereIs({ xMm, yMm, field }: FrameCell): string {
  return `x ${fixed(xMm, 2)} mm, y ${fixed(yMm, 2)} mm (h = ${fixed(field, 2)})`;
}

/** The end of the scale: the highest contrast on the frame, rounded up to a tenth. */
function topOf({ cells }: FrameMap, at: number): number {
  const highest = Math.max(
    ...cells.flatMap(({ bands }) => bands.map(({ mtf }) => Math.max(mtf[at].tangential, mtf[at].sagittal))),
  );
  return Math.max(0.1, Math.ceil(10 * highest - 1e-9) / 10);
}

function nearestToAxis({ cells }: FrameMap): number {
  return cells.reduce((best, { field }, i) => (field < cells[best].field ? i : best), 0);
}

function rounded(value: number): number {
  return Number(value.toFixed(4));
}
