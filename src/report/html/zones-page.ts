/** `zones` as a page: the same figures as its tables, and the curves between them. It only shows: every number comes from the optics. */
import type { PsfSamples } from '../../imaging/psf-samples.js';
import type { FrameMap } from '../../optics/frame-map.js';
import type { Rig } from '../../optics/rig.js';
import type { ZoneCurves } from '../../optics/zone-curves.js';
import type { BothDirections, Zone, ZonesReport } from '../../optics/zones.js';
import { bandTone } from '../plots/band-tone.js';
import { colourRamp } from '../plots/colour-ramp.js';
import { distortionGridPlot } from '../plots/distortion-grid.js';
import { ACROSS_DASH, type Curve, linePlot } from '../plots/line-plot.js';
import { FAINT, INK, SERIES, type Tone } from '../plots/theme.js';
import { fixed, significant } from '../text.js';
import { zoneName } from '../zone-table.js';
import { FRAME_SCRIPT } from './frame-script.js';
import { type FrameFigures, frameSection, psfSection, psfUses } from './frame-section.js';
import { html, type Markup } from './markup.js';
import { pageText } from './page.js';
import {
  figure,
  figureTable,
  folded,
  type HtmlColumn,
  type KeyEntry,
  lineKey,
  type Tile,
  tiles,
} from './parts.js';
import { psfSprite } from './psf-sprite.js';
import { rigFacts } from './rig-facts.js';

export interface ZonesPage {
  rig: Rig;
  report: ZonesReport;
  curves: ZoneCurves;
  map: FrameMap;
  /** Of the map's cells that have pictures of their own, in the order of `psfUses`. */
  psfs: PsfSamples;
}

export async function zonesPage({ rig, report, curves, map, psfs }: ZonesPage): Promise<string> {
  const bands = rig.camera.bands.map(({ name }) => name);
  const frequencies = report.zones[0].mtf.map(({ lpPerMm }) => lpPerMm);
  const middle = frequencies.indexOf(curves.focus.lpPerMm);
  const frame: FrameFigures = { map, psfs, uses: psfUses(map).uses, ramp: await colourRamp() };
  const context = { rig, report, curves, bands, frequencies, middle };
  const sections = [
    { id: 'glance', title: 'At a glance', body: glance(context) },
    { id: 'frame', title: 'Contrast over the frame', body: frameSection(frame, middle) },
    { id: 'height', title: 'Contrast against image height', body: await heightSection(context) },
    { id: 'frequency', title: 'Contrast against frequency', body: await frequencySection(context) },
    { id: 'focus', title: 'Focus', body: await focusSection(context) },
    {
      id: 'psfs',
      title: 'PSFs across the frame',
      body: [psfSection(frame), await psfSprite(psfs, bands)],
    },
    { id: 'distortion', title: 'Distortion', body: await distortionSection(context) },
    { id: 'figures', title: 'All figures by zone', body: allFigures(context) },
    { id: 'rig', title: 'The rig', body: rigFacts(rig) },
  ];
  return pageText({
    title: `Contrast by field zone: ${report.rig}`,
    lead: `f/${significant(report.fNumber, 3)}, ${rig.camera.pixels.join(' x ')} pixels of ${significant(rig.camera.pixelPitchUm, 4)} µm, ${report.model} model`,
    warnings: report.warnings,
    sections,
    script: FRAME_SCRIPT,
  });
}

interface Context {
  rig: Rig;
  report: ZonesReport;
  curves: ZoneCurves;
  bands: readonly string[];
  frequencies: readonly number[];
  /** Which of the frequencies is the middle one. */
  middle: number;
}

