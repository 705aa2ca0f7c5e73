// @ts-check
/** The loop on one page: a chart, the picture of it, and the contrast that is measured on the picture over
 * the one that the rig predicts.
 *
 *     node scenes/loop.js
 */
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { encodePicture, readScene } from '../dist/files/pictures/index.js';
import { drawPlot } from '../dist/report/plots/draw-plot.js';
import { FAINT, GRID, INK, SERIES } from '../dist/report/plots/theme.js';
import { foreglass, HALL, OUT, say, shown } from './draw/run.js';

const RIG = join(HALL, 'tags-green.rig.yaml');
const FOLDER = join(OUT, 'loop');
const OVERSAMPLE = 2;
const FREQUENCIES = Array.from({ length: 20 }, (_, i) => (i + 1) / 40);

/** What this makes, for those who point at it. */
export const SHEET = join(FOLDER, 'loop.svg');

/** The patches of the grid that are shown. */
const GRID_SIZE = '5x5';
const SHOWN = [
  { patch: 12, label: 'middle of the frame' },
  { patch: 0, label: 'corner' },
];

/** Side of the details, in pixels of the picture and on the page. */
const DETAIL_PX = 240;
const GAP_PX = 12;

/** Draw the chart, render it, measure the picture and lay all three out.
 * @returns {Promise<{ edges: number, worst: number }>} how many edges were measured, and the largest
 *   difference up to 0.4 cycles a pixel */
export async function closeTheLoop() {
  await mkdir(FOLDER, { recursive: true });
  const file = (/** @type {string} */ name) => shown(join(FOLDER, name));
  const rig = ['--rig', shown(RIG)];
  const [chart, truth, picture] = ['edges.png', 'edges.truth.json', 'picture.png'].map(file);
  const k = String(OVERSAMPLE);
  foreglass(
    ['chart', 'edges', ...rig, '--grid', GRID_SIZE, '--size', '160', '--oversample', k, '--out', chart],
    'quiet',
  );
  foreglass(
    [
      'render',
      chart,
      ...rig,
      '--scene-linear',
      '--oversample',
      k,
      '--out',
      picture,
      '--linear',
      '--record',
      file('picture.json'),
    ],
    'quiet',
  );
  const frequencies = FREQUENCIES.join(',');
  foreglass(
    [
      ...['measure', picture, '--truth', truth, '--record', file('picture.json')],
      ...['--cycles-per-pixel', frequencies, '--json', file('measured.json')],
    ],
    'quiet',
  );
  const { edges } = JSON.parse(await readFile(join(FOLDER, 'measured.json'), 'utf8'));
  /** @type {{ patch: number, x: number, y: number }[]} */
  const places = JSON.parse(await readFile(join(FOLDER, 'edges.truth.json'), 'utf8')).edges;
  await writeFile(SHEET, await sheet(edges, places, join(FOLDER, 'edges.png'), join(FOLDER, 'picture.png')));
  const differences = edges.flatMap((/** @type {Edge} */ { sfr }) =>
    sfr
      .filter(({ cycles_per_pixel: f }) => f < 0.41)
      .map(({ value, predicted }) => Math.abs(value - predicted)),
  );
  return { edges: edges.length, worst: Math.max(...differences) };
}

/**
 * @typedef {object} Edge
 * @property {number} x
 * @property {number} y
 * @property {string} direction
 * @property {{ cycles_per_pixel: number, value: number, predicted: number }[]} sfr
 */

/** @param {Edge[]} edges @param {{ patch: number, x: number, y: number }[]} places @param {string} chart
 *   @param {string} picture */
