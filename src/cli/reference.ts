import { forMessages, kindOf, readText, unusable } from './files.js';

export type Reference = 'model' | 'best' | { readonly file: string; readonly text: string };

/** What the ledger is measured against; nothing where it was not said. */
export async function referenceFor(given: string | undefined): Promise<{ reference?: Reference }> {
  if (given === undefined) return {};
  if (given === 'model' || given === 'best') return { reference: given };
  if ((await kindOf(given)) !== 'file') {
    throw unusable(`--reference ${given}: neither model nor best nor a boat file that is there.`, 'Check the name.');
  }
  return { reference: { file: forMessages(given), text: await readText(given) } };
}