function glance({ report: { zones }, bands, frequencies, middle }: Context): Markup {
  const hasBands = bands.length > 1;
  const name = (zone: Zone) => (hasBands ? `${zoneName(zone)}, ${zone.band}` : zoneName(zone));
  const first = zones[0];
  const worst = (value: (zone: Zone) => number) =>
    zones.reduce((low, zone) => (value(zone) < value(low) ? zone : low));
  const lower = ({ tangential, sagittal }: BothDirections) => Math.min(tangential, sagittal);
  const direction = ({ tangential, sagittal }: BothDirections) =>
    tangential === sagittal ? '' : tangential < sagittal ? ', along the radius' : ', across the radius';
  const contrast = worst(({ mtf }) => lower(mtf[middle].camera));
  const mtf50 = worst(({ mtf50LpPerMm }) => lower(mtf50LpPerMm));
  const strehl = worst((zone) => zone.strehl);
  const bent = worst(({ distortionPercent }) => -Math.abs(distortionPercent));
  const dark = worst(({ relativeIllumination }) => relativeIllumination);
  const foci = zones.flatMap(({ bestFocusUm: { tangential, sagittal } }) => [tangential, sagittal]);
  const known = foci.filter((um) => um !== null);
  const all: Tile[] = [
    {
      what: `Contrast at ${significant(frequencies[middle], 4)} lp/mm, weakest`,
      value: fixed(lower(contrast.mtf[middle].camera), 2),
      where: `${name(contrast)}${direction(contrast.mtf[middle].camera)}; ${name(first)}: ${fixed(lower(first.mtf[middle].camera), 2)}`,
    },
    {
      what: 'MTF50, weakest',
      value: `${fixed(lower(mtf50.mtf50LpPerMm), 1)} lp/mm`,
      where: `${name(mtf50)}${direction(mtf50.mtf50LpPerMm)}; ${name(first)}: ${fixed(lower(first.mtf50LpPerMm), 1)}`,
    },
    {
      what: 'Strehl ratio, lowest',
      value: fixed(strehl.strehl, 3),
      where: `${name(strehl)}; ${name(first)}: ${fixed(first.strehl, 3)}`,
    },
    {
      what: 'Distortion, largest',
      value: `${fixed(bent.distortionPercent, 2)} %`,
      where: zoneName(bent),
    },
    {
      what: 'Light, least',
      value: `${fixed(100 * dark.relativeIllumination, 0)} %`,
      where: `${zoneName(dark)}, of the light on the axis`,
    },
  ];
  if (known.length > 0)
    all.push({
      what: 'Best focus, over the zones',
      value: `${fixed(Math.min(...known), 0)} to ${fixed(Math.max(...known), 0)} µm`,
      where: `sensor shift at ${significant(frequencies[middle], 4)} lp/mm`,
    });
  return html`${tiles(all)}
<p>Along: modulation along the radius (tangential). Across: across it (sagittal). Contrast is that of lens and pixel together unless said otherwise; frequencies and sizes are those on the sensor.</p>
`;
}

async function heightSection({ curves, report, rig, bands, frequencies }: Context): Promise<Markup> {
  const { height } = curves;
  const mm = height.imageHeightMm;
  const farthest = mm.at(-1)!;
  const plots = await Promise.all(
    bands.map(async (band, at) => {
      const own = height.curves.filter((curve) => curve.band === band);
      const svg = await linePlot({
        title: `Contrast against image height${ofBand(band, bands)}`,
        description: own
          .map(
            ({ lpPerMm, mtf }) =>
              `${significant(lpPerMm, 4)} lp/mm: on the axis ${fixed(mtf.tangential[0], 2)}, at ${fixed(farthest, 2)} mm ${fixed(mtf.tangential.at(-1), 2)} along and ${fixed(mtf.sagittal.at(-1), 2)} across the radius`,
          )
          .join('; '),
        id: `height-${at}`,
        x: { label: 'image height, mm', domain: [0, farthest] },
        y: { label: 'contrast (MTF)', domain: [0, 1] },
        curves: own.flatMap(({ mtf }, i) => bothCurves(mm, mtf, SERIES[i % SERIES.length])),
        marks: heightMarks(report.zones, farthest),
      });
      return figure(bands.length > 1 ? `Band ${band}` : 'All zones from axis to corner', '', svg);
    }),
  );
  const direction = isTilted(rig)
    ? ` The sensor is tilted: the curves run toward ${fixed(height.azimuthDeg, 0)} degrees from +x toward +y.`
    : '';
  return html`<p>From the axis to the farthest corner, lens and camera together.${direction}</p>
${lineKey([
  ...frequencies.map((lpPerMm, i) => ({
    text: `${significant(lpPerMm, 4)} lp/mm`,
    tone: SERIES[i % SERIES.length],
  })),
  ...directionKey(),
])}
<div class="plots few">${plots}</div>
${folded(
  'These curves as a table',
  figureTable(
    'Contrast of lens and camera against image height',
    mm.map((_, i) => i),
    [
      { head: 'mm', cell: (i) => fixed(mm[i], 3), kind: 'head' },
      ...height.curves.flatMap(({ band, lpPerMm, mtf }) =>
        bothColumns<number>(
          `${significant(lpPerMm, 4)} lp/mm${ofBand(band, bands)}`,
          (i) => ({ tangential: mtf.tangential[i], sagittal: mtf.sagittal[i] }),
          3,
        ),
      ),
    ],
  ),
)}`;
}

