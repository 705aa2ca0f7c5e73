/** The command line as a whole: its commands, and what every one of them does alike. */
import { Command, CommanderError } from 'commander';
import { VERSION } from '../version.js';
import { chartCommand } from './chart.js';
import { GROUP, grouped } from './common-options.js';
import { datasetCommand } from './dataset.js';
import { deriveCommand } from './derive.js';
import { DEBUG_VARIABLE, describeFailure, EXIT } from './failure.js';
import { judgeCommand } from './judge.js';
import { measureCommand } from './measure.js';
import { renderCommand } from './render.js';
import { startCommand } from './start.js';
import { sweepCommand } from './sweep.js';
import { workerCommand } from './worker.js';
import { zonesCommand } from './zones.js';

/** @param endWith takes the exit status of a command that is done without a fault, where it is not 0 */
export function buildProgram(endWith: (status: number) => void = () => {}): Command {
  const program = new Command('foreglass')
    .description(
      'Shows what a camera lens will do to a picture before the lens is bought, from its third-order aberrations.',
    )
    .version(VERSION, '--version', 'print the version')
    .helpOption('-h, --help', 'print this help')
    .helpCommand('help [COMMAND]', 'print the help of a command')
    .usage('COMMAND ... --rig FILE')
    .configureHelp({
      subcommandTerm: (command) =>
        [command.name(), ...command.registeredArguments.map((argument) => argument.name())].join(' '),
    })
    .addHelpText(
      'after',
      `
Example:
  foreglass start hall && cd hall
  foreglass zones --rig tags.rig.yaml

Exit status: 0 done, 1 done but the task is not met, 2 the input is wrong,
3 the run failed, 130 interrupted.`,
    );
  for (const command of [
    startCommand(),
    renderCommand(),
    zonesCommand(),
    judgeCommand(endWith),
    sweepCommand(endWith),
    deriveCommand(),
    chartCommand(),
    measureCommand(),
    datasetCommand(),
    workerCommand(),
  ]) {
    program.addCommand(
      command
        .addHelpOption(grouped(GROUP.running, '-h, --help', 'print this help'))
        .showHelpAfterError(`Try: foreglass ${command.name()} --help`)
        .exitOverride(),
    );
  }
  return program.showHelpAfterError('Try: foreglass --help').exitOverride();
}

/** Run one command line; what goes wrong is said on stderr.
 * @param words the words behind the program's name
 * @returns the exit status
 */
export async function run(words: readonly string[]): Promise<number> {
  try {
    let status: number = EXIT.done;
    const program = buildProgram((given) => {
      status = given;
    });
    await program.parseAsync(words, { from: 'user' });
    return status;
  } catch (error) {
    if (error instanceof CommanderError) {
      if (error.code === 'commander.missingArgument') process.stderr.write(swallowedHint(words));
      return error.exitCode === 0 ? EXIT.done : EXIT.wrongInput; // its message is out already
    }
    return fail(error);
  }
}

/** `render --json scene.png` gives the scene to the option before it: said where an argument is missing for that reason. */
function swallowedHint(words: readonly string[]): string {
  const option = ['--json', '--csv'].find((name) => words.includes(name));
  const next = option && words[words.indexOf(option) + 1];
  if (next === undefined || next.startsWith('-')) return '';
  return `'${next}' was read as the file of ${option}: put ${option} behind the other words to have it on stdout.\n`;
}

/** Say what went wrong and give the exit status. */
export function fail(error: unknown): number {
  const { status, text } = describeFailure(error, Boolean(process.env[DEBUG_VARIABLE]));
  process.stderr.write(`${text}\n`);
  return status;
}
