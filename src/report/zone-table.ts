/** The figures by field zone as a table for the terminal. It only shows: every number comes from the report. */
import type { Zone, ZonesReport } from '../optics/zones.js';
import { CAUTION } from './caution.js';
import {
  type Column,
  type ColumnGroup,
  fixed,
  layOutColumns,
  type Paint,
  PLAIN,
  significant,
  wrapText,
} from './text.js';

const WIDTH = 80;

interface Section {
  title: string;
  lead: ColumnGroup;
  groups: readonly ColumnGroup[];
}

/** One row a zone (a field point in one band), the two directions side by side, units in the head; within 80 columns. */
export function zoneTable(report: ZonesReport, paint: Paint = PLAIN): string {
  const { zones } = report;
  const head = `${report.rig}: f/${significant(report.fNumber, 3)}, ${report.model} model`;
  const sections = [cameraSection(zones), lensSection(zones), otherSection(zones)];
  return [
    ...wrapText(head, WIDTH).map((line) => paint.strong(line)),
    'along: modulation along the radius (tangential); across: across it (sagittal)',
    ...sections.flatMap(({ title, lead, groups }) =>
      layOutColumns(lead, groups, WIDTH, paint).flatMap((table) => ['', paint.strong(title), ...table]),
    ),
    '',
    ...wrapText(CAUTION, WIDTH).map((line) => paint.faint(line)),
    '',
  ].join('\n');
}

function cameraSection(zones: readonly Zone[]): Section {
  const byFrequency = zones[0].mtf.map(({ lpPerMm }, at) => ({
    title: frequencyTitle(lpPerMm),
    columns: bothWays((zone) => zone.mtf[at].camera, zones, 3),
  }));
  const mtf50 = { title: 'MTF50, lp/mm', columns: bothWays((zone) => zone.mtf50LpPerMm, zones, 1) };
  return {
    title: 'Contrast (MTF) of lens and camera together',
    lead: leadColumns(nameColumn(zones), heightColumn(zones), bandColumn(zones)),
    groups: [...byFrequency, mtf50],
  };
}

function lensSection(zones: readonly Zone[]): Section {
  return {
    title: 'Contrast (MTF) of the lens alone; limit: the same stop without aberration',
    lead: leadColumns(nameColumn(zones), bandColumn(zones)),
    groups: zones[0].mtf.map(({ lpPerMm }, at) => ({
      title: frequencyTitle(lpPerMm),
      columns: [
        { head: 'limit', cells: zones.map((zone) => fixed(zone.mtf[at].diffractionLimit, 3)) },
        ...bothWays((zone) => zone.mtf[at].lens, zones, 3),
      ],
    })),
  };
}

function otherSection(zones: readonly Zone[]): Section {
  const single = (
    title: string,
    head: string,
    figure: (zone: Zone) => number,
    decimals: number,
  ): ColumnGroup => ({
    title,
    columns: [{ head, cells: zones.map((zone) => fixed(figure(zone), decimals)) }],
  });
  return {
    title: 'Wavefront, distortion, lateral colour, light, and the sensor shift of best focus',
    lead: leadColumns(nameColumn(zones), bandColumn(zones)),
    groups: [
      single('Strehl', 'ratio', (zone) => zone.strehl, 3),
      single('RMS', 'waves', (zone) => zone.wavefrontRmsWaves, 3),
      single('distortion', 'percent', (zone) => zone.distortionPercent, 2),
      single('lateral', 'um', (zone) => zone.lateralColourUm, 2),
      single('light', 'share', (zone) => zone.relativeIllumination, 3),
      { title: 'best focus, um', columns: bothWays((zone) => zone.bestFocusUm, zones, 1) },
    ],
  };
}

/** How a field point is written on the command line: its place, or h with the azimuth where that is not 0. */
export function zoneName({ place, field, azimuthDeg }: Pick<Zone, 'place' | 'field' | 'azimuthDeg'>): string {
  if (place !== null) return place;
  const h = significant(field, 4);
  return azimuthDeg === 0 ? h : `${h}@${significant(azimuthDeg, 4)}`;
}

function leadColumns(...columns: Column[]): ColumnGroup {
  return { title: '', columns };
}

function nameColumn(zones: readonly Zone[]): Column {
  return { head: 'zone', cells: zones.map(zoneName), align: 'left' };
}

function heightColumn(zones: readonly Zone[]): Column {
  const decimals = zones.some(({ imageHeightMm }) => imageHeightMm >= 10) ? 1 : 2;
  return { head: 'mm', cells: zones.map(({ imageHeightMm }) => fixed(imageHeightMm, decimals)) };
}

function bandColumn(zones: readonly Zone[]): Column {
  return { head: 'band', cells: zones.map(({ band }) => band), align: 'left' };
}

/** The same figure in the two directions. */
function bothWays(
  figure: (zone: Zone) => { tangential: number | null; sagittal: number | null },
  zones: readonly Zone[],
  decimals: number,
): Column[] {
  return [
    { head: 'along', cells: zones.map((zone) => fixed(figure(zone).tangential, decimals)) },
    { head: 'across', cells: zones.map((zone) => fixed(figure(zone).sagittal, decimals)) },
  ];
}

function frequencyTitle(lpPerMm: number): string {
  return `${significant(lpPerMm, 4)} lp/mm`;
}
