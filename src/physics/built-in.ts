/**
 * The boats that come with the program: three invented boats, each with numbers of its own kind, none a scaled copy of
 * another and none a portrait of a boat that exists. Sizes are plausible for such boats; coefficients without a source
 * are common practice.
 */
import { UNTUNED, type BoatSpec } from './boat-spec.js';

/** One person hiking, one sail, a light flat hull. */
const SINGLE_HANDER: BoatSpec = {
  name: 'single-hander',
  description: 'One person, one sail, 4.2 m',
  hull: {
    waterline: 3.85,
    mass: 66,
    wettedArea: 3.1,
    formFactor: 1.15,
    residuaryFactor: 0.65,
    heelDrag: 0.6,
    waveDrag: 0.4,
  },
  foils: {
    board: { area: 0.26, span: 0.76, sweep: 12 },
    rudder: { area: 0.11, span: 0.55, sweep: 5 },
    gap: 0.85,
    profileDrag: 0.015,
  },
  rig: {
    area: 6.6,
    jibArea: 0,
    head: 5.9,
    centre: 2.45,
    efficiency: 0.72,
    clMax: 1.34,
    camber: 7,
    viscous: 0.014,
    parasite: 0.015,
    windage: 0.9,
    sheetingMin: 0,
    sheetingMax: 85,
  },
  crew: { mass: 76, lever: 1.1 },
  stability: { metacentricHeight: 0.55, heelLimit: 5, heelPower: 3 },
  tuning: UNTUNED,
};

/** Two people hiking, mainsail and jib, a narrow deep-bowed hull. */
const TWO_PERSON: BoatSpec = {
  name: 'two-person',
  description: 'Two people, mainsail and jib, 4.7 m',
  hull: {
    waterline: 4.45,
    mass: 118,
    wettedArea: 3.5,
    formFactor: 1.1,
    residuaryFactor: 0.7,
    heelDrag: 0.7,
    waveDrag: 0.3,
  },
  foils: {
    board: { area: 0.36, span: 1.02, sweep: 8 },
    rudder: { area: 0.14, span: 0.68, sweep: 3 },
    gap: 0.88,
    profileDrag: 0.012,
  },
  rig: {
    area: 12.2,
    jibArea: 3.4,
    head: 6.7,
    centre: 2.7,
    efficiency: 0.82,
    clMax: 1.42,
    camber: 8,
    viscous: 0.017,
    parasite: 0.015,
    windage: 1.3,
    sheetingMin: 0,
    sheetingMax: 85,
  },
  crew: { mass: 142, lever: 1.16 },
  stability: { metacentricHeight: 0.65, heelLimit: 6, heelPower: 3 },
  tuning: UNTUNED,
};

/** Three people, mainsail and jib, a third of its weight in the keel. */
const DAY_KEELBOAT: BoatSpec = {
  name: 'day-keelboat',
  description: 'Three people, ballast keel, mainsail and jib, 6 m',
  hull: {
    waterline: 5.35,
    mass: 690,
    wettedArea: 7.3,
    formFactor: 1.12,
    residuaryFactor: 0.8,
    heelDrag: 0.35,
    waveDrag: 0.12,
  },
  foils: {
    board: { area: 0.98, span: 1.12, sweep: 18 },
    rudder: { area: 0.26, span: 0.9, sweep: 8 },
    gap: 0.92,
    profileDrag: 0.0105,
  },
  rig: {
    area: 21,
    jibArea: 8.2,
    head: 9,
    centre: 3.65,
    efficiency: 0.8,
    clMax: 1.42,
    camber: 8,
    viscous: 0.017,
    parasite: 0.015,
    windage: 2.2,
    sheetingMin: 0,
    sheetingMax: 80,
  },
  crew: { mass: 225, lever: 0.8 },
  stability: { metacentricHeight: 0.95, heelLimit: 20, heelPower: 1 },
  tuning: UNTUNED,
};

export const BUILT_IN_BOATS: readonly BoatSpec[] = [SINGLE_HANDER, TWO_PERSON, DAY_KEELBOAT];

/** The boat that is taken when none is named. */
export const DEFAULT_BOAT = 'single-hander';

/** A built-in boat by name; undefined when there is none of that name. */
export function builtInBoat(name: string): BoatSpec | undefined {
  return BUILT_IN_BOATS.find((boat) => boat.name === name);
}
