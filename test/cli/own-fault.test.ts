/** A fault of the program itself, planted from outside: exit code 3, a few lines, nothing half-written. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, filesBelow, fill, folder, run } from './run.js';

/** Breaks a function that the estimate cannot do without. */
const BREAK = `Math.asin = Math.atan2 = () => { throw new RangeError('planted\\nsecond line'); };`;

let home: string;
beforeAll(async () => {
  await buildProgram();
  home = folder({ 'break.mjs': BREAK, 'ann.gpx': gpxText(inventedBeat()), 'wind.csv': windText() });
  fill(home, { 'good/race.yaml': 'race: Good\nboats: [{ name: Ann, track: ../none.gpx }]\n' });
}, 120_000);
afterAll(() => {
  drop(home);
  dropProgram();
});

describe('a fault of the program', () => {
  const broken = (...args: string[]) => run(args, { cwd: home, env: { NODE_OPTIONS: '--import=./break.mjs' } });

  it('ends with 3 and says that it is none of the files, without a stack', async () => {
    const before = filesBelow(home);
    const { code, out, err } = await broken('debrief', 'ann.gpx', '--wind', 'wind.csv', '--out', 'r.html');
    expect({ code, out }).toEqual({ code: 3, out: '' });
    expect(err).toMatch(/a fault of the program, not of your files: planted\n/);
    expect(err).not.toMatch(/second line| at /);
    expect(filesBelow(home)).toEqual(before);
  });

  it('is the worst of a batch', async () => {
    fill(home, {
      'bad/race.yaml': 'race: Bad\nboats: [{ name: Ann, track: ../ann.gpx }]\nwind: [{ file: ../wind.csv }]\n',
    });
    const { code, err } = await broken('debrief', 'good/race.yaml', 'bad/race.yaml', '--keep-going');
    expect(code, err).toBe(3);
    expect(err).toMatch(/none\.gpx/);
    expect(err).toMatch(/a fault of the program/);
  });
});
