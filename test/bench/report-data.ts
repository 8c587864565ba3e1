/** Invented races of the sizes the page is measured with, from the generator of the accuracy tests. */
import { compare, type Comparison } from '../../src/compare.js';
import { debrief, type Debrief } from '../../src/debrief.js';
import { condition, generateRace, type Condition, type GeneratedRace } from '../accuracy/generator/index.js';

/** Sailing out, two laps and sailing home: something over an hour. */
const HOUR: Partial<Condition> = { laps: 2, beat: [1150, 1250], tws: 11, station: 'away' };

/** An hour of two boats, a fix a second. */
export function twoBoats(): Promise<Debrief> {
  const { race, open } = generateRace(condition('two-boat hour', HOUR), 1);
  return debrief(race, open);
}

/** An hour of six boats, five fixes a second. */
export function sixBoats(): Promise<Debrief> {
  const { race, open } = generateRace(
    condition('six-boat hour', { ...HOUR, boats: 6, receiver: '5hz', doppler: true, format: 'csv' }),
    1,
  );
  return debrief(race, open);
}

/** A fleet of eight compared, every pair. */
export function eightBoats(): Promise<Comparison> {
  const fleet = (boats: number): GeneratedRace => generateRace(condition('fleet', { ...HOUR, boats }), 1);
  const [six, eight] = [fleet(6), fleet(8)];
  // The generator has six names; the seventh and eighth boat write over the logs of the first two.
  const more = ['Gorse', 'Hazel'].map((name, k) => {
    const boat = eight.race.boats[6 + k];
    const track = boat.track.map((log) => ({ ...log, file: `more-${log.file}` }));
    return { ...boat, name, sailor: name, track };
  });
  const open: GeneratedRace['open'] = (file) =>
    file.startsWith('more-') ? { ...eight.open(file.slice(5)), name: file } : six.open(file);
  return compare({ ...six.race, finish: eight.race.finish, boats: [...six.race.boats, ...more] }, open);
}
