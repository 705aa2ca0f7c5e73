/** The sheet of a rendered picture: the same pieces of scene and picture below one another, with the PSF and the contrast there. */
import { encodePicture } from '../files/pictures/index.js';
import type { Crop, CropPlan } from '../imaging/crops.js';
import type { PsfSamples } from '../imaging/psf-samples.js';
import type { Raster } from '../imaging/raster.js';
import type { BothDirections } from '../optics/zones.js';
import { VERSION } from '../version.js';
import { CAUTION } from './caution.js';
import { escapeText } from './html/markup.js';
import { psfUrl } from './html/psf-sprite.js';
import { FAINT, GRID, INK, SERIES } from './plots/theme.js';
import { inStrokes, type StrokePlace, text, textWidth } from './stroke-font.js';
import { fixed, significant } from './text.js';

export interface SheetPlace {
  crop: Crop;
  ideal: Raster;
  recorded: Raster;
  strehl: number;
  /** Contrast of lens and camera at `lpPerMm`. */
  mtf: BothDirections;
}

export interface Sheet {
  rig: string;
  /** What else the picture depends on, in a line. */
  settings: string;
  pixels: readonly [width: number, height: number];
  bands: readonly string[];
  plan: CropPlan;
  places: readonly SheetPlace[];
  psfs: PsfSamples;
  lpPerMm: number;
  /** The band of the figures, where there are several. */
  band?: string;
}

const MARGIN = 30;
const LABEL = 116;
const GAP = 18;
const COLUMN = 320;
const PSF_SIDE = 216;
const BAR = 200;
/** Width of the frame in small and its words. */
const FRAME_MARK = 290;

