/**
 * Which records to keep so that time never goes back and as few as possible are lost: the longest non-decreasing
 * subsequence, by patience sorting. One stamp far ahead then costs one record, not all that follow it.
 *
 * [1] C. Schensted, Longest increasing and decreasing subsequences, Canad. J. Math. 13, 1961, DOI 10.4153/CJM-1961-015-3.
 *
 * @param time Times in the order of the log, all finite.
 * @returns Indices into `time`, ascending.
 */
export function longestOrdered(time: Float64Array): Uint32Array {
  const n = time.length;
  if (isOrdered(time)) return new Uint32Array(n).map((_, i) => i);
  const before = new Int32Array(n);
  const ends = new Int32Array(n);
  let longest = 0;
  for (let i = 0; i < n; i++) {
    const at = firstAbove(time, ends, longest, time[i]);
    before[i] = at > 0 ? ends[at - 1] : -1;
    ends[at] = i;
    if (at === longest) longest++;
  }
  const kept = new Uint32Array(longest);
  for (let k = longest - 1, i = ends[longest - 1]; k >= 0; k--) {
    kept[k] = i;
    i = before[i]!;
  }
  return kept;
}

function isOrdered(time: Float64Array): boolean {
  for (let i = 1; i < time.length; i++) if (time[i] < time[i - 1]) return false;
  return true;
}

/** First of the `count` ends whose time is above `value`; `count` when there is none. */
function firstAbove(time: Float64Array, ends: Int32Array, count: number, value: number): number {
  let low = 0;
  let high = count;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (time[ends[middle]] > value) high = middle;
    else low = middle + 1;
  }
  return low;
}

/** Whether a log is written newest first: nearly every step goes back. */
export function isReversed(time: Float64Array): boolean {
  let back = 0;
  let on = 0;
  for (let i = 1; i < time.length; i++) {
    if (time[i] < time[i - 1]) back++;
    else if (time[i] > time[i - 1]) on++;
  }
  return back >= 3 && back > 20 * on;
}
