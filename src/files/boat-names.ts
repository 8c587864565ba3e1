import type { Issue } from '../recording/issues.js';
import { fileStem } from './race.js';

/** What may name a boat: the race file's word, else the name inside the track, else the file's name. */
export interface NameSources {
  readonly written?: string | null;
  /** Name inside the track; empty when there is none. */
  readonly inner: string;
  readonly file: string;
}

/** Names that loggers put in by themselves and that name no boat: "Track 3", "Current track", a date. */
const GENERIC =
  /^(active|current|saved|new|my|gps|default)?[\s_-]*(track|log|tracklog|track[\s_-]?log|activity|workout|sailing|sail|session|route|path|export|exported|unnamed|untitled|unknown|noname|recording|gpx|day|morning|afternoon|evening|lunch)([\s_-]*(track|log|activity|sailing|sail|session|workout))?[\s_#:-]*\d*$/i;
const ONLY_DATE = /^[\d\s:./TZ_+-]*\d[\d\s:./TZ_+-]*(am|pm)?$/;
/** A bare number is a sail number unless it is as long as a date. */
const SAIL_NUMBER = /^\d{1,6}$/;

export const isGenericName = (name: string): boolean =>
  GENERIC.test(name.trim()) || (ONLY_DATE.test(name.trim()) && !SAIL_NUMBER.test(name.trim()));

/** Names of the boats, all different, and what had to be said about them. */
export function boatNames(boats: readonly NameSources[]): { names: string[]; issues: Issue[] } {
  const inner = boats.map((boat) => (boat.written ? '' : boat.inner.trim()));
  const taken = countOf([...inner, ...boats.map((boat) => boat.written ?? '')]);
  const stems = uniqueStems(boats.map((boat) => boat.file));
  const issues: Issue[] = [];
  const names = boats.map((boat, i) => {
    if (boat.written) return boat.written;
    const name = inner[i];
    if (name === '') return stems[i];
    const equal = (taken.get(fold(name)) ?? 0) > 1;
    if (!equal && !isGenericName(name)) return name;
    const why = equal ? 'is not the only one of that name' : 'is a name a logger puts in by itself';
    issues.push({
      code: 'name-clash',
      message: `The name inside the track, "${name}", ${why}: the boat is called "${stems[i]}" after its file.`,
      file: boat.file,
    });
    return stems[i];
  });
  return { names: allDifferent(names), issues };
}

const fold = (name: string): string => name.normalize('NFC').toLowerCase();

function countOf(names: readonly string[]): Map<string, number> {
  const counts = new Map<string, number>();
  for (const name of names) if (name) counts.set(fold(name), (counts.get(fold(name)) ?? 0) + 1);
  return counts;
}

/** File stems; files of equal stem in different folders are told apart by the folder. */
function uniqueStems(files: readonly string[]): string[] {
  const stems = files.map(fileStem);
  const counts = countOf(stems);
  return stems.map((stem, i) => {
    const folder = files[i].split(/[/\\]/).at(-2);
    return (counts.get(fold(stem)) ?? 0) > 1 && folder && folder !== '..' ? `${folder} ${stem}` : stem;
  });
}

function allDifferent(names: readonly string[]): string[] {
  const seen = new Map<string, number>();
  return names.map((name) => {
    const before = seen.get(fold(name)) ?? 0;
    seen.set(fold(name), before + 1);
    return before === 0 ? name : `${name} (${before + 1})`;
  });
}
