/** A lens derived from its surfaces, as a page. It only shows: every number comes from the report. */
import { COEFFICIENTS } from '../../optics/rig.js';
import type { DeriveReport } from '../../prescription/derive-report.js';
import { SEIDEL_SUMS } from '../../prescription/seidel.js';
import { headline, PROPERTY_ORIGINS, properties, SUM_NAMES } from '../derive-table.js';
import { linePlot } from '../plots/line-plot.js';
import { surfaceBars } from '../plots/surface-bars.js';
import { INK, SERIES } from '../plots/theme.js';
import { decimalsFor, fixed, significant } from '../text.js';
import { html, type Markup, trusted } from './markup.js';
import { pageText, type Section } from './page.js';
import { figure, figureTable, lineKey } from './parts.js';

export async function derivePage(report: DeriveReport): Promise<string> {
  const sections: Section[] = [
    { id: 'waves', title: 'The terms', body: termSection(report) },
    { id: 'surfaces', title: 'What each surface contributes', body: await surfaceSection(report) },
    { id: 'explained', title: 'How much the terms explain', body: await explainedSection(report) },
    { id: 'colour', title: 'Against wavelength', body: await colourSection(report) },
    { id: 'properties', title: 'First-order properties', body: propertySection(report) },
  ];
  return pageText({
    title: `${report.name}: the lens from its surfaces`,
    lead: `${headline(report)}; ${report.model} model`,
    warnings: report.warnings,
    sections: report.wavelengths.length > 0 ? sections : sections.filter(({ id }) => id !== 'colour'),
  });
}

function termSection({ waves, wavesOfSums, wavelengthNm }: DeriveReport): Markup {
  return figureTable(
    `Coefficients at h = 1 and the full stop, in waves of ${significant(wavelengthNm, 6)} nm`,
    COEFFICIENTS,
    [
      { head: 'term', cell: (name) => name, kind: 'head' },
      { head: 'used', cell: (name) => fixed(waves[name], 3) },
      { head: 'of the third-order sums', cell: (name) => fixed(wavesOfSums[name], 3) },
    ],
  );
}

async function surfaceSection(report: DeriveReport): Promise<Markup> {
  const { surfaces, seidelMm } = report;
  const rows = [
    ...surfaces.map((sums) => ({ name: `${sums.surface}${sums.stop ? ' stop' : ''}`, sums })),
    { name: 'total', sums: seidelMm },
  ];
  const largest = Math.max(
    ...rows.flatMap(({ sums }) => SEIDEL_SUMS.map((sum) => Math.abs(1000 * sums[sum]))),
  );
  const decimals = decimalsFor(largest, 5);
  return html`<p>Third-order sums in µm of optical path at h = 1 and the full stop; each column of bars has a scale of its own, written below it.</p>
<figure><div class="scroll" tabindex="0" role="region" aria-label="Bars of the surfaces">${trusted(await surfaceBars(report, { inPage: true }))}</div></figure>
${figureTable('Third-order sums of each surface, µm', rows, [
  { head: 'surface', cell: ({ name }) => name, kind: 'head' },
  ...SEIDEL_SUMS.map((sum) => ({
    head: `${sum} ${SUM_NAMES[sum]}`,
    cell: ({ sums }: (typeof rows)[number]) => fixed(1000 * sums[sum], decimals),
  })),
])}`;
}

