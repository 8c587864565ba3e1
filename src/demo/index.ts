/**
 * The demo race: an invented lake, two invented boats, an afternoon that never was. Corrie points high and carries
 * instruments; Linnet sails lower and faster. There is a tack that goes wrong, a shift that is missed, and a lay line
 * that is overstood. The same bytes on every machine.
 */
import { cosine, sine } from './exact.js';
import { gpxTrack, mastTable, position, tableTrack, windTable } from './logs.js';
import { sailAfternoon, type Course, type Place, type Sailor } from './sail.js';
import { lakeWind, WIND_FROM } from './wind.js';

/** 18 April 2026, 14:05 in Zurich: the gun. The logs begin eleven minutes before. */
const GUN = Date.UTC(2026, 3, 18, 12, 5) / 1000;
const BEFORE = 660;
const AFTERNOON = 5400;

/** A place by metres across (to the right, looking to windward) and up the course. */
function onCourse(across: number, up: number): Place {
  return {
    x: up * sine(WIND_FROM) + across * cosine(WIND_FROM),
    y: up * cosine(WIND_FROM) - across * sine(WIND_FROM),
  };
}

const COURSE: Course = { gun: BEFORE, windward: onCourse(-20, 1050), leeward: onCourse(10, 90) };
const COMMITTEE = onCourse(70, 0);

/** Sailing out on both tacks, reaching to and fro, a stop head to wind, the last run to the line. */
const MILLING = [
  [120, 47],
  [110, -47],
  [60, -100],
  [50, 95],
  [45, -90],
  [40, -14],
  [50, -85],
  [70, 100],
  [60, -95],
  [31, 90],
] as const;

const CORRIE: Sailor = {
  seed: 11,
  angle: 40,
  speed: 0.93,
  shift: 4,
  hold: 70,
  atGun: onCourse(30, -4),
  before: [...MILLING, [24, 40]],
  beats: [{ badTack: 2 }, { blind: [300, 600], overstand: 55 }],
};

const LINNET: Sailor = {
  seed: 29,
  angle: 45,
  speed: 0.955,
  shift: 4,
  hold: 70,
  atGun: onCourse(-25, -7),
  before: [...MILLING, [24, 45]],
  beats: [{}, {}],
};

const RACE_FILE = (finish: string): string => `race: Ferrow Lake spring series, race 2
start: 2026-04-18T14:05:00+02:00
finish: ${finish}
zone: Europe/Zurich
boat: single-hander
wind:
  - file: committee.csv
    at: [${position(COMMITTEE).join(', ')}]
    height_m: 2.5
boats:
  - name: Corrie
    track: corrie.gpx
    instruments: corrie-mast.csv
  - name: Linnet
    track: linnet.csv
notes: Invented for this demonstration - the lake, the boats, the wind and every figure.
`;

/** Files of the demo race by name. */
export function demoFiles(): ReadonlyMap<string, string> {
  const windAt = lakeWind(AFTERNOON);
  const corrie = sailAfternoon(CORRIE, windAt, COURSE);
  const linnet = sailAfternoon(LINNET, windAt, COURSE);
  const t0 = GUN - BEFORE;
  const seconds = Math.max(corrie.moments.length, linnet.moments.length) + 60;
  const finish = new Date(1000 * (t0 + Math.max(corrie.finish, linnet.finish) + 7200)).toISOString().slice(0, 19);
  return new Map([
    ['race.yaml', RACE_FILE(`${finish}+02:00`)],
    ['corrie.gpx', gpxTrack('Corrie', corrie.moments, t0, 101)],
    ['corrie-mast.csv', mastTable(corrie.moments, t0, { compass: 2.4, masthead: -1.7, seed: 103 })],
    ['linnet.csv', tableTrack(linnet.moments, t0, 107)],
    ['committee.csv', windTable(windAt, COMMITTEE, t0, seconds, 109)],
  ]);
}
