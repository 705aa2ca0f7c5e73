/** What `dataset` says when it is done, and how it tells of its progress. */
import { CAUTION } from './caution.js';
import { wrapText } from './text.js';

/** The part of the record that is told. */
export interface DatasetFigures {
  out: string;
  pictures: number;
  kept: number;
  damaged: number;
  made: number;
  seconds: number;
  counts?: {
    pictures: number;
    labels: number;
    dropped: { cut: number; outside: number };
    redrawn: number;
  };
}

const WIDTH = 80;

export function datasetSummary({ out, kept, damaged, made, seconds, counts }: DatasetFigures): string {
  const sentences = [
    `${out}: made ${pictures(made)}${made === 0 ? '' : ` in ${duration(seconds)}`}` +
      `${kept === 0 ? '' : `, kept ${pictures(kept)} that ${kept === 1 ? 'was' : 'were'} there`}` +
      `${damaged === 0 ? '' : `, ${damaged} of them anew because of damage`}.`,
  ];
  if (counts === undefined) {
    sentences.push('This is a shard: when all are done, run the command once more with --merge.');
  } else {
    const { cut, outside } = counts.dropped;
    sentences.push(
      `The data set has ${pictures(counts.pictures)} with ${counts.labels} labels. ` +
        `${cut} were dropped because too little of them is in the picture, ${outside} lie outside of it.`,
    );
    if (counts.redrawn > 0) {
      sentences.push(
        `For ${pictures(counts.redrawn)} the values were drawn anew, because the first ones made no lens that works: ` +
          'see "redrawn" in records.jsonl.',
      );
    }
    sentences.push(CAUTION);
  }
  return text(sentences);
}

/** What a run would take. */
export function forecastSummary(forecast: {
  pictures: number;
  kept: number;
  bytes: number;
  seconds: number;
}): string {
  const { pictures: count, kept, bytes, seconds } = forecast;
  const there = kept === 0 ? '' : ` ${pictures(kept)} ${kept === 1 ? 'is' : 'are'} there already.`;
  return text([
    `To be made: ${pictures(count)}, about ${size(bytes)}, in about ${duration(seconds)}.${there}`,
  ]);
}

/** `120/500  4.2 a second  2 min left`. */
export function progressWords(progress: {
  done: number;
  total: number;
  picturesPerSecond?: number;
  secondsLeft?: number;
}): string {
  const { done, total, picturesPerSecond, secondsLeft } = progress;
  const words = [`${done}/${total}`];
  if (picturesPerSecond !== undefined) words.push(rate(picturesPerSecond));
  if (secondsLeft !== undefined) words.push(`${duration(secondsLeft)} left`);
  return words.join('  ');
}

function rate(perSecond: number): string {
  if (perSecond >= 1) return `${perSecond.toPrecision(2)} a second`;
  return `${(60 * perSecond).toPrecision(2)} a minute`;
}

function pictures(count: number): string {
  return `${count} ${count === 1 ? 'picture' : 'pictures'}`;
}

/** A time as people say it. */
export function duration(seconds: number): string {
  if (seconds < 1) return 'less than a second';
  if (seconds < 100) return `${Math.round(seconds)} s`;
  if (seconds < 100 * 60) return `${Math.round(seconds / 60)} min`;
  if (seconds < 72 * 3600) return `${Math.round(seconds / 3600)} h`;
  return `${Math.round(seconds / 86400)} days`;
}

function size(bytes: number): string {
  for (const [unit, name] of [
    [1e12, 'TB'],
    [1e9, 'GB'],
    [1e6, 'MB'],
  ] as const) {
    if (bytes >= unit) return `${(bytes / unit).toPrecision(2)} ${name}`;
  }
  return `${Math.ceil(bytes / 1e3)} kB`;
}

function text(sentences: readonly string[]): string {
  return `${sentences.flatMap((sentence) => wrapText(sentence, WIDTH)).join('\n')}\n`;
}