async function explainedSection({ explained, fullFieldMm, wavelengthNm }: DeriveReport): Promise<Markup> {
  const h = explained.map(({ field }) => field);
  const end = Math.max(...h);
  const plot = (title: string, id: string, label: string, pairs: readonly (readonly (number | null)[])[]) =>
    linePlot({
      title,
      description: explained
        .map((_, i) => `h = ${significant(h[i], 3)}: ${fixed(pairs[0][i], 3)} and ${fixed(pairs[1][i], 3)}`)
        .join('; '),
      id,
      x: { label: 'field h', domain: [0, end] },
      y: { label },
      curves: [
        { x: h, y: pairs[0], tone: INK },
        { x: h, y: pairs[1], tone: SERIES[1], dash: '5 4' },
      ],
    });
  const rms = await plot('Wavefront error', 'rms', 'RMS, waves', [
    explained.map(({ rmsWaves }) => rmsWaves),
    explained.map(({ rmsLeftWaves }) => rmsLeftWaves),
  ]);
  const distortion = await plot('Distortion', 'distortion', 'distortion, %', [
    explained.map(({ distortionPercent }) => distortionPercent),
    explained.map(({ distortionOfTermsPercent }) => distortionOfTermsPercent),
  ]);
  return html`<p>The exact wavefront at ${significant(wavelengthNm, 6)} nm, traced through the surfaces, and what the terms make of it.</p>
${h.length > 1 && html`<div class="plots few">${figure('Wavefront error', 'whole line: the exact wavefront; dashed: what the terms leave of it', rms)}${figure('Distortion', 'whole line: exact; dashed: of the terms', distortion)}</div>`}
${figureTable('The exact wavefront by field', explained, [
  { head: 'h', cell: ({ field }) => significant(field, 4), kind: 'head' },
  { head: 'mm', cell: ({ field }) => fixed(field * fullFieldMm, 2) },
  { head: 'exact', group: 'RMS, waves', cell: ({ rmsWaves }) => fixed(rmsWaves, 3) },
  { head: 'left', group: 'RMS, waves', cell: ({ rmsLeftWaves }) => fixed(rmsLeftWaves, 3) },
  { head: 'explained, %', cell: ({ share }) => fixed(share === null ? null : 100 * share, 1) },
  { head: 'exact', group: 'distortion, %', cell: (zone) => fixed(zone.distortionPercent, 2) },
  { head: 'terms', group: 'distortion, %', cell: (zone) => fixed(zone.distortionOfTermsPercent, 2) },
  { head: 'open stop', cell: ({ openShare }) => fixed(openShare, 3) },
  { head: 'light', cell: ({ relativeIllumination }) => fixed(relativeIllumination, 3) },
])}`;
}

async function colourSection({ wavelengths, wavelengthNm }: DeriveReport): Promise<Markup> {
  const nm = wavelengths.map((entry) => entry.nm);
  const isCurve = nm.length > 1;
  const svg =
    isCurve &&
    (await linePlot({
      title: 'Focus and image height against wavelength',
      description: wavelengths
        .map(
          (entry) =>
            `${significant(entry.nm, 5)} nm: focus ${fixed(entry.axialUm, 1)} um, height ${fixed(entry.lateralUm, 2)} um`,
        )
        .join('; '),
      id: 'colour',
      x: { label: 'wavelength, nm', domain: [Math.min(...nm), Math.max(...nm)] },
      y: { label: 'µm' },
      curves: [
        { x: nm, y: wavelengths.map(({ axialUm }) => axialUm), tone: SERIES[0] },
        { x: nm, y: wavelengths.map(({ lateralUm }) => lateralUm), tone: SERIES[1], dash: '5 4' },
      ],
    }));
  return html`<p>Against ${significant(wavelengthNm, 6)} nm: the paraxial focus, + away from the lens, and the image height at h = 1, + outward.</p>
${
  svg &&
  html`${lineKey([
    { text: 'focus', tone: SERIES[0] },
    { text: 'image height', tone: SERIES[1], dash: '5 4' },
  ])}<div class="plots few">${figure('Colour', '', svg)}</div>`
}
${figureTable(
  `Coefficients at each wavelength, in waves of ${significant(wavelengthNm, 6)} nm`,
  wavelengths,
  [
    { head: 'nm', cell: (entry) => significant(entry.nm, 7), kind: 'head' },
    ...COEFFICIENTS.map((name) => ({
      head: name,
      cell: ({ waves }: (typeof wavelengths)[number]) => fixed(waves[name], 3),
    })),
    { head: 'focus, µm', cell: ({ axialUm }) => fixed(axialUm, 2) },
    { head: 'height, µm', cell: ({ lateralUm }) => fixed(lateralUm, 2) },
  ],
)}`;
}

function propertySection(report: DeriveReport): Markup {
  return html`<p>Lengths in mm; ${PROPERTY_ORIGINS}.</p>
<dl class="facts">${properties(report).map(([name, value]) => html`<div><dt>${name}</dt><dd>${value}</dd></div>`)}</dl>
`;
}
