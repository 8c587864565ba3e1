/** Trouble that is data: something in a log or in the sailing that the reader of the report must know. */
export interface Issue {
  /** Stable code, lower case with hyphens, such as `wind-stuck`. */
  readonly code: string;
  /** One or two plain sentences: what was seen, what was done about it. */
  readonly message: string;
  /** File it was seen in, where there is one. */
  readonly file?: string;
  /** First line (1-based) it was seen at, where there is one. */
  readonly line?: number;
}

/** Rejected records of one kind. */
export interface Rejection {
  readonly reason: string;
  readonly count: number;
  /** 1-based line (or record, in a format without lines) where it happened first. */
  readonly first_line: number;
}

/** Counts rejected records by reason and remembers where each reason was first met. */
export class RejectionCounter {
  readonly #byReason = new Map<string, { count: number; first: number }>();

  add(reason: string, line: number, count = 1): void {
    const entry = this.#byReason.get(reason);
    if (entry) {
      entry.count += count;
      entry.first = Math.min(entry.first, line);
    } else this.#byReason.set(reason, { count, first: line });
  }

  get total(): number {
    let sum = 0;
    for (const { count } of this.#byReason.values()) sum += count;
    return sum;
  }

  list(): Rejection[] {
    return [...this.#byReason].map(([reason, { count, first }]) => ({ reason, count, first_line: first }));
  }
}

/**
 * Input that cannot be used at all, or a command that cannot be carried out: the message is for the user.
 * `exitCode` follows the command line's contract: 1 understood but cannot be analysed, 2 unusable.
 */
export class UserError extends Error {
  override readonly name = 'UserError';
  readonly exitCode: 1 | 2;
  /** What to try next, one sentence. */
  readonly suggestion: string | undefined;

  constructor(message: string, options: { exitCode: 1 | 2; suggestion?: string }) {
    super(message);
    this.exitCode = options.exitCode;
    this.suggestion = options.suggestion;
  }
}
