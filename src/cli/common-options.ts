/** Options that several commands share, in one wording, under the same headings of the help. */
import { availableParallelism } from 'node:os';
import { Option } from 'commander';
import type { OptionValues } from './option-values.js';

export const GROUP = {
  rig: 'Lens, camera and mount:',
  scene: 'Scene:',
  zones: 'What to look at:',
  task: 'Task:',
  sweep: 'What is swept:',
  derive: 'What is traced:',
  chart: 'Chart:',
  picture: 'The picture:',
  output: 'What is written:',
  accuracy: 'Accuracy:',
  running: 'How it runs:',
} as const;

/** The options of a command that reads a rig, as commander hands them over. */
export interface RigTexts {
  rig: string;
  fNumber?: string;
  sensorShift?: string;
}

/** The options of every command, as commander hands them over. */
export interface CommonTexts {
  /** true: on stdout; a text: the file. */
  json?: true | string;
  threads?: string;
  quiet?: boolean;
}

export interface RigValues {
  rig: string;
  overrides: { fNumber?: number; sensorShiftUm?: number };
}

/** An option under a heading of the help. */
export function grouped(heading: string, flags: string, description: string): Option {
  return new Option(flags, description).helpGroup(heading);
}

export function rigOptions(): Option[] {
  return [
    grouped(GROUP.rig, '--rig <file>', 'rig file: lens, camera and mount').makeOptionMandatory(),
    grouped(
      GROUP.rig,
      '--f-number <N>',
      'working f-number in place of the one in the rig file, from lens.f_number up',
    ),
    grouped(
      GROUP.rig,
      '--sensor-shift <um>',
      'shift of the sensor along the axis in micrometres, + away from the lens, in place of the one in the rig file',
    ),
  ];
}

/** @param whatJson what `--json` writes, in the help's words */
export function commonOptions(whatJson: string): Option[] {
  return [
    grouped(
      GROUP.output,
      '--json [file]',
      `${whatJson}, on stdout and nothing else there, or in the file: JSON if its name ends in .json, else YAML`,
    ),
    grouped(
      GROUP.running,
      '--threads <number>',
      'processor threads to use; the result does not depend on it (default: all cores)',
    ),
    grouped(
      GROUP.running,
      '--quiet',
      'no progress, no closing words and no warnings (a result keeps its warnings)',
    ),
  ];
}

/** Checks the options of `rigOptions`; faults go to `values`. */
export function readRigValues(values: OptionValues, texts: RigTexts): RigValues {
  const overrides: RigValues['overrides'] = {};
  const fNumber = values.number('--f-number', texts.fNumber, { min: 0, aboveMin: true });
  const sensorShiftUm = values.number('--sensor-shift', texts.sensorShift);
  if (fNumber !== undefined) overrides.fNumber = fNumber;
  if (sensorShiftUm !== undefined) overrides.sensorShiftUm = sensorShiftUm;
  return { rig: values.path('--rig', texts.rig) ?? '', overrides };
}

/** Number of threads asked for, by default one a core. */
export function readThreads(values: OptionValues, texts: CommonTexts): number {
  return (
    values.number('--threads', texts.threads, { min: 1, max: 64, integer: true }) ??
    Math.min(64, availableParallelism())
  );
}
