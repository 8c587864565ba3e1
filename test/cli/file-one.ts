/** A program that files one result: LOGBOOK RESULT DAY, and when (milliseconds since 1970) where several begin at once. */
import { readFileSync } from 'node:fs';
import { fileInLogbook } from '../../src/cli/logbook.js';
import type { Result } from '../../src/result/result.js';

const [folder, file, day, at = '0'] = process.argv.slice(2);
const result = JSON.parse(readFileSync(file, 'utf8')) as Result;
while (Date.now() < Number(at));
await fileInLogbook(folder, result, day);
