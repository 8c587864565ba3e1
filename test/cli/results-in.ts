import { readLogbook } from '../../src/cli/logbook.js';
import type { Result } from '../../src/result/result.js';

/** Every result of a logbook. */
export async function resultsIn(book: string): Promise<Result[]> {
  const results: Result[] = [];
  for await (const { result } of readLogbook(book)) results.push(result);
  return results;
}
