/**
 * Invented races with known truth. Shares no code with the program (types only), and is nastier than its analysis
 * assumes: a boat of another form, wind that is never periodic, helms that wander, receivers whose errors linger.
 */
import type { LogSource } from '../../../src/importers/types.js';
import type { BoatReference, LogReference, Race, WindReference } from '../../../src/files/race-types.js';
import type { Condition } from './condition.js';
import { drawCrew } from './crew.js';
import { compass, cosd, sind } from './directions.js';
import { launch } from './hull.js';
import { readInstruments } from './instruments.js';
import { gpx, instrumentTable, nmea, placer, trackTable, windTable } from './logs.js';
import { chanceOf } from './random.js';
import { receive } from './receiver.js';
import { drawStation, observe } from './station.js';
import type { TrueBoat, Truth } from './truth.js';
import { sailRace, type Course, type Voyage } from './voyage.js';
import { drawWind, type Wind } from './wind.js';

export { condition, USUAL, type Condition, type Faults } from './condition.js';
export {
  PHASES,
  type Phase,
  type TrueBoat,
  type TrueLeg,
  type TrueTurn,
  type TrueWindow,
  type Truth,
} from './truth.js';

export interface GeneratedRace {
  readonly race: Race;
  /** Text of every log by file name. */
  readonly files: ReadonlyMap<string, string>;
  readonly open: (file: string) => LogSource;
  readonly truth: Truth;
}

const NAMES = ['Alder', 'Bracken', 'Comfrey', 'Dogwood', 'Elder', 'Furze'];

/** The race of a condition and a seed: always the same bytes. */
export function generateRace(condition: Condition, seed: number): GeneratedRace {
  const chance = chanceOf(`${condition.name}/${seed}`);
  const gun =
    Date.UTC(2026, chance.whole(4, 8), chance.whole(1, 28), chance.whole(8, 15), 5 * chance.whole(0, 11)) / 1000;
  const venue = condition.venue
    ? { lat: condition.venue[0], lon: condition.venue[1] }
    : { lat: chance.between(20, 62) * (chance.happens(0.4) ? -1 : 1), lon: chance.between(-179, 179) };
  const start = gun - (condition.sailOut ? 1440 : 420);
  const wind = drawWind(condition, chance, start, gun + 5400);
  const station = drawStation(condition, wind, chance);
  const drift = (condition.current * 1852) / 3600;
  const set = chance.between(0, 360);
  const current = { east: drift * sind(set), north: drift * cosd(set) };
  const course = drawCourse(condition, wind, gun, chance);
  const voyages = Array.from({ length: condition.boats }, (_, i) => {
    const own = chanceOf(`${condition.name}/${seed}/boat ${i}`);
    const crew = drawCrew(condition, i, NAMES[i % NAMES.length], own);
    const back = condition.sailOut ? 0.8 * 840 * crew.performance.speed(wind.tws, 48) * cosd(48) + 60 : 120;
    const across = own.between(-80, 80);
    const place: [number, number] = [
      -back * sind(wind.twd) + across * cosd(wind.twd),
      -back * cosd(wind.twd) - across * sind(wind.twd),
    ];
    return { own, voyage: sailRace(launch(crew, wind, current, start, place), course, condition, own) };
  });
  const finish = Math.max(...voyages.map(({ voyage }) => voyage.finish));
  for (const { voyage } of voyages) voyage.goHome(finish + 60, condition.sailHome ? 420 : 30);
  const boats = voyages.map(({ voyage, own }, i) => {
    const sensors = i < condition.mastheads;
    const bias = (): number | null => (sensors ? (condition.offsets ? 3 * own.normal() : 0) : null);
    return trueBoat(voyage, bias(), bias());
  });
  const truth: Truth = {
    condition: condition.name,
    seed,
    gun,
    finish,
    twd: compass(wind.twd),
    tws: wind.tws,
    station,
    current,
    frame: venue,
    windward: course.windward,
    leeward: course.leeward,
    boats,
  };
  const files = new Map<string, string>();
  const race = writeRace(condition, truth, set);
  voyages.forEach(({ voyage, own }, i) => {
    writeBoat(condition, truth, boats[i], receive(condition, voyage.boat.log, own), own, files);
  });
  if (station) {
    const end = Math.max(...boats.map((boat) => boat.t0 + boat.n));
    files.set('station.csv', windTable(observe(condition, station, wind, start - 300, end + 300, chance)));
  }
  return { race, files, truth, open: opener(files) };
}

