/** What `derive` found, as tables for the terminal. It only shows: every number comes from the report. */
import { COEFFICIENTS } from '../optics/rig.js';
import type { DeriveReport } from '../prescription/derive-report.js';
import { SEIDEL_SUMS } from '../prescription/seidel.js';
import { CAUTION } from './caution.js';
import {
  type Column,
  type ColumnGroup,
  decimalsFor,
  fixed,
  layOutColumns,
  type Paint,
  PLAIN,
  significant,
  wrapText,
} from './text.js';

const WIDTH = 80;

/** What the sums stand for. */
export const SUM_NAMES: Readonly<Record<(typeof SEIDEL_SUMS)[number], string>> = {
  S_I: 'spherical',
  S_II: 'coma',
  S_III: 'astigmatism',
  S_IV: 'Petzval',
  S_V: 'distortion',
  C_I: 'axial',
  C_II: 'lateral',
};

/** First-order properties, what each surface contributes, the coefficients at each wavelength, and how much of the exact wavefront they
 * explain; within 80 columns. */
export function deriveTable(report: DeriveReport, paint: Paint = PLAIN): string {
  const sections: [title: string, lead: ColumnGroup, groups: ColumnGroup[]][] = [
    [
      'What each surface contributes, um of optical path at h = 1 and the full stop',
      ...surfaceColumns(report),
    ],
    [`Coefficients at each wavelength, in waves of ${report.wavelengthNm} nm`, ...wavelengthColumns(report)],
    [
      `The exact wavefront at ${report.wavelengthNm} nm, and what the terms make of it`,
      ...zoneColumns(report),
    ],
  ];
  return [
    ...wrapText(headline(report), WIDTH).map((line) => paint.strong(line)),
    '',
    paint.strong('First-order properties, lengths in mm'),
    ...propertyLines(report),
    ...sections.flatMap(([title, lead, groups]) =>
      layOutColumns(lead, groups, WIDTH, paint).flatMap((table) => ['', paint.strong(title), ...table]),
    ),
    '',
    ...wrapText(CAUTION, WIDTH).map((line) => paint.faint(line)),
    '',
  ].join('\n');
}

/** Where the places among the properties are counted from. */
export const PROPERTY_ORIGINS =
  'front point and entrance pupil: from the first surface; the rest from the last';

export function headline({ name, focalLengthMm, workingFNumber, fullFieldMm, method }: DeriveReport): string {
  const focal = focalLengthMm === null ? 'afocal' : `${significant(focalLengthMm, 4)} mm`;
  const source = method === 'sums' ? 'third-order sums' : 'the five terms fitted to the exact wavefront';
  return `${name}: ${focal} f/${significant(workingFNumber, 3)}, h = 1 at ${significant(fullFieldMm, 4)} mm; ${source}`;
}

/** First-order properties by name, lengths in mm. */
export function properties({ focalLengthMm, paraxial }: DeriveReport): [name: string, value: string][] {
  const p = paraxial;
  const length = (value: number | null) => (value === null ? 'infinite' : significant(value, 6));
  const place = (value: number | null) => (value === null ? 'at infinity' : significant(value, 6));
  return [
    ['focal length', length(focalLengthMm)],
    ['back focus', length(p.backFocusMm)],
    ['front principal point', length(p.frontPrincipalMm)],
    ['rear principal point', length(p.rearPrincipalMm)],
    ['entrance pupil', place(p.entrancePupilMm)],
    ['exit pupil', place(p.exitPupilMm)],
    ['its diameter', length(p.entrancePupilDiameterMm)],
    ['its diameter', length(p.exitPupilDiameterMm)],
    ['stop diameter', length(p.stopDiameterMm)],
    ['image distance', length(p.imageDistanceMm)],
    ['magnification', significant(p.magnification, 5)],
    ['half field, degrees', significant(p.halfFieldDeg, 5)],
    ['Petzval radius', length(p.petzvalRadiusMm)],
    ['Lagrange invariant', length(p.lagrangeMm)],
  ];
}

