import { readBoat } from '../files/boat.js';
import type { BoatReference, Race } from '../files/race-types.js';
import { createSha256 } from '../math/sha256.js';
import { BUILT_IN_BOATS, builtInBoat } from '../physics/built-in.js';
import { canonicalBoat, isUntuned, type BoatSpec } from '../physics/boat-spec.js';
import { makeModel, type BoatModel } from '../physics/model.js';
import { speedCurve, type SpeedCurve } from '../physics/speed-curve.js';
import { UserError } from '../recording/issues.js';
import type { OpenLog } from './read-logs.js';

/** The boat model of one boat of a race. */
export interface RaceModel {
  readonly spec: BoatSpec;
  readonly model: BoatModel;
  readonly curve: SpeedCurve;
  readonly tuned: boolean;
  readonly accuracy: ModelAccuracy;
  /** Of the boat as canonical JSON, crew apart. */
  readonly sha256: string;
}

/** What a model is good to, one standard deviation. */
export interface ModelAccuracy {
  /** Speed and leeway as a share of themselves. */
  readonly speed: number;
  readonly leeway: number;
  /** Its best angles. [deg] */
  readonly angle: number;
}

/** A built-in boat stands for a type, not for this boat and crew: common practice, no source. */
const ACCURACY: Readonly<Record<'untuned' | 'tuned', ModelAccuracy>> = {
  untuned: { speed: 0.08, leeway: 0.12, angle: 2 },
  tuned: { speed: 0.03, leeway: 0.1, angle: 1 },
};

/** Models of all boats of a race; boats alike in file and crew share one. */
export async function boatModels(race: Race, open: OpenLog): Promise<RaceModel[]> {
  const specs = new Map<string, BoatSpec>();
  const models = new Map<string, RaceModel>();
  const out: RaceModel[] = [];
  for (const boat of race.boats) {
    const spec = specs.get(boat.boat) ?? (await specOf(boat, open));
    specs.set(boat.boat, spec);
    const key = JSON.stringify([boat.boat, boat.crewMassKg]);
    const model = models.get(key) ?? modelOf(spec, boat.crewMassKg);
    models.set(key, model);
    out.push(model);
  }
  return out;
}

async function specOf(boat: BoatReference, open: OpenLog): Promise<BoatSpec> {
  const known = builtInBoat(boat.boat);
  if (known) return known;
  if (!/[./\\]/.test(boat.boat)) {
    throw new UserError(`${boat.name}: no built-in boat called “${boat.boat}”`, {
      exitCode: 2,
      suggestion: `The built-in boats are ${BUILT_IN_BOATS.map((one) => one.name).join(', ')}; else name a boat file.`,
    });
  }
  return boatFromText(await textOf(boat.boat, open), boat.boat);
}

/** A boat file's text as a boat. */
export async function boatFromText(text: string, file: string): Promise<BoatSpec> {
  return readBoat(text, file, [...BUILT_IN_BOATS]);
}

async function textOf(file: string, open: OpenLog): Promise<string> {
  const decoder = new TextDecoder();
  let text = '';
  for await (const chunk of open(file).chunks) text += decoder.decode(chunk, { stream: true });
  return text + decoder.decode();
}

export function modelOf(spec: BoatSpec, crewMassKg?: number): RaceModel {
  const model = makeModel(spec, crewMassKg === undefined ? {} : { crewMassKg });
  const hash = createSha256();
  hash.update(new TextEncoder().encode(canonicalBoat(spec)));
  const tuned = !isUntuned(spec.tuning);
  const accuracy = ACCURACY[tuned ? 'tuned' : 'untuned'];
  return { spec, model, curve: speedCurve(model), tuned, accuracy, sha256: hash.digest() };
}
