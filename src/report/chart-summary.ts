/** The closing words of `chart`: what was drawn, and how to send it through the lens. */
import type { ChartTruth } from '../charts/truth.js';
import { wrapText } from './text.js';

export function chartSummary(
  truth: ChartTruth,
  files: { out?: string; truth?: string },
  rigFile: string,
): string {
  const [width, height] = truth.pixels;
  const k = truth.oversample;
  const sentences = [
    `Wrote ${files.out}: ${contents(truth)}, ${width * k} x ${height * k} samples of linear light for ${width} x ${height} pixels.`,
    `Wrote ${files.truth}: where everything stands, for foreglass measure.`,
    'Send it through the lens with',
  ];
  const command =
    `  foreglass render ${files.out} --scene-linear --oversample ${k} \\\n` +
    `    --rig ${rigFile} --out picture.png --linear`;
  return `${sentences.flatMap((sentence) => wrapText(sentence, 80)).join('\n')}\n${command}\n`;
}

function contents({ chart, edges, dots, sectors, bars, corners }: ChartTruth): string {
  const most = (values: readonly number[]) => Math.max(...values) + 1;
  if (edges !== undefined)
    return `${count(edges.length, 'edge')} of ${count(most(edges.map(({ patch }) => patch)), 'square')}`;
  if (dots !== undefined) return count(dots.length, 'disc');
  if (sectors !== undefined)
    return `${count(sectors.length, 'dark sector')} of ${count(most(sectors.map(({ star }) => star)), 'star')}`;
  if (bars !== undefined)
    return `${count(bars.length, 'bar')} in ${count(most(bars.map(({ group }) => group)), 'group')}`;
  if (corners !== undefined) return `a board with ${count(corners.length, 'whole corner')}`;
  return chart;
}

function count(number: number, word: string): string {
  return `${number} ${word}${number === 1 ? '' : 's'}`;
}
