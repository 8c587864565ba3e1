/** Big logs of one race read on several processors: the same as read one after the other. */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { logSource } from '../../src/cli/files.js';
import { ReadAhead, type LogOrder } from '../../src/cli/read-ahead.js';
import { importLog } from '../../src/importers/index.js';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, fill, folder, programPath, run } from './run.js';

let home: string;
beforeAll(async () => {
  await buildProgram();
  home = folder({
    'ann.gpx': gpxText(inventedBeat()),
    'ben.gpx': gpxText(inventedBeat(60)).replace(/lat="[^"]*"/, 'lat="nowhere"'),
    'wind.csv': windText(),
    'nothing.gpx': '<gpx></gpx>',
  });
});
afterAll(() => {
  drop(home);
  dropProgram();
});

const order = (name: string): LogOrder => ({ name, path: join(home, name), options: { zone: 'UTC' } });
const here = ({ name, path, options }: LogOrder) => importLog(logSource(name, path), options);
const program = () => pathToFileURL(programPath('thread.js'));

/** Until a thread has taken all logs for itself. */
async function allTaken(ahead: ReadAhead): Promise<void> {
  while (ahead.claims.includes(0)) await new Promise((resolve) => setTimeout(resolve, 5));
}

describe('a log read by another thread', () => {
  it('is what it is here, or fails as it fails here', async () => {
    const logs = ['ann.gpx', 'ben.gpx', 'wind.csv', 'nothing.gpx', 'absent.gpx'].map(order);
    const ahead = new ReadAhead(logs, 1, program());
    await allTaken(ahead);
    for (const log of logs) {
      const [there, own] = await Promise.allSettled([ahead.take(log.name, log.options), here(log)]);
      expect(there).toEqual(own);
      if (own.status === 'rejected') expect(String(own.reason)).not.toBe('');
      else expect(there.status === 'fulfilled' && there.value?.recording.time.length).toBeGreaterThan(0);
    }
    await ahead.close();
  });

  it('is read once: here when nobody has it yet, or when it is read in another way', async () => {
    const log = order('ann.gpx');
    const alone = new ReadAhead([log], 3, program());
    expect(alone.take('ann.gpx', { zone: 'Europe/Zurich' })).toBeNull();
    expect(alone.take('ben.gpx', log.options)).toBeNull();
    expect([...alone.claims]).toEqual([0]);
    expect(alone.take('ann.gpx', log.options)).toBeNull();
    expect([...alone.claims]).toEqual([-1]);
    await alone.close();
  });

  it('is told to be lost when its thread is', async () => {
    fill(home, {
      'dies.mjs': `import { workerData } from 'node:worker_threads';\nworkerData.claims.fill(workerData.self);\n`,
    });
    const ahead = new ReadAhead(['ann.gpx', 'ben.gpx'].map(order), 1, pathToFileURL(join(home, 'dies.mjs')));
    await allTaken(ahead);
    await expect(ahead.take('ben.gpx', { zone: 'UTC' })).rejects.toThrow('ended before');
    await expect(ahead.take('ann.gpx', { zone: 'UTC' })).rejects.toThrow('ended before');
    await ahead.close();
  });
});

describe('a race of big logs', () => {
  const long = `<cmt>${'long '.repeat(1200)}</cmt>`;
  const big = (text: string): string => text.replaceAll('</trkpt>', `${long}</trkpt>`);
  const boats = ['Ann', 'Ben', 'Cid', 'Dee'];
  const race = (tracks: readonly string[]): string =>
    `race: Big\nzone: UTC\nboat: single-hander\nwind: [{ file: wind.csv, height_m: 3 }]\nboats:\n` +
    tracks.map((track, k) => `  - { name: ${boats[k]}, track: ${track}.gpx }\n`).join('');
  /** All that a run says and writes. */
  const outcome = async (workers: string, name: string) => {
    const args = ['debrief', `big/${name}.yaml`, '--json', 'out.json', '--out', 'out.html'];
    const ran = await run(args, { cwd: home, env: { LEGWORK_WORKERS: workers } });
    return { ...ran, written: ['json', 'html'].map((kind) => readFileSync(join(home, `out.${kind}`), 'utf8')) };
  };
  const one: Record<string, Awaited<ReturnType<typeof outcome>>> = {};
  beforeAll(async () => {
    boats.forEach((name, k) => fill(home, { [`big/${name}.gpx`]: big(gpxText(inventedBeat(30 * k))) }));
    fill(home, {
      'big/wind.csv': windText(),
      'big/none.gpx': big(gpxText(inventedBeat())).replaceAll('<time>', '<time>x'),
      'big/good.yaml': race(boats),
      'big/bad.yaml': race(['Ann', 'none', 'Ben', 'Cid']),
    });
    for (const name of ['good', 'bad']) one[name] = await outcome('1', name);
  });

  it.each(['2', '4'])('comes to the same bytes and words on %s processors', async (workers) => {
    expect(one['good']).toMatchObject({ code: 0, err: '' });
    expect(await outcome(workers, 'good')).toEqual(one['good']);
    expect(one['bad'].code).toBe(2);
    expect(one['bad'].err).toContain('none.gpx');
    expect(await outcome(workers, 'bad')).toEqual(one['bad']);
  });
});