async function frequencySection(context: Context): Promise<Markup> {
  const { curves, report, bands, rig } = context;
  const { lpPerMm, curves: own } = curves.frequency;
  const nyquist = 500 / rig.camera.pixelPitchUm;
  const plots = await Promise.all(
    points(report.zones).map(async (point, at) => {
      const svg = await linePlot({
        title: `Contrast against frequency: ${zoneName(point.zone)}`,
        description: `MTF50 of lens and camera: ${point.indices
          .map((i) => report.zones[i])
          .map(
            ({ band, mtf50LpPerMm: { tangential, sagittal } }) =>
              `${fixed(tangential, 1)} lp/mm along and ${fixed(sagittal, 1)} across the radius${ofBand(band, bands)}`,
          )
          .join('; ')}`,
        id: `frequency-${at}`,
        x: { label: 'frequency, lp/mm', domain: [0, lpPerMm.at(-1)!] },
        y: { label: 'contrast (MTF)', domain: [0, 1] },
        curves: [
          ...point.indices.map((i) => ({
            x: lpPerMm,
            y: own[i].diffractionLimit,
            tone: FAINT,
            widthPx: 1.2,
            dash: '1 2',
          })),
          ...point.indices.flatMap((i) => bothCurves(lpPerMm, own[i].mtf, bandTone(report.zones[i].band))),
        ],
        marks: lpPerMm.at(-1)! > 1.02 * nyquist ? [{ x: nyquist, text: '0.5 cycles/pixel' }] : undefined,
      });
      return figure(zoneName(point.zone), `${fixed(point.zone.imageHeightMm, 2)} mm`, svg);
    }),
  );
  return html`<p>Lens and camera together, zone by zone, up to ${significant(lpPerMm.at(-1)!, 4)} lp/mm; half a cycle a pixel is ${significant(nyquist, 4)} lp/mm.</p>
${lineKey([...bandKey(bands), ...directionKey(), { text: 'the lens without aberration, no pixel', tone: FAINT, dash: '1 2' }])}
<div class="plots">${plots}</div>
${folded(
  'These curves as a table',
  figureTable(
    'Contrast of lens and camera against frequency',
    lpPerMm.map((_, i) => i),
    [
      { head: 'lp/mm', cell: (i) => fixed(lpPerMm[i], 1), kind: 'head' },
      ...report.zones.flatMap((zone, z) =>
        bothColumns<number>(
          zoneTitle(zone, bands),
          (i) => ({ tangential: own[z].mtf.tangential[i], sagittal: own[z].mtf.sagittal[i] }),
          3,
        ),
      ),
    ],
  ),
)}`;
}

async function focusSection({ curves, report, bands }: Context): Promise<Markup> {
  const { lpPerMm, shiftUm, curves: own } = curves.focus;
  const { bestFocus, imageHeightMm: mm } = curves.height;
  const frequency = `${significant(lpPerMm, 4)} lp/mm`;
  const plots = await Promise.all(
    points(report.zones).map(async (point, at) => {
      const svg = await linePlot({
        title: `Contrast through focus: ${zoneName(point.zone)}`,
        description: `At ${frequency}; best focus: ${point.indices
          .map((i) => report.zones[i])
          .map(
            ({ band, bestFocusUm: { tangential, sagittal } }) =>
              `${fixed(tangential, 1)} um along and ${fixed(sagittal, 1)} um across the radius${ofBand(band, bands)}`,
          )
          .join('; ')}`,
        id: `focus-${at}`,
        x: { label: 'sensor shift, µm, + away from the lens', domain: [shiftUm[0], shiftUm.at(-1)!] },
        y: { label: 'contrast (MTF)', domain: [0, 1] },
        curves: point.indices.flatMap((i) => bothCurves(shiftUm, own[i], bandTone(report.zones[i].band))),
        marks: [{ x: 0, text: 'sensor' }],
      });
      return figure(zoneName(point.zone), `${fixed(point.zone.imageHeightMm, 2)} mm`, svg);
    }),
  );
  const isSeen = bestFocus.some(({ um }) => um.tangential.some((value) => value !== null));
  const field =
    isSeen &&
    figure(
      'Best focus against image height',
      `where contrast at ${frequency} is highest`,
      await linePlot({
        title: 'Best focus against image height',
        description: bestFocus
          .map(
            ({ band, um }) =>
              `At ${fixed(mm.at(-1), 2)} mm ${fixed(um.tangential.at(-1), 1)} um along and ${fixed(um.sagittal.at(-1), 1)} um across the radius${ofBand(band, bands)}`,
          )
          .join('; '),
        id: 'best-focus',
        x: { label: 'image height, mm', domain: [0, mm.at(-1)!] },
        y: { label: 'sensor shift, µm' },
        curves: [
          { x: [0, mm.at(-1)!], y: [0, 0], tone: INK, widthPx: 1 },
          ...bestFocus.flatMap(({ band, um }) => bothCurves(mm, um, bandTone(band))),
        ],
      }),
    );
  return html`<p>What moving the sensor does at ${frequency}, zone by zone, on one scale; 0 is where the sensor stands.</p>
${lineKey([...bandKey(bands), ...directionKey()])}
${field && html`<div class="plots few">${field}</div>`}
<div class="plots">${plots}</div>
${folded('These curves as tables', [
  isSeen &&
    figureTable(
      `Sensor shift of best focus at ${frequency}, µm`,
      mm.map((_, i) => i),
      [
        { head: 'mm', cell: (i) => fixed(mm[i], 3), kind: 'head' },
        ...bestFocus.flatMap(({ band, um }) =>
          bothColumns<number>(
            bands.length > 1 ? band : 'µm',
            (i) => ({ tangential: um.tangential[i], sagittal: um.sagittal[i] }),
            2,
          ),
        ),
      ],
    ),
  figureTable(
    `Contrast of lens and camera at ${frequency} through focus`,
    shiftUm.map((_, i) => i),
    [
      { head: 'µm', cell: (i) => fixed(shiftUm[i], 1), kind: 'head' },
      ...report.zones.flatMap((zone, z) =>
        bothColumns<number>(
          zoneTitle(zone, bands),
          (i) => ({ tangential: own[z].tangential[i], sagittal: own[z].sagittal[i] }),
          3,
        ),
      ),
    ],
  ),
])}`;
}

