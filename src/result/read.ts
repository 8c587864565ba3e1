import type { Result } from './result.js';

/** Highest version of a result file this program reads. */
export const RESULT_VERSION = 1;

/** Why a text is not a result that can be read; the message ends a sentence that begins with the file's name. */
export class NotAResult extends Error {
  override readonly name = 'NotAResult';
}

/**
 * Reads a result file of this program. Keys it does not know are let pass; a higher version is refused.
 *
 * @throws NotAResult with what is wrong.
 */
export async function readResult(text: string): Promise<Result> {
  const data = parsed(text);
  const { format, version } = data;
  if (format !== 'legwork-result') throw new NotAResult('is not a result file of legwork.');
  if (typeof version === 'number' && version > RESULT_VERSION) {
    throw new NotAResult(
      `is of version ${version}, and this program reads up to version ${RESULT_VERSION}: a newer legwork wrote it.`,
    );
  }
  const { openResultSchema } = await import('./schema.js');
  const outcome = openResultSchema.safeParse(data);
  if (outcome.success) return outcome.data as unknown as Result;
  const issue = outcome.error.issues[0];
  throw new NotAResult(`is damaged at \`${issue.path.join('.')}\`: ${issue.message}.`);
}

/**
 * The same of what has been parsed already, for a season: only what a season reads is looked at.
 *
 * @returns null where something is wrong; `readResult` says what.
 */
export async function seasonResult(data: unknown): Promise<Result | null> {
  const { seasonResultSchema } = await import('./schema.js');
  return seasonResultSchema.safeParse(data).success ? (data as Result) : null;
}

function parsed(text: string): Record<string, unknown> {
  try {
    const data: unknown = JSON.parse(text.replace(/^\uFEFF/, ''));
    if (data !== null && typeof data === 'object' && !Array.isArray(data)) return data as Record<string, unknown>;
  } catch {
    throw new NotAResult('is not JSON (is it cut off?).');
  }
  throw new NotAResult('is not a result file of legwork.');
}
