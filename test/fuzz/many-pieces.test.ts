/** Logs of so many pieces that what is done once a piece must be cheap, and no list may be handed on as arguments. */
import { expect, test } from 'vitest';
import { makeFrame } from '../../src/math/geo.js';
import { mergeRecordings } from '../../src/recording/merge.js';
import { createRecording } from '../../src/recording/recording.js';
import { smoothTrack } from '../../src/smooth/index.js';
import { importText } from '../importers/check-import.js';

const PIECES = process.env['LEGWORK_LONG'] ? 1_000_000 : 150_000;
const START = Date.UTC(2026, 3, 18) / 1000;

/** Processor time of some work. [s] */
async function costOf(work: () => unknown): Promise<number> {
  const before = process.cpuUsage();
  await work();
  const { user, system } = process.cpuUsage(before);
  return (user + system) / 1e6;
}

const segment = (k: number): string =>
  `<trkseg><trkpt lat="46.${String(9_000_000 + k)}" lon="9.05"><time>${new Date((START + k) * 1000).toISOString()}</time></trkpt></trkseg>`;

test('segments of one point each, newest first: all are kept, in order, with a break before each', async () => {
  const segments = Array.from({ length: PIECES }, (_, k) => segment(PIECES - 1 - k));
  const text = `<gpx><trk>${segments.join('\n')}</trk></gpx>`;
  let breaks = 0;
  const cost = await costOf(async () => {
    const log = await importText(text);
    expect(log.fixes).toBe(PIECES);
    breaks = log.recording.breaks.length;
  });
  expect(breaks).toBe(PIECES - 1);
  // Two seconds a megabyte are a hang.
  expect(cost).toBeLessThan((2 * text.length) / 1e6);
});

/** Four fixes a piece, a second apart, due north at 1 m/s. */
function piecewise(pieces: number) {
  const n = 4 * pieces;
  const time = Float64Array.from({ length: n }, (_, i) => START + i);
  const lat = time.map((_, i) => 46.9 + i * 1e-5);
  const lon = new Float64Array(n).fill(9.05);
  const breaks = Array.from({ length: pieces - 1 }, (_, k) => 4 * (k + 1));
  return createRecording({ time, channels: { lat, lon }, breaks });
}

test('stretches of four fixes each are smoothed one by one, without a tape for each', async () => {
  const recording = piecewise(PIECES / 10);
  const cost = await costOf(() => {
    const { track, gaps } = smoothTrack(recording, makeFrame(46.9, 9.05));
    expect(track.n).toBe(recording.time.length);
    expect(gaps.length).toBe(PIECES / 10 - 1);
  });
  // A tape of 2 MB each would be 30 GB to clear.
  expect(cost).toBeLessThan(PIECES / 30_000);
});

test('recordings of many pieces are put together', () => {
  const recording = piecewise(PIECES);
  const later = createRecording({ ...recording, time: recording.time.map((t) => t + 4 * PIECES) });
  expect(mergeRecordings([recording, later]).recording.breaks.length).toBe(2 * PIECES - 1);
});
