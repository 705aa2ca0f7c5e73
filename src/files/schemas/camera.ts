/** The camera of a rig. */
import { z } from 'zod';
import { crossChecked, isMapping, numberIn, type Report } from './cross-check.js';
import { choice, list, mapping, number, pair, wavelengthNm } from './values.js';

const pixelCount = (what: string) => number({ min: 1, max: 65535, whole: true }, what);

const spectralLine = z.union(
  [
    wavelengthNm,
    pair(wavelengthNm, number({ above: 0, max: 1e9 }, 'Weight of the line.'), 'a pair [nm, weight]'),
  ],
  { error: 'a wavelength in nm, or a pair [nm, weight]' },
);
const band = (what: string) =>
  list(spectralLine, 'a list of wavelengths in nm or pairs [nm, weight]')
    .describe(`${what} Unit: nm.`)
    .optional();

const COLOUR_MOSAICS = ['rggb', 'bggr', 'grbg', 'gbrg'] as const;
const BAND_WORDS = 'mono alone, or red, green and blue';
const COLOUR_BANDS = ['red', 'green', 'blue'] as const;

const bands = crossChecked(
  mapping({
    mono: band('The only band of a camera without colour.'),
    red: band('The red band of a colour camera.'),
    green: band('The green band of a colour camera.'),
    blue: band('The blue band of a colour camera.'),
  }),
  (value, report) => {
    const colours = COLOUR_BANDS.filter((name) => value[name] !== undefined);
    if (value.mono !== undefined) {
      for (const name of colours) {
        report([name], {
          message: 'stands beside mono',
          allowed: BAND_WORDS,
          inKey: true,
        });
      }
    } else if (colours.length === 0) {
      report([], {
        message: 'names no band',
        allowed: BAND_WORDS,
        inKey: true,
        lacks: ['mono', ...COLOUR_BANDS],
      });
    } else {
      for (const name of COLOUR_BANDS.filter((band) => !colours.includes(band))) {
        report([name], {
          message: 'is missing',
          allowed: BAND_WORDS,
          missing: true,
        });
      }
    }
    for (const [name, lines] of Object.entries(value)) checkLines(name, lines, report);
  },
).meta({
  description:
    'Wavelengths of each band: mono alone, or red, green and blue. An entry is a wavelength or [nm, weight]. Unit: nm.',
  oneOf: [
    { required: ['mono'], maxProperties: 1 },
    { required: [...COLOUR_BANDS], not: { required: ['mono'] } },
  ],
});

const sensor = mapping({
  white_e: number(
    { above: 0, max: 1e9, unit: 'electrons' },
    'Signal of a scene value of 1 at full illumination.',
  ),
  full_well_e: number({ above: 0, max: 1e9, unit: 'electrons' }, 'Full well: more electrons are lost.'),
  dark_noise_e: number(
    { min: 0, max: 1e6, unit: 'electrons' },
    'Temporal dark noise, standard deviation.',
  ).default(0),
  dark_e: number({ min: 0, max: 1e9, unit: 'electrons' }, 'Dark signal of the exposure.').default(0),
  prnu_percent: number(
    { min: 0, max: 100, unit: '%' },
    'Photo response non-uniformity, standard deviation.',
  ).default(0),
  dsnu_e: number(
    { min: 0, max: 1e6, unit: 'electrons' },
    'Dark signal non-uniformity, standard deviation.',
  ).default(0),
  bit_depth: number({ min: 1, max: 16, whole: true, unit: 'bits' }, 'Bits of a pixel.').default(12),
}).describe('The sensor in the terms of EMVA 1288. Left out: no noise.');

export const cameraPart = crossChecked(
  mapping({
    pixels: pair(
      pixelCount('Width.'),
      pixelCount('Height.'),
      'a pair [width, height] of whole numbers',
    ).describe('Width and height. Unit: pixels.'),
    pixel_pitch_um: number({ above: 0, max: 1000, unit: 'um' }, 'Distance from pixel to pixel.'),
    fill_factor: number(
      { above: 0, max: 1 },
      'Side of the light-sensitive square as a share of the pitch.',
    ).default(1),
    bands_nm: bands,
    mosaic: choice(
      ['none', ...COLOUR_MOSAICS],
      'Colour filters of the first two by two pixels, row by row.',
    ).default('none'),
    sensor: sensor.optional(),
  }),
  (camera, report) => {
    const { mosaic, bands_nm } = camera;
    if (!isMapping(bands_nm) || bands_nm.mono === undefined) return;
    if (!COLOUR_MOSAICS.some((word) => word === mosaic)) return;
    const advice = 'State red, green and blue in bands_nm, or write mosaic: none.';
    report(['mosaic'], {
      message: 'needs the bands red, green and blue',
      allowed: 'none for a camera with the band mono',
      advice,
    });
  },
).meta({ title: 'Camera', description: 'The camera behind the lens: its pixels, its bands, its sensor.' });

export type CameraFile = z.output<typeof cameraPart>;

function checkLines(name: string, lines: unknown, report: Report): void {
  if (!Array.isArray(lines)) return;
  const seen = new Set<number>();
  for (const [index, line] of lines.entries()) {
    const nm = numberIn(Array.isArray(line) ? line[0] : line);
    if (nm === undefined) continue;
    if (seen.has(nm)) {
      report([name, index], {
        message: 'is a wavelength that stands twice',
        advice: 'Add the two weights up.',
      });
    }
    seen.add(nm);
  }
}
