/** Where the program begins. It loads no more than the help needs; each command loads its own heavy parts when it runs. */
import { fail, run } from './program.js';

// A reader that has seen enough (`foreglass zones | head`) closes the pipe: no fault, and files are still to be finished.
for (const stream of [process.stdout, process.stderr]) {
  stream.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code !== 'EPIPE') process.exit(fail(error));
  });
}
process.on('uncaughtException', (error) => process.exit(fail(error)));

process.exitCode = await run(process.argv.slice(2));
