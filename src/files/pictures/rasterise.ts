/** Drawings as pictures. */
import { sharp } from './library.js';

/** A PNG file of a drawing, of the drawing's own size. Text in it would take the machine's fonts: draw it as paths.
 * @param svg a text of SVG; pictures in it as data URLs */
export async function rasterise(svg: string): Promise<Buffer> {
  return sharp(Buffer.from(svg), { density: 72 })
    .flatten({ background: '#ffffff' })
    .png({ compressionLevel: 9, adaptiveFiltering: true })
    .toBuffer();
}
