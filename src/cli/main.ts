import { CommanderError } from 'commander';
import { asUserError, exitCodeOf, tellFailure } from './failures.js';
import { dropTemporaries } from './files.js';
import { makeProgram } from './program.js';
import { guardOutput } from './terminal.js';

/** Runs the program; the exit code is left in `process.exitCode`. */
export async function main(args: readonly string[]): Promise<void> {
  guardOutput((error) => asUserError(error, 'standard output'));
  stopOn('SIGINT', 130);
  stopOn('SIGTERM', 143);
  stopOn('SIGHUP', 129);
  process.on('uncaughtException', (error) => {
    dropTemporaries();
    tellFailure(error);
    process.exit(exitCodeOf(error));
  });
  try {
    const program = makeProgram();
    if (args.length === 0) program.outputHelp();
    else await program.parseAsync([...args], { from: 'user' });
  } catch (error) {
    if (error instanceof CommanderError) {
      process.exitCode = error.exitCode === 0 ? 0 : 2;
      return;
    }
    tellFailure(error);
    process.exitCode = exitCodeOf(error);
  } finally {
    dropTemporaries();
  }
}

/** Interrupted: nothing half-written stays behind. */
function stopOn(signal: NodeJS.Signals, code: number): void {
  process.on(signal, () => {
    dropTemporaries();
    process.exit(code);
  });
}