async function sheet(edges, places, chart, picture) {
  const rows = await Promise.all(
    SHOWN.map(async ({ patch, label }) => {
      const own = places.filter((place) => place.patch === patch);
      const middle = /** @type {[number, number]} */ (
        ['x', 'y'].map(
          (axis) => own.reduce((sum, place) => sum + place[/** @type {'x' | 'y'} */ (axis)], 0) / own.length,
        )
      );
      const near = edges.filter(({ x, y }) => Math.hypot(x - middle[0], y - middle[1]) < DETAIL_PX / 2);
      const crops = [await detail(chart, middle, OVERSAMPLE), await detail(picture, middle, 1)];
      return { label, crops, curves: near };
    }),
  );
  const points = rows.flatMap(({ label, curves }) =>
    curves.flatMap(({ direction, sfr }, at) =>
      sfr.map(({ cycles_per_pixel: f, value, predicted }) => ({ label, at, direction, f, value, predicted })),
    ),
  );
  const tone = (/** @type {string} */ direction) => SERIES[direction === 'tangential' ? 0 : 1].light;
  const left = 2 * (DETAIL_PX + GAP_PX) + 60;
  return drawPlot({
    title: 'What is measured on the picture is what the lens was given',
    subtitle:
      'chart, picture, and contrast over frequency: lines from the rig, dots measured; blue along the radius, vermillion across it',
    description:
      'Two rows, the middle and a corner of the frame. Each shows a dark slanted square of the chart, the picture of it, and the spatial ' +
      'frequency response of its four edges against the MTF that the rig predicts: the dots lie on the lines.',
    widthPx: left + 380,
    heightPx: SHOWN.length * (DETAIL_PX + 44) + 50,
    plot: (Plot) => ({
      marginLeft: left,
      marginTop: 24,
      marginBottom: 44,
      fy: { domain: SHOWN.map(({ label }) => label), axis: null, padding: 0.14 },
      x: { label: 'cycles a pixel, along the normal of the edge', domain: [0, 0.5], labelAnchor: 'center' },
      y: { label: null, domain: [0, 1], ticks: 5 }, // the heading says what it is
      marks: [
        Plot.gridX({ stroke: GRID.light, strokeOpacity: 1 }),
        Plot.gridY({ stroke: GRID.light, strokeOpacity: 1, ticks: 5 }),
        ...rows.flatMap(({ label, crops }) =>
          crops.map((src, column) =>
            Plot.image([label], {
              fy: [label],
              src: [src],
              width: DETAIL_PX,
              height: DETAIL_PX,
              frameAnchor: 'top-left',
              dx: (column + 0.5) * DETAIL_PX + (column + 1) * GAP_PX - left, // of the picture's middle
              dy: DETAIL_PX / 2,
              imageRendering: 'pixelated',
              ariaLabel: `${column === 0 ? 'chart' : 'picture'}, ${label}`,
            }),
          ),
        ),
        Plot.line(points, {
          fy: 'label',
          x: 'f',
          y: 'predicted',
          z: (/** @type {{ at: number, label: string }} */ point) => `${point.label} ${point.at}`,
          stroke: (/** @type {{ direction: string }} */ point) => tone(point.direction),
          strokeWidth: 1.5,
        }),
        Plot.dot(points, {
          fy: 'label',
          x: 'f',
          y: 'value',
          fill: (/** @type {{ direction: string }} */ point) => tone(point.direction),
          r: 2.5,
          clip: false,
        }),
        Plot.ruleY([0], { stroke: FAINT.light }),
        Plot.text(SHOWN, {
          fy: 'label',
          text: 'label',
          frameAnchor: 'top-right',
          dy: -4,
          lineAnchor: 'bottom',
          fill: INK.light,
        }),
      ],
    }),
  });
}

/** A detail of a picture in linear light as a PNG that a page can hold, in sRGB.
 * @param {string} file @param {[number, number]} middle in sensor pixels @param {number} oversample of the
 *   file
 */
async function detail(file, [x, y], oversample) {
  const { raster } = await readScene(file, { sceneLinear: true });
  const side = DETAIL_PX * oversample;
  const [fromX, fromY] = [x, y].map((at) => Math.round((at + 0.5) * oversample - side / 2));
  const plane = new Float32Array(side * side);
  for (let row = 0; row < side; row++) {
    const start = (fromY + row) * raster.width + fromX;
    plane.set(raster.planes[0].subarray(start, start + side), row * side);
  }
  const png = await encodePicture({ width: side, height: side, planes: [plane] }, 'png');
  return `data:image/png;base64,${png.toString('base64')}`;
}

if (import.meta.url === pathToFileURL(process.argv[1]).href) {
  const { edges, worst } = await closeTheLoop();
  say(`${edges} edges measured; up to 0.4 cycles a pixel they differ from the rig's MTF by ${worst.toFixed(3)} at most, in the noise of one picture.
Open ${shown(SHEET)}`);
}
