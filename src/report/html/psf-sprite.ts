/** PSFs on a page: each picture is in it once, and shown wherever it is wanted, turned over where the frame is. */
import { encodePicture } from '../../files/pictures/index.js';
import type { PsfSamples } from '../../imaging/psf-samples.js';
import { html, type Markup, trusted } from './markup.js';

/** Which picture, turned over or not. */
export interface PsfUse {
  picture: number;
  flipX: boolean;
  flipY: boolean;
}

/** The pictures, out of sight. Each is as bright as its own peak allows; the shares of light go through the sRGB curve, which shows faint
 * skirts.
 * @param bandNames of the planes: red, green and blue in their colours, others in grey */
export async function psfSprite(psfs: PsfSamples, bandNames: readonly string[]): Promise<Markup> {
  const urls = await Promise.all(psfs.psfs.map((planes) => psfUrl(planes, psfs.samples, bandNames)));
  return html`<svg class="sprite" aria-hidden="true" focusable="false">${urls.map(
    (url, i) =>
      html`<symbol id="psf-${i}" viewBox="-1 -1 2 2"><image x="-1" y="-1" width="2" height="2" preserveAspectRatio="none" href="${trusted(url)}"/></symbol>`,
  )}</svg>
`;
}

/** A PSF as a picture of its own. */
export function psfPicture({ picture, flipX, flipY }: PsfUse, label: string, id?: string): Markup {
  return html`<svg${id !== undefined && html` id="${id}"`} viewBox="-1 -1 2 2" role="img" aria-label="${label}"><g transform="scale(${flipX ? -1 : 1} ${flipY ? -1 : 1})"><use href="#psf-${picture}" x="-1" y="-1" width="2" height="2"/></g></svg>`;
}

/** A PSF as a PNG in a URL. */
export async function psfUrl(
  planes: readonly Float32Array[],
  samples: number,
  bandNames: readonly string[],
): Promise<string> {
  const peak = Math.max(...planes.map((plane) => plane.reduce((most, value) => Math.max(most, value), 0)));
  const shown = planes.map((plane) => plane.map((value) => value / peak));
  const dark = new Float32Array(samples ** 2);
  const colours = ['red', 'green', 'blue'];
  const isColour = bandNames.length > 1 && bandNames.every((name) => colours.includes(name));
  const channels = isColour
    ? colours.map((colour) => shown[bandNames.indexOf(colour)] ?? dark)
    : [shown.length === 1 ? shown[0] : meanOf(shown)];
  const png = await encodePicture({ width: samples, height: samples, planes: channels }, 'png');
  return `data:image/png;base64,${png.toString('base64')}`;
}

function meanOf(planes: readonly Float32Array[]): Float32Array {
  return planes[0].map((_, i) => planes.reduce((sum, plane) => sum + plane[i], 0) / planes.length);
}
