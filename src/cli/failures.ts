import { UserError } from '../index.js';
import { complain, errColour } from './terminal.js';

/** A number an operating system's refusal stands for, in words. */
const REFUSALS: Readonly<Record<string, [string, string]>> = {
  ENOENT: ['is not there', 'Check the name and the folder.'],
  EACCES: ['may not be read or written', 'Check the permissions of the file and its folder.'],
  EPERM: ['may not be read or written', 'Check the permissions of the file and its folder.'],
  EROFS: ['lies on a read-only disk', 'Choose another place with --out.'],
  ENOSPC: ['could not be written: the disk is full', 'Make room, or choose another place with --out.'],
  EDQUOT: ['could not be written: the disk quota is used up', 'Make room, or choose another place with --out.'],
  EISDIR: ['is a folder', 'Name a file.'],
  ENOTDIR: ['goes through a file as if it were a folder', 'Check the path.'],
  EEXIST: ['goes through a file as if it were a folder', 'Check the path.'],
  EMFILE: ['could not be opened: too many files are open', 'Close some and try again.'],
  ENAMETOOLONG: ['has too long a name', 'Choose a shorter one.'],
  ELOOP: ['is a link that leads to itself', 'Check the path.'],
  EBUSY: ['is in use by another program', 'Close it there and try again.'],
};

/** The same, for what was being written where. */
export function asUserError(error: unknown, file: string): unknown {
  const { code } = error as NodeJS.ErrnoException;
  const known = code === undefined ? undefined : REFUSALS[code];
  if (!known) return error;
  return new UserError(`${file}: ${known[0]}.`, { exitCode: 2, suggestion: known[1] });
}

export function exitCodeOf(error: unknown): number {
  return error instanceof UserError ? error.exitCode : 3;
}

/** A few lines on standard error; the stack only when asked for. */
export function tellFailure(error: unknown): void {
  if (process.env.LEGWORK_DEBUG === '1') {
    complain(error instanceof Error ? (error.stack ?? error.message) : String(error));
    return;
  }
  if (error instanceof UserError) {
    complain(`${errColour.red('legwork:')} ${error.message}`);
    if (error.suggestion) complain(`  ${error.suggestion}`);
    return;
  }
  const message = error instanceof Error ? error.message.split('\n')[0] : String(error);
  complain(`${errColour.red('legwork:')} a fault of the program, not of your files: ${message}`);
  complain('  Please report it with the files that show it. LEGWORK_DEBUG=1 shows where it happened.');
}

/** A failure as plain data, to go from one thread to another. */
export interface PlainFailure {
  readonly message: string;
  readonly stack: string | undefined;
  /** Of a `UserError`; null: a fault of ours. */
  readonly exitCode: 1 | 2 | null;
  readonly suggestion: string | undefined;
}

export function plainFailure(error: unknown): PlainFailure {
  const { message, stack } = error instanceof Error ? error : new Error(String(error));
  const { exitCode, suggestion } = error instanceof UserError ? error : { exitCode: null, suggestion: undefined };
  return { message, stack, exitCode, suggestion };
}

export function failureFrom({ message, stack, exitCode, suggestion }: PlainFailure): Error {
  const error =
    exitCode === null
      ? new Error(message)
      : new UserError(message, { exitCode, ...(suggestion === undefined ? {} : { suggestion }) });
  return Object.assign(error, stack === undefined ? {} : { stack });
}