async function distortionSection({ curves, bands }: Context): Promise<Markup> {
  const { imageHeightMm: mm, percent, lateralUm, grid } = curves.distortion;
  const end = mm.at(-1)!;
  const hasLateral = lateralUm.some(({ um }) => um.some((value) => value !== 0));
  const curve = await linePlot({
    title: 'Distortion against image height',
    description: `${fixed(percent.at(-1), 2)} percent at ${fixed(end, 2)} mm`,
    id: 'distortion',
    x: { label: 'image height, mm', domain: [0, end] },
    y: { label: 'distortion, %' },
    curves: [
      { x: [0, end], y: [0, 0], tone: INK, widthPx: 1 },
      { x: mm, y: percent, tone: SERIES[0] },
    ],
  });
  const lateral =
    hasLateral &&
    figure(
      'Lateral colour',
      "against the lens's own wavelength, + outward",
      await linePlot({
        title: 'Lateral colour against image height',
        description: lateralUm
          .map(({ band, um }) => `${band}: ${fixed(um.at(-1), 2)} um at ${fixed(end, 2)} mm`)
          .join('; '),
        id: 'lateral',
        x: { label: 'image height, mm', domain: [0, end] },
        y: { label: 'shift, µm' },
        curves: [
          { x: [0, end], y: [0, 0], tone: INK, widthPx: 1 },
          ...lateralUm.map(({ band, um }) => ({ x: mm, y: um, tone: bandTone(band) })),
        ],
      }),
    );
  const bend =
    grid.factor === 0
      ? 'there is none'
      : grid.factor === 1
        ? 'to scale'
        : `drawn ${grid.factor} times as large as it is`;
  return html`<p>Distortion of the third order, changes of scale left out: minus is barrel, plus is pincushion.</p>
${hasLateral && lineKey(bandKey(bands))}
<div class="plots few">${figure('Against image height', '', curve)}${figure('As a grid', `the frame from behind the lens; ${bend}`, await distortionGridPlot(grid))}${lateral}</div>
${folded(
  'These curves as a table',
  figureTable(
    hasLateral ? 'Distortion and lateral colour' : 'Distortion',
    mm.map((_, i) => i),
    [
      { head: 'mm', cell: (i) => fixed(mm[i], 3), kind: 'head' },
      { head: 'distortion, %', cell: (i) => fixed(percent[i], 3) },
      ...(hasLateral
        ? lateralUm.map(({ band, um }) => ({ head: `${band}, µm`, cell: (i: number) => fixed(um[i], 2) }))
        : []),
    ],
  ),
)}`;
}

