/** The bar that shows how far a long job has come: on stderr, only on a terminal, and gone when the job is done. */

export interface Progress {
  stage: string;
  done: number;
  total: number;
}

export interface ProgressBar {
  show(progress: Progress): void;
  /** Take the bar away, so that what is printed next stands on a line of its own. */
  end(): void;
}

const NO_BAR: ProgressBar = { show: () => {}, end: () => {} };

export async function openProgressBar(
  quiet: boolean,
  stream: NodeJS.WriteStream = process.stderr,
): Promise<ProgressBar> {
  if (quiet || !stream.isTTY) return NO_BAR;
  const { default: cliProgress } = await import('cli-progress');
  const bar = new cliProgress.SingleBar({
    format: '{stage}  {bar}  {percentage} %',
    barCompleteChar: '#',
    barIncompleteChar: '.',
    barsize: 32,
    clearOnComplete: true,
    linewrap: true, // else the terminal is left without line breaks where the program ends at once
    gracefulExit: false, // its own handler of Ctrl-C would end the program before the job has tidied up
    stream,
  });
  let stage: string | undefined;
  return {
    show(progress) {
      const payload = { stage: progress.stage.padEnd(STAGE_WIDTH) };
      if (stage === undefined) bar.start(progress.total, progress.done, payload);
      if (stage !== progress.stage) bar.setTotal(progress.total);
      stage = progress.stage;
      bar.update(progress.done, payload);
    },
    end() {
      if (stage !== undefined) bar.stop();
      stage = undefined;
    },
  };
}

/** Wide enough for the names of the stages, so that the bar does not jump. */
const STAGE_WIDTH = 8;
