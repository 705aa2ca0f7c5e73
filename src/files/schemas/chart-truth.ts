/** The truth file of a chart: what it holds and where. */
import type { z } from 'zod';
import { choice, list, mapping, number, pair, text } from './values.js';

const px = (description: string) => number({ min: -1e7, max: 1e7 }, description);
const positivePx = (description: string) => number({ above: 0, max: 1e7 }, description);
const degrees = (description: string) => number({ min: -360, max: 360, unit: 'deg' }, description);
const point = (description: string) =>
  pair(px('Place along x.'), px('Place along y.'), 'a pair [x, y] in pixels').describe(description);
const count = (description: string) => number({ min: 0, max: 1e6, whole: true }, description);
const level = (description: string) => number({ min: 0, max: 1 }, description);

const place = {
  x: px('Ideal place along x, in sensor pixels.'),
  y: px('Ideal place along y, in sensor pixels.'),
  field: number({ min: 0, max: 1000 }, 'Distance from the optical axis over the full field.'),
  azimuth_deg: degrees('Direction from the axis, from +x toward +y.'),
};
const modulation = choice(
  ['tangential', 'sagittal'],
  'The modulation measured: along the radius or across it.',
);

const edge = mapping({
  patch: count('The square that the edge belongs to.'),
  ...place,
  from: point('One end of the edge.'),
  to: point('The other end of the edge.'),
  direction: modulation,
  normal_deg: degrees('Across the edge, from dark to bright.'),
  off_radius_deg: degrees('Of the normal against the radius, or against its perpendicular.'),
  angle_deg: degrees('Of the edge against the nearest row or column of pixels.'),
  room_px: positivePx('Nothing else lies so near to the edge.'),
});
const dot = mapping({ ...place, radius_px: positivePx('Radius of the disc.') });
const sector = mapping({
  star: count('The star that the sector belongs to.'),
  ...place,
  from_deg: degrees('Where the sector begins.'),
  to_deg: degrees('Where it ends.'),
  inner_px: number({ min: 0, max: 1e7 }, 'Inner radius.'),
  outer_px: positivePx('Outer radius.'),
});
const bar = mapping({
  group: count('The group that the bar belongs to.'),
  cycles_per_pixel: positivePx('Frequency of the group.'),
  direction: modulation,
  ...place,
  runs_deg: degrees('The way that the bar runs.'),
  length_px: positivePx('Length.'),
  width_px: positivePx('Width.'),
});

const MOST = 20_000;
const many = <Item extends Parameters<typeof list>[0]>(item: Item, words: string) =>
  list(item, words, MOST).optional();

export const chartTruthFile = mapping({
  foreglass: text('Version of the program that drew the chart.'),
  chart: choice(['edges', 'dots', 'star', 'bars', 'checker'], 'The kind of chart.'),
  rig: text('Name of the lens of the rig that the chart was drawn for.'),
  pixels: pair(
    number({ min: 1, max: 1e6, whole: true }, 'Width.'),
    number({ min: 1, max: 1e6, whole: true }, 'Height.'),
    'a pair [width, height] of whole numbers',
  ).describe('Pixels of the sensor.'),
  pixel_pitch_um: number({ above: 0, max: 1000, unit: 'um' }, 'Distance of the pixels.'),
  axis_px: point('Where the optical axis meets the sensor.'),
  full_field_mm: number({ above: 0, max: 1e6, unit: 'mm' }, 'Image height at h = 1.'),
  oversample: number({ min: 1, max: 16, whole: true }, 'Samples of the scene a pixel, on each side.'),
  levels: mapping({ white: level('Light of the white parts.'), dark: level('Light of the dark parts.') }),
  edges: many(edge, 'a list of edges'),
  dots: many(dot, 'a list of discs'),
  sectors: many(sector, 'a list of sectors'),
  bars: many(bar, 'a list of bars'),
  corners: many(mapping(place), 'a list of places'),
  cell: mapping({
    size_px: positivePx("Side of a checker's cells."),
    angle_deg: degrees('The way that their rows run.'),
  }).optional(),
});

export type ChartTruthFile = z.output<typeof chartTruthFile>;