function propertyLines(report: DeriveReport): string[] {
  const cells = properties(report).map(([name, value]) => `${name.padEnd(22)} ${value}`);
  return [
    ...cells
      .filter((_, i) => i % 2 === 0)
      .map((cell, row) => `${cell.padEnd(WIDTH / 2)}${cells[2 * row + 1]}`),
    PROPERTY_ORIGINS,
  ];
}

function surfaceColumns({ surfaces, seidelMm }: DeriveReport): [ColumnGroup, ColumnGroup[]] {
  const rows = [...surfaces, seidelMm];
  const largest = Math.max(...rows.flatMap((row) => SEIDEL_SUMS.map((name) => Math.abs(1000 * row[name]))));
  const decimals = decimalsFor(largest, 5);
  const names = surfaces.map(({ surface, stop }) => `${surface}${stop ? ' stop' : ''}`);
  return [
    { title: '', columns: [{ head: 'surface', cells: [...names, 'total'], align: 'left' }] },
    SEIDEL_SUMS.map((name) =>
      single(
        name,
        SUM_NAMES[name],
        rows.map((row) => fixed(1000 * row[name], decimals)),
      ),
    ),
  ];
}

function wavelengthColumns({ wavelengths }: DeriveReport): [ColumnGroup, ColumnGroup[]] {
  const used = COEFFICIENTS.filter(
    (name) => !['W020', 'W111'].includes(name) || wavelengths.some(({ waves }) => waves[name] !== 0),
  );
  return [
    {
      title: '',
      columns: [{ head: 'nm', cells: wavelengths.map(({ nm }) => significant(nm, 7)) }],
    },
    [
      {
        title: '',
        columns: used.map((name) => ({
          head: name.padStart(7),
          cells: wavelengths.map(({ waves }) => fixed(waves[name], 3)),
        })),
      },
      single(
        'focus',
        'um',
        wavelengths.map(({ axialUm }) => fixed(axialUm, 2)),
      ),
      single(
        'height',
        'um',
        wavelengths.map(({ lateralUm }) => fixed(lateralUm, 2)),
      ),
    ],
  ];
}

function zoneColumns({ explained, fullFieldMm }: DeriveReport): [ColumnGroup, ColumnGroup[]] {
  type Zone = (typeof explained)[number];
  const column = (head: string, cell: (zone: Zone) => string): Column => ({
    head,
    cells: explained.map(cell),
  });
  return [
    {
      title: '',
      columns: [
        { ...column('field', ({ field }) => significant(field, 4)), align: 'left' },
        column('mm', ({ field }) => fixed(field * fullFieldMm, 2)),
      ],
    },
    [
      {
        title: 'RMS, waves',
        columns: [
          column('exact', ({ rmsWaves }) => fixed(rmsWaves, 3)),
          column('left', ({ rmsLeftWaves }) => fixed(rmsLeftWaves, 3)),
        ],
      },
      {
        title: 'explained',
        columns: [column('percent', ({ share }) => fixed(share === null ? null : 100 * share, 1))],
      },
      {
        title: 'distortion, percent',
        columns: [
          column('exact', ({ distortionPercent }) => fixed(distortionPercent, 2)),
          column('terms', ({ distortionOfTermsPercent }) => fixed(distortionOfTermsPercent, 2)),
        ],
      },
      { title: 'open', columns: [column('stop', ({ openShare }) => fixed(openShare, 3))] },
      {
        title: 'light',
        columns: [column('share', ({ relativeIllumination }) => fixed(relativeIllumination, 3))],
      },
    ],
  ];
}

/** A column under two lines of heading, all to the right, as its numbers are. */
function single(title: string, head: string, cells: string[]): ColumnGroup {
  const width = Math.max(title.length, head.length, ...cells.map((cell) => cell.length));
  return { title: title.padStart(width), columns: [{ head: head.padStart(width), cells }] };
}
