import { CHANNELS, createRecording, type Channel, type Recording } from './recording.js';

/**
 * Part of a recording on a shifted clock.
 *
 * @param shift Added to every time. [s]
 * @param from, to Keep rows with from <= time < to on the shifted clock. [UTC s]
 */
export function sliceRecording(recording: Recording, shift: number, from = -Infinity, to = Infinity): Recording {
  if (shift === 0 && from === -Infinity && to === Infinity) return recording;
  const n = recording.time.length;
  let first = 0;
  while (first < n && recording.time[first] + shift < from) first++;
  let last = n;
  while (last > first && recording.time[last - 1] + shift >= to) last--;
  const channels: Partial<Record<Channel, Float64Array>> = {};
  for (const channel of Object.keys(recording.channels) as Channel[]) {
    channels[channel] = recording.channels[channel]!.slice(first, last);
  }
  const breaks = recording.breaks.map((at) => at - first).filter((at) => at > 0 && at < last - first);
  const time = recording.time.slice(first, last).map((t) => t + shift);
  return createRecording({ name: recording.name, time, channels, breaks });
}

/**
 * Recordings of one boat as one, in time order, a break between them. Rows of a later recording that do not follow the
 * last time of the one before are left out and counted.
 */
export function mergeRecordings(recordings: readonly Recording[]): { recording: Recording; dropped: number } {
  const parts = recordings.filter((recording) => recording.time.length > 0);
  if (parts.length === 1) return { recording: parts[0], dropped: 0 };
  const sorted = [...parts].sort((a, b) => a.time[0] - b.time[0]);
  let last = -Infinity;
  let dropped = 0;
  const kept: Recording[] = [];
  for (const part of sorted) {
    const rest = part.time[0] > last ? part : sliceRecording(part, 0, last + 1e-6);
    dropped += part.time.length - rest.time.length;
    if (rest.time.length === 0) continue;
    kept.push(rest);
    last = rest.time.at(-1)!;
  }
  return { recording: concatenate(kept), dropped };
}

function concatenate(parts: readonly Recording[]): Recording {
  const n = parts.reduce((sum, part) => sum + part.time.length, 0);
  const time = new Float64Array(n);
  const channels: Partial<Record<Channel, Float64Array>> = {};
  for (const channel of Object.keys(CHANNELS) as Channel[]) {
    if (parts.some((part) => part.channels[channel])) channels[channel] = new Float64Array(n).fill(NaN);
  }
  const breaks: number[] = [];
  let at = 0;
  for (const part of parts) {
    if (at > 0) breaks.push(at);
    for (const row of part.breaks) breaks.push(row + at);
    time.set(part.time, at);
    for (const channel of Object.keys(part.channels) as Channel[]) channels[channel]!.set(part.channels[channel]!, at);
    at += part.time.length;
  }
  return createRecording({ name: parts[0]?.name ?? '', time, channels, breaks });
}