function drawCourse(condition: Condition, wind: Wind, gun: number, chance: ReturnType<typeof chanceOf>): Course {
  // The committee lays the beat by the wind of the last minutes, not quite straight.
  const out = new Float64Array(2);
  let seen = 0;
  for (let i = 1; i <= 10; i++) {
    wind.at(0, 0, gun - 60 * i, out);
    seen += out[0] / 10;
  }
  const axis = seen + chance.between(-5, 5);
  const beat = chance.between(...condition.beat);
  const low = chance.between(40, 100);
  return {
    gun,
    axis,
    laps: condition.laps,
    windward: { x: beat * sind(axis), y: beat * cosd(axis) },
    leeward: { x: low * sind(axis), y: low * cosd(axis) },
  };
}

function trueBoat(voyage: Voyage, compassError: number | null, mastheadError: number | null): TrueBoat {
  const { log, crew } = voyage.boat;
  const { n } = log;
  const c = log.columns;
  const cut = (column: keyof typeof c): Float64Array => c[column].slice(0, n);
  return {
    name: crew.name,
    t0: log.t0,
    n,
    x: cut('x'),
    y: cut('y'),
    vx: cut('vx'),
    vy: cut('vy'),
    ux: cut('ux'),
    uy: cut('uy'),
    gamma: cut('gamma'),
    beta: cut('beta'),
    speed: cut('speed'),
    vmg: cut('vmg'),
    twd: cut('twd'),
    tws: cut('tws'),
    groundTwd: cut('groundTwd'),
    groundTws: cut('groundTws'),
    leeway: cut('leeway'),
    heading: cut('heading'),
    heel: cut('heel'),
    bestVmg: cut('bestVmg'),
    phase: log.phase.slice(0, n),
    settled: log.settled.slice(0, n),
    turns: nearMarks(log.turns, voyage.legs),
    legs: voyage.legs,
    windows: voyage.windows(),
    compassError,
    mastheadError,
    habit: { angle: crew.angle, speed: crew.speed * (1 - (crew.faults.slow ?? 0)), sheeting: crew.sheeting },
  };
}

function nearMarks(turns: TrueBoat['turns'], legs: TrueBoat['legs']): TrueBoat['turns'] {
  const near = (time: number): boolean => legs.some((leg) => Math.abs(leg.end - time) < 12);
  return turns.map((turn) => (near(turn.time) ? { ...turn, atMark: true } : turn));
}

function reference(file: string): LogReference {
  return { file, clockS: 0 };
}

function writeRace(condition: Condition, truth: Truth, set: number): Race {
  const place = placer(truth.frame);
  const { station } = truth;
  const wind: WindReference[] = station
    ? [
        {
          ...reference('station.csv'),
          kind: 'log',
          ...(condition.stationPlaced ? { at: place(station.x, station.y) } : {}),
          accuracyDir: 2,
          accuracySpeed: 0.02,
          offset: 0,
        },
      ]
    : [];
  const drift = (condition.current * 1852) / 3600;
  const boats: BoatReference[] = truth.boats.map((boat, i) => ({
    name: boat.name,
    sailor: boat.name,
    track: [reference(trackName(condition, boat.name))],
    instruments: i < condition.mastheads && condition.format !== 'nmea' ? [reference(mastName(boat.name))] : [],
    boat: 'single-hander',
  }));
  const { windward, leeward } = truth;
  return {
    name: `${condition.name} ${truth.seed}`,
    start: truth.gun,
    finish: truth.finish,
    zone: null,
    wind,
    current: condition.currentTold ? [{ time: null, set, drift }] : null,
    marks: condition.marksTold
      ? { windward: [place(windward.x, windward.y)], leeward: [place(leeward.x, leeward.y)] }
      : {},
    runs: [],
    exclude: [],
    boats,
    boatAssumed: false,
    notes: null,
  };
}

const trackName = (condition: Condition, name: string): string =>
  `${name.toLowerCase()}.${condition.format === 'nmea' ? 'nmea' : condition.format}`;
const mastName = (name: string): string => `${name.toLowerCase()}-mast.csv`;

function writeBoat(
  condition: Condition,
  truth: Truth,
  boat: TrueBoat,
  fixes: ReturnType<typeof receive>,
  chance: ReturnType<typeof chanceOf>,
  files: Map<string, string>,
): void {
  const sensors = boat.compassError === null ? null : readInstruments(boat, chance);
  const name = trackName(condition, boat.name);
  if (condition.format === 'gpx') files.set(name, gpx(boat.name, fixes, truth.frame));
  else if (condition.format === 'csv') files.set(name, trackTable(fixes, truth.frame));
  else files.set(name, nmea(fixes, sensors, truth.frame));
  if (!sensors || condition.format === 'nmea') return;
  files.set(mastName(boat.name), instrumentTable(sensors, condition.logsHeel, condition.logsWaterSpeed));
}

function opener(files: ReadonlyMap<string, string>): (file: string) => LogSource {
  return (file) => {
    const text = files.get(file);
    if (text === undefined) throw new Error(`open: no file ${file}`);
    return { name: file, chunks: [new TextEncoder().encode(text)] };
  };
}