/** The sheet as a text of SVG; its lettering is drawn, so that it looks alike on every machine. Same sheet, same bytes. */
export async function sheetSvg(sheet: Sheet): Promise<string> {
  const { plan, places, psfs, bands, band, lpPerMm } = sheet;
  const scale = Math.max(1, Math.floor(COLUMN / plan.width));
  const cropHeight = plan.height * scale;
  const width = 2 * MARGIN + LABEL + places.length * COLUMN + (places.length - 1) * GAP;
  const headRoom = width - 2 * MARGIN - FRAME_MARK;
  const headTop = 108;
  const idealTop = headTop + 42;
  const recordedTop = idealTop + cropHeight + 14;
  const psfTop = recordedTop + cropHeight + 22;
  const barTop = psfTop + PSF_SIDE + 22;
  const footTop = barTop + 92;
  const foot = wrapStrokes(`${CAUTION} Made by foreglass ${VERSION}.`, 9, width - 2 * MARGIN);
  const height = footTop + foot.length * 18 + MARGIN - 8;
  const left = (at: number) => MARGIN + LABEL + at * (COLUMN + GAP);
  const columns = await Promise.all(
    places.map(async ({ crop, ideal, recorded, strehl, mtf }, at) => {
      const x = left(at);
      const image = (url: string, y: number, w: number, h: number) =>
        `<image x="${x}" y="${y}" width="${w}" height="${h}" href="${url}"/>`;
      const frame = (y: number, w: number, h: number) =>
        `<rect x="${x - 0.5}" y="${y - 0.5}" width="${w + 1}" height="${h + 1}" fill="none" stroke="${GRID.light}"/>`;
      const [sceneUrl, pictureUrl, psf] = await Promise.all([
        cropUrl(ideal, scale, bands),
        cropUrl(recorded, scale, bands),
        psfUrl(psfs.psfs[at], psfs.samples, bands),
      ]);
      const w = plan.width * scale;
      const beside = x + PSF_SIDE + 12;
      const bar = (name: string, value: number, y: number, ink: string) =>
        strokes(name, { x, y: y + 11, capHeight: 11 }) +
        `<rect x="${x + 62}" y="${y}" width="${BAR}" height="12" fill="${GRID.light}"/>` +
        `<rect x="${x + 62}" y="${y}" width="${Number((BAR * Math.min(1, value)).toFixed(2))}" height="12" fill="${ink}"/>` +
        strokes(fixed(value, 2), { x: x + 62 + BAR + 10, y: y + 11, capHeight: 11, weight: 0.17 });
      return [
        strokes(crop.name, { x, y: headTop + 14, capHeight: 14, weight: 0.17 }),
        strokes(`h = ${fixed(crop.field, 2)}`, {
          x: x + textWidth(crop.name, 14) + 16,
          y: headTop + 14,
          capHeight: 11,
          ink: FAINT.light,
        }),
        image(sceneUrl, idealTop, w, cropHeight) + frame(idealTop, w, cropHeight),
        image(pictureUrl, recordedTop, w, cropHeight) + frame(recordedTop, w, cropHeight),
        image(psf, psfTop, PSF_SIDE, PSF_SIDE),
        strokes('Strehl', { x: beside, y: psfTop + 14, capHeight: 11, ink: FAINT.light }),
        strokes(fixed(strehl, 3), { x: beside, y: psfTop + 36, capHeight: 13, weight: 0.17 }),
        at === 0
          ? strokes('side', { x: beside, y: psfTop + PSF_SIDE - 22, capHeight: 11, ink: FAINT.light }) +
            strokes(`${significant(psfs.sidePx, 3)} px`, {
              x: beside,
              y: psfTop + PSF_SIDE - 2,
              capHeight: 11,
              ink: FAINT.light,
            })
          : '',
        bar('along', mtf.tangential, barTop, SERIES[0].light),
        bar('across', mtf.sagittal, barTop + 26, SERIES[1].light),
      ].join('\n');
    }),
  );
  const label = (words: readonly string[], y: number) =>
    words
      .map((word, i) => strokes(word, { x: MARGIN, y: y + 14 + 20 * i, capHeight: 12, weight: 0.16 }))
      .join('');
  const contrast = ['contrast at', `${significant(lpPerMm, 3)} lp/mm`, ...(band === undefined ? [] : [band])];
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}" viewBox="0 0 ${width} ${height}" role="img">
<title>${escapeText(sheet.rig)}</title>
<desc>${escapeText(inWords(sheet))}</desc>
<rect width="100%" height="100%" fill="#ffffff"/>
${strokes(sheet.rig, { x: MARGIN, y: 52, capHeight: fitting(sheet.rig, 20, headRoom), weight: 0.16 })}
${strokes(sheet.settings, { x: MARGIN, y: 84, capHeight: fitting(sheet.settings, 11, headRoom), ink: FAINT.light })}
${frameMark(sheet, width - MARGIN)}
${label(['ideal', 'scene'], idealTop)}
${label(['recorded', 'picture'], recordedTop)}
${label(['PSF', 'of the lens'], psfTop)}
${label(contrast, barTop - 2)}
${columns.join('\n')}
${foot.map((line, i) => strokes(line, { x: MARGIN, y: footTop + 9 + 18 * i, capHeight: 9, ink: FAINT.light })).join('\n')}
</svg>
`;
}

/** The frame in small, with the places in it. */
function frameMark({ pixels, plan, places }: Sheet, right: number): string {
  const [frameWidth, frameHeight] = pixels;
  const scale = Math.min(120 / frameWidth, 78 / frameHeight);
  const x = right - frameWidth * scale;
  const y = 20;
  const box = (left: number, top: number, w: number, h: number, more: string) =>
    `<rect x="${round(x + left * scale)}" y="${round(y + top * scale)}" width="${round(w * scale)}" height="${round(h * scale)}" ${more}/>`;
  return (
    box(0, 0, frameWidth, frameHeight, `fill="none" stroke="${INK.light}"`) +
    places
      .map(({ crop: { recorded } }) =>
        box(recorded.left, recorded.top, plan.width, plan.height, `fill="${SERIES[0].light}"`),
      )
      .join('') +
    strokes('places in the frame', { x: x - 14, y: y + 14, capHeight: 10, ink: FAINT.light, anchor: 'end' })
  );
}

/** A crop as a PNG in a URL, each pixel a square, in sRGB. */
async function cropUrl(crop: Raster, scale: number, bands: readonly string[]): Promise<string> {
  const enlarged = enlarge(crop, scale);
  const planes = enlarged.planes;
  const colours = ['red', 'green', 'blue'];
  const isColour = bands.length > 1 && bands.every((name) => colours.includes(name));
  const dark = new Float32Array(planes[0].length);
  const channels = isColour ? colours.map((name) => planes[bands.indexOf(name)] ?? dark) : [planes[0]];
  const png = await encodePicture({ ...enlarged, planes: channels }, 'png');
  return `data:image/png;base64,${png.toString('base64')}`;
}

function enlarge({ width, height, planes }: Raster, scale: number): Raster {
  const wide = width * scale;
  return {
    width: wide,
    height: height * scale,
    planes: planes.map((plane) =>
      Float32Array.from(
        { length: wide * height * scale },
        (_, i) => plane[Math.floor(i / wide / scale) * width + Math.floor((i % wide) / scale)],
      ),
    ),
  };
}

function strokes(words: string, place: StrokePlace): string {
  return text(inStrokes(words), { weight: 0.13, ink: INK.light, ...place });
}

/** The height of letters with which a line fits, at most `capHeight`. */
function fitting(words: string, capHeight: number, room: number): number {
  return Math.min(capHeight, (capHeight * room) / Math.max(1, textWidth(inStrokes(words), capHeight)));
}

/** Lines of at most `room` pixels. */
function wrapStrokes(words: string, capHeight: number, room: number): string[] {
  const lines: string[] = [];
  for (const word of inStrokes(words).split(' ')) {
    const longer = lines.length === 0 ? word : `${lines.at(-1)} ${word}`;
    if (lines.length > 0 && textWidth(longer, capHeight) <= room) lines[lines.length - 1] = longer;
    else lines.push(word);
  }
  return lines;
}

function inWords({ places, lpPerMm }: Sheet): string {
  const parts = places.map(
    ({ crop, strehl, mtf }) =>
      `${crop.name}, h = ${fixed(crop.field, 2)}: Strehl ratio ${fixed(strehl, 3)}, contrast at ${significant(lpPerMm, 4)} lp/mm ` +
      `${fixed(mtf.tangential, 2)} along and ${fixed(mtf.sagittal, 2)} across the radius`,
  );
  return `Ideal scene, recorded picture and PSF side by side. ${parts.join('; ')}.`;
}

function round(value: number): number {
  return Number(value.toFixed(2));
}
