/** The closing words of `render`: what was written, how exact it is, how long it took. */
import { CAUTION } from './caution.js';
import { fixed, significant, wrapText } from './text.js';

/** The part of the record that is told. */
export interface RenderFigures {
  image: { width: number; height: number; bands: readonly string[] };
  threads: number;
  accuracy: { blendBound: number; energyOutsideKernel: number; cells: readonly number[]; kernelPx: number };
  seconds: { total: number; decode: number; encode: number };
}

/** @param files the files written, in the order to tell them; undefined ones are passed over */
export function renderSummary(record: RenderFigures, files: readonly (string | undefined)[]): string {
  const { image, accuracy, seconds, threads } = record;
  const [across, down] = accuracy.cells;
  const written = files.filter((file) => file !== undefined);
  const sentences = [
    `Wrote ${written.join(', ')}: ${image.width} x ${image.height} pixels, ${image.bands.join(', ')}.`,
    `Accuracy: no pixel is off by more than ${significant(accuracy.blendBound, 2)} of full scale from blending PSFs ` +
      `(${across} x ${down} cells); ${significant(100 * accuracy.energyOutsideKernel, 2)} % of the energy falls outside the ` +
      `kernel of ${accuracy.kernelPx} pixels and is given back by normalising.`,
    `Time: ${fixed(seconds.total, 2)} s on ${threads} ${threads === 1 ? 'thread' : 'threads'}, ` +
      `and ${fixed(seconds.decode + seconds.encode, 2)} s to read and write pictures.`,
    CAUTION,
  ];
  return `${sentences.flatMap((sentence) => wrapText(sentence, 80)).join('\n')}\n`;
}