function allFigures({ report: { zones }, bands, frequencies }: Context): Markup {
  const lead: HtmlColumn<Zone>[] = [
    { head: 'zone', cell: zoneName, kind: 'head' },
    ...(bands.length > 1 ? [{ head: 'band', cell: ({ band }: Zone) => band, kind: 'text' as const }] : []),
    { head: 'mm', cell: ({ imageHeightMm }) => fixed(imageHeightMm, 2) },
  ];
  const title = (lpPerMm: number) => `${significant(lpPerMm, 4)} lp/mm`;
  return html`${figureTable('Contrast (MTF) of lens and camera', zones, [
    ...lead,
    ...frequencies.flatMap((lpPerMm, i) => bothColumns<Zone>(title(lpPerMm), ({ mtf }) => mtf[i].camera, 3)),
    ...bothColumns<Zone>('MTF50, lp/mm', ({ mtf50LpPerMm }) => mtf50LpPerMm, 1),
  ])}
${figureTable('Contrast (MTF) of the lens alone, and of the same stop without aberration (limit)', zones, [
  ...lead,
  ...frequencies.flatMap((lpPerMm, i) => [
    {
      head: 'limit',
      group: title(lpPerMm),
      cell: ({ mtf }: Zone) => fixed(mtf[i].diffractionLimit, 3),
    },
    ...bothColumns<Zone>(title(lpPerMm), ({ mtf }) => mtf[i].lens, 3),
  ]),
])}
${figureTable('Wavefront, distortion, colour, light, and the sensor shift of best focus', zones, [
  ...lead,
  { head: 'Strehl ratio', cell: ({ strehl }) => fixed(strehl, 3) },
  { head: 'RMS, waves', cell: ({ wavefrontRmsWaves }) => fixed(wavefrontRmsWaves, 3) },
  { head: 'distortion, %', cell: ({ distortionPercent }) => fixed(distortionPercent, 2) },
  { head: 'lateral, µm', cell: ({ lateralColourUm }) => fixed(lateralColourUm, 2) },
  { head: 'light, share', cell: ({ relativeIllumination }) => fixed(relativeIllumination, 3) },
  ...bothColumns<Zone>('best focus, µm', ({ bestFocusUm }) => bestFocusUm, 1),
])}`;
}

/** The two directions side by side under one heading. */
function bothColumns<Row>(
  group: string,
  of: (row: Row) => BothDirections<number | null>,
  decimals: number,
): HtmlColumn<Row>[] {
  return [
    { head: 'along', group, cell: (row) => fixed(of(row).tangential, decimals) },
    { head: 'across', group, cell: (row) => fixed(of(row).sagittal, decimals) },
  ];
}

function bothCurves(
  x: readonly number[],
  y: BothDirections<readonly (number | null)[]>,
  tone: Tone,
): Curve[] {
  return [
    { x, y: y.tangential, tone },
    { x, y: y.sagittal, tone, dash: ACROSS_DASH },
  ];
}

/** Field points in the order of the report, each with the places of its bands in it. */
function points(zones: readonly Zone[]): { zone: Zone; indices: number[] }[] {
  const bandCount = zones.findIndex(({ band }, i) => i > 0 && band === zones[0].band);
  const each = bandCount < 0 ? zones.length : bandCount;
  return zones
    .filter((_, i) => i % each === 0)
    .map((zone, at) => ({ zone, indices: Array.from({ length: each }, (_, i) => at * each + i) }));
}

/** Where the named zones stand on an axis of image heights; of those close together the farthest. */
function heightMarks(zones: readonly Zone[], farthest: number): { x: number; text: string }[] {
  const marks: { x: number; text: string }[] = [];
  for (const zone of zones.toSorted((a, b) => b.imageHeightMm - a.imageHeightMm)) {
    const x = zone.imageHeightMm;
    if (x === 0 || x > farthest * (1 + 1e-9)) continue;
    if (marks.every((mark) => Math.abs(mark.x - x) > 0.26 * farthest))
      marks.push({ x, text: zoneName(zone) });
  }
  return marks;
}

function isTilted({ mount }: Rig): boolean {
  return mount.sensorTiltDeg.some((degrees) => degrees !== 0);
}

function bandKey(bands: readonly string[]): KeyEntry[] {
  return bands.length > 1 ? bands.map((band) => ({ text: `band ${band}`, tone: bandTone(band) })) : [];
}

function directionKey(): KeyEntry[] {
  return [
    { text: 'along the radius (tangential)', tone: INK },
    { text: 'across the radius (sagittal)', tone: INK, dash: ACROSS_DASH },
  ];
}

function zoneTitle(zone: Zone, bands: readonly string[]): string {
  return `${zoneName(zone)}${ofBand(zone.band, bands)}`;
}

function ofBand(band: string, bands: readonly string[]): string {
  return bands.length > 1 ? `, ${band}` : '';
}
