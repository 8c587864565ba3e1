import { RejectionCounter, type Issue } from '../recording/issues.js';

/** Trouble seen many times, told once. */
interface Sighting {
  count: number;
  readonly line: number;
}

/**
 * Keeps the books of one log, so that nothing vanishes: each record read ends as kept, ignored or rejected. What is
 * noticed over and over is counted and becomes one issue.
 */
export class Tally {
  readonly file: string;
  readonly rejections = new RejectionCounter();
  readonly issues: Issue[] = [];
  readonly #ignored = new Map<string, number>();
  readonly #sightings = new Map<string, Sighting>();
  /** Records read so far. */
  read = 0;
  /** Records that were used without becoming part of a row, such as a date. */
  keptAside = 0;

  constructor(file: string) {
    this.file = file;
  }

  ignore(type: string, count = 1): void {
    this.#ignored.set(type, (this.#ignored.get(type) ?? 0) + count);
  }

  reject(reason: string, line: number, count = 1): void {
    this.rejections.add(reason, line, count);
  }

  issue(code: string, message: string, line?: number): void {
    this.issues.push(
      line === undefined ? { code, message, file: this.file } : { code, message, file: this.file, line },
    );
  }

  /** Counts one more of a kind of trouble; `seen` and `tell` turn it into an issue at the end. */
  notice(what: string, line: number, count = 1): void {
    const sighting = this.#sightings.get(what);
    if (sighting) sighting.count += count;
    else this.#sightings.set(what, { count, line });
  }

  seen(what: string): number {
    return this.#sightings.get(what)?.count ?? 0;
  }

  /** Makes an issue of what was noticed under `what`, if it ever was. */
  tell(what: string, code: string, message: (count: number) => string): void {
    const sighting = this.#sightings.get(what);
    if (sighting) this.issue(code, message(sighting.count), sighting.line);
  }

  /** Times without a zone and no zone given: noticed under this name, told here. */
  tellZone(): void {
    this.tell(
      'zone-assumed',
      'zone-assumed',
      (n) => `${n} time(s) carry no zone and are read as UTC; give the zone if the clock showed local time.`,
    );
  }

  get ignored(): number {
    let sum = 0;
    for (const count of this.#ignored.values()) sum += count;
    return sum;
  }

  ignoredTypes(): Record<string, number> {
    return Object.fromEntries([...this.#ignored].sort(([a], [b]) => (a < b ? -1 : 1)));
  }
}
