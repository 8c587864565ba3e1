/**
 * Leeway and sheeting against planted truth: a boom 6 degrees out or in moves the sheeting posterior that way where
 * leeway is measured; a boat file tuned on other races tells the leeway of a boat without sensors. Long: twenty races
 * that no constant of the program was looked at on.
 */
import { beforeAll, describe, expect, it } from 'vitest';
import { debrief } from '../../src/debrief.js';
import type { Race } from '../../src/files/race-types.js';
import type { LegResult, Result } from '../../src/result/result.js';
import { tune } from '../../src/tune.js';
import { condition, generateRace, type Condition, type TrueBoat } from './generator/index.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const SEEDS = Array.from({ length: LONG ? 20 : 2 }, (_, k) => (LONG ? 201 : 1) + k);
const TUNED_ON = LONG ? [101, 102, 103, 104] : [101, 102];
const BOAT_FILE = 'tuned.yaml';
const WITH_SENSORS: Partial<Condition> = { mastheads: 2, skill: 0, events: false };

type Open = ReturnType<typeof generateRace>['open'];

const beats = (result: Result, boat: number): LegResult[] =>
  result.boats[boat].legs.filter((leg) => leg.kind === 'upwind');

/** Mean sheeting posterior of the first boat's beats. [deg] */
function sheeting(result: Result): number {
  const values = beats(result, 0).map((leg) => leg.trim!.sheeting_posterior_deg!.value);
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** Mean leeway of a boat's true beats over settled sailing. [deg] */
function trueLeeway(boat: TrueBoat): number[] {
  return boat.legs
    .filter((leg) => leg.kind === 'upwind')
    .map((leg) => {
      let sum = 0;
      let n = 0;
      for (let i = leg.start - boat.t0; i < leg.end - boat.t0; i++) {
        if (!boat.settled[i]) continue;
        sum += Math.abs(boat.leeway[i]);
        n++;
      }
      return sum / n;
    });
}

let boatFile: string;

/** The same race, all boats of the tuned file. */
function tuned({ race, open }: { race: Race; open: Open }): [Race, Open] {
  const chunks = new Blob([boatFile]).stream();
  return [
    { ...race, boats: race.boats.map((boat) => ({ ...boat, boat: BOAT_FILE })) },
    (file) => (file === BOAT_FILE ? { name: file, chunks } : open(file)),
  ];
}

beforeAll(async () => {
  const jobs = TUNED_ON.map((seed) => generateRace(condition('tuning', WITH_SENSORS), seed));
  ({ boatFile } = await tune(jobs));
}, 120_000);

const FAULTS = [6, -6].flatMap((fault) => [
  { kind: 'built-in', fault },
  { kind: 'tuned', fault },
]);
describe.each(LONG ? FAULTS : FAULTS.filter(({ kind, fault }) => kind === 'tuned' || fault < 0))(
  '$kind boat, leeway measured, boom $fault degrees too far out',
  ({ kind, fault }) => {
    it('moves the sheeting posterior that way', async () => {
      const moves: number[] = [];
      for (const seed of SEEDS) {
        const of = async (changes: Partial<Condition>): Promise<number> => {
          const made = generateRace(condition('sheeting', { ...WITH_SENSORS, ...changes }), seed);
          return sheeting(
            (await debrief(...(kind === 'tuned' ? tuned(made) : ([made.race, made.open] as const)))).result,
          );
        };
        moves.push((await of({ faults: { sheeting: fault } })) - (await of({})));
      }
      const right = moves.filter((by) => by * fault > 0).length;
      expect(right, moves.map((by) => by.toFixed(1)).join(' ')).toBeGreaterThanOrEqual(0.9 * SEEDS.length);
    }, 300_000);
  },
);

it('a boat file tuned on other races tells leeway to a degree without any sensor, and how surely', async () => {
  const errors: number[] = [];
  const shares: number[] = [];
  for (const seed of SEEDS) {
    const made = generateRace(condition('no sensors'), seed);
    const { result } = await debrief(...tuned(made));
    for (const boat of made.truth.boats) {
      const legs = beats(
        result,
        result.boats.findIndex(({ name }) => name === boat.name),
      );
      trueLeeway(boat).forEach((truth, k) => {
        const leeway = legs[k].steady!.leeway_deg!;
        expect(leeway.basis).toBe('inferred');
        errors.push(leeway.value - truth);
        shares.push((leeway.value - truth) / leeway.se!);
      });
    }
  }
  const rms = (values: readonly number[]): number =>
    Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
  expect(errors.length).toBe(4 * SEEDS.length);
  expect(Math.max(...errors.map(Math.abs)), `rms ${rms(errors).toFixed(2)}`).toBeLessThan(1);
  expect(rms(shares)).toBeGreaterThan(0.4);
  expect(rms(shares)).toBeLessThan(1.6);
}, 300_000);
