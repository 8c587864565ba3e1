import pc from 'picocolors';

/** Set once the reader of standard output has gone: what follows is not for anyone. */
let closed = false;

/**
 * A closed pipe is the reader's choice, not a fault; a full disk behind standard output is the user's to mend.
 *
 * @param inWords Makes what the system refused into an error for the user.
 */
export function guardOutput(inWords: (error: unknown) => unknown): void {
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    closed = true;
    if (error.code !== 'EPIPE') throw inWords(error);
  });
  process.stderr.on('error', () => undefined);
}

/** Writes to standard output and waits until it is taken. */
export async function print(text: string): Promise<void> {
  if (closed) return;
  await new Promise<void>((resolve) => {
    process.stdout.write(text, () => resolve());
  });
}

export function complain(text: string): void {
  process.stderr.write(`${text}\n`);
}

/** Colours for standard output: only on a terminal, or where FORCE_COLOR asks; never with NO_COLOR. */
export const outColour = pc.createColors(wantsColour(process.stdout));
/** The same for standard error. */
export const errColour = pc.createColors(wantsColour(process.stderr));

function wantsColour(stream: NodeJS.WriteStream): boolean {
  const { NO_COLOR, FORCE_COLOR, TERM } = process.env;
  if (NO_COLOR) return false;
  if (FORCE_COLOR !== undefined) return FORCE_COLOR !== '0' && FORCE_COLOR !== 'false';
  return stream.isTTY && TERM !== 'dumb';
}

/** One line on standard error that is written over, on a terminal only. */
export class Progress {
  readonly #shows: boolean;
  #last = 0;

  constructor(wanted: boolean) {
    const { CI, TERM } = process.env;
    this.#shows = wanted && process.stderr.isTTY && !CI && TERM !== 'dumb';
  }

  say(text: string): void {
    if (!this.#shows) return;
    const now = performance.now();
    if (now - this.#last < 80) return;
    this.#last = now;
    const width = Math.max(20, (process.stderr.columns || 80) - 1);
    process.stderr.write(`\r\x1b[2K${text.slice(0, width)}`);
  }

  clear(): void {
    if (this.#shows && this.#last > 0) process.stderr.write('\r\x1b[2K');
    this.#last = 0;
  }
}
