import { existsSync } from 'node:fs';
import { resolve } from 'node:path';
import { describe, test } from 'vitest';

/** Where the real recordings lie; they are not part of the project. */
const FOLDER = resolve(import.meta.dirname, '../..', process.env['LEGWORK_RECORDINGS'] ?? '../shared/data');

/** The path of a real recording. */
export const recording = (file: string): string => resolve(FOLDER, file);

/** Tests on real recordings: skipped where there are none, a failure where there must be. */
export function describeRecordings(what: string, tests: () => void): void {
  if (existsSync(FOLDER)) describe(what, tests);
  else if (process.env['CI']) {
    test(what, () => {
      throw new Error(`no recordings at ${FOLDER}`);
    });
  } else {
    console.log('skipped: recordings not present');
    describe.skip(what, tests);
  }
}
