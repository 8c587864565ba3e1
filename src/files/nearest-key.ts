/**
 * The known key most like the one written: fewest single-letter changes, swaps of neighbours counting as one.
 *
 * V. I. Levenshtein 1966 with the neighbour swap of F. J. Damerau 1964, in the restricted (optimal string alignment) form.
 */
export function nearestKey(written: string, known: readonly string[]): string | null {
  let best: string | null = null;
  let least = Infinity;
  for (const key of known) {
    const changes = editDistance(plain(written), plain(key));
    if (changes < least) {
      least = changes;
      best = key;
    }
  }
  return best;
}

const plain = (key: string): string => key.toLowerCase().replaceAll(/[-\s]/g, '_');

/** Fewest insertions, deletions, replacements and neighbour swaps that turn one word into the other. */
export function editDistance(a: string, b: string): number {
  const rows: number[][] = [Array.from({ length: b.length + 1 }, (_, j) => j)];
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1] ? 0 : 1;
      let cost = Math.min(rows[i - 1][j] + 1, row[j - 1] + 1, rows[i - 1][j - 1] + same);
      const swapped = i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1];
      if (swapped) cost = Math.min(cost, rows[i - 2][j - 2] + 1);
      row.push(cost);
    }
    rows.push(row);
  }
  return rows[a.length][b.length];
}
