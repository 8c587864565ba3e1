import { toKnots, fromKnots } from '../math/units.js';
import { UserError } from '../recording/issues.js';
import type { BoatFile } from './boat-schema.js';
import { checkWritten } from './check.js';
import { nearestKey } from './nearest-key.js';
import { readWritten, type WrittenFile } from './written.js';

/** A boat in inside units: what the boat model takes. */
export type BoatContent = ReturnType<typeof contentOf>;

/** Built-in boats, for files that say `like`. */
export type KnownBoats = readonly BoatContent[];

/**
 * Reads a boat file, YAML or JSON.
 *
 * @param text  Contents.
 * @param file  Name for messages.
 * @param known Boats that `like` may name: their numbers hold where the file has none.
 * @returns The boat. [m, kg, m/s, N, deg]
 * @throws UserError (2) with file, line, field, what is wrong.
 */
export async function readBoat(text: string, file: string, known: KnownBoats = []): Promise<BoatContent> {
  const written = readWritten(text, file);
  refuseOthers(written);
  const { boatFileSchema } = await import('./boat-schema.js');
  const content = checkWritten(boatFileSchema, written, overKnown(written, known));
  checkTogether(written, content);
  return contentOf(content);
}

function refuseOthers({ data, file }: WrittenFile): void {
  if (isGroup(data) && !('boats' in data)) return;
  throw new UserError(`${file}: not a boat file.`, {
    exitCode: 2,
    suggestion: 'A boat file is YAML or JSON with the keys boat, hull, foils, rig, crew and stability.',
  });
}

type Group = Readonly<Record<string, unknown>>;

const isGroup = (value: unknown): value is Group =>
  value !== null && typeof value === 'object' && !Array.isArray(value);

/** What was written, over the numbers of the boat it is like. */
function overKnown(written: WrittenFile, known: KnownBoats): unknown {
  const own = withoutExtensions(written.data) as Group;
  const { like } = own;
  if (typeof like !== 'string') return own;
  const model = known.find((boat) => boat.name === like);
  if (model) return merged(writtenForm(model), own);
  const names = known.map((boat) => boat.name);
  const near = nearestKey(like, names);
  throw new UserError(`${written.file}:${written.lineOf(['like'])}: no built-in boat \`${like}\`.`, {
    exitCode: 2,
    suggestion: near ? `The nearest is \`${near}\`; there are ${names.join(', ')}.` : 'Leave `like` out.',
  });
}

function withoutExtensions(value: unknown): unknown {
  if (!isGroup(value)) return value;
  const kept = Object.entries(value).filter(([key]) => !key.startsWith('x-'));
  return Object.fromEntries(kept.map(([key, inner]) => [key, withoutExtensions(inner)]));
}

function merged(below: Group, above: Group): Group {
  const out: Record<string, unknown> = { ...below };
  for (const [key, value] of Object.entries(above)) {
    const under = below[key];
    if (value === null || value === undefined) continue;
    out[key] = isGroup(value) && isGroup(under) ? merged(under, value) : value;
  }
  return out;
}

/** What no single field can tell. */
function checkTogether(written: WrittenFile, { hull, rig }: BoatFile): void {
  const refuse = (path: readonly PropertyKey[], what: string): never => {
    throw new UserError(`${written.file}:${written.lineOf(path)}: ${what}`, { exitCode: 2 });
  };
  if (rig.centre_m >= rig.head_m) refuse(['rig', 'centre_m'], '`rig.centre_m` is not below `rig.head_m`.');
  if ((rig.jib_m2 ?? 0) >= rig.area_m2) refuse(['rig', 'jib_m2'], '`rig.jib_m2` is not part of `rig.area_m2`.');
  (hull.resistance ?? []).forEach(([speed, newtons], i, rows) => {
    const before = rows[i - 1];
    if (before && !(speed > before[0] && newtons > before[1])) {
      refuse(['hull', 'resistance', i], '`hull.resistance` must rise in both columns.');
    }
  });
}

/** Written units to inside units, defaults filled in. */
function contentOf(file: BoatFile) {
  return {
    name: file.boat,
    description: file.description ?? '',
    hull: hullOf(file.hull),
    foils: {
      board: foilOf(file.foils.board),
      rudder: foilOf(file.foils.rudder),
      gap: file.foils.gap ?? 0.9,
      profileDrag: file.foils.profile_drag ?? 0.011,
    },
    rig: rigOf(file.rig),
    crew: { mass: file.crew.mass_kg, lever: file.crew.lever_m },
    stability: {
      metacentricHeight: file.stability.metacentric_height_m,
      heelLimit: file.stability.heel_limit_deg,
      heelPower: file.stability.heel_power ?? (file.stability.heel_limit_deg > 10 ? 1 : 3),
    },
    tuning: {
      hullResistance: file.tuning?.hull_resistance ?? 1,
      rigDrag: file.tuning?.rig_drag ?? 1,
      rightingMoment: file.tuning?.righting_moment ?? 1,
      foilSlope: file.tuning?.foil_slope ?? 1,
    },
  };
}

interface ResistanceTable {
  readonly speed: readonly number[];
  readonly resistance: readonly number[];
}

function tableOf(rows: readonly (readonly [number, number])[]): ResistanceTable {
  return { speed: rows.map(([knots]) => fromKnots(knots)), resistance: rows.map(([, newtons]) => newtons) };
}

function hullOf(hull: BoatFile['hull']) {
  const rows = hull.resistance;
  return {
    waterline: hull.waterline_m,
    mass: hull.mass_kg,
    wettedArea: hull.wetted_m2,
    formFactor: hull.form_factor ?? 1.1,
    residuaryFactor: hull.residuary_factor ?? 1,
    ...(rows && { table: tableOf(rows) }),
    heelDrag: hull.heel_drag ?? 0.5,
    waveDrag: hull.wave_drag ?? 0.15,
  };
}

function foilOf(foil: BoatFile['foils']['board']) {
  return { area: foil.area_m2, span: foil.span_m, sweep: foil.sweep_deg ?? 0 };
}

function rigOf(rig: BoatFile['rig']) {
  return {
    area: rig.area_m2,
    jibArea: rig.jib_m2 ?? 0,
    head: rig.head_m,
    centre: rig.centre_m,
    efficiency: rig.efficiency ?? (rig.jib_m2 ? 0.8 : 0.7),
    clMax: rig.cl_max ?? (rig.jib_m2 ? 1.4 : 1.35),
    camber: rig.camber_deg ?? 7.5,
    viscous: rig.viscous ?? 0.015,
    parasite: rig.parasite ?? 0.015,
    windage: rig.windage_m2,
    sheetingMin: rig.sheeting_min_deg ?? 0,
    sheetingMax: rig.sheeting_max_deg ?? 85,
  };
}

/**
 * A boat as boat file text.
 *
 * @param boat    Boat.
 * @param heading Lines for people on top, without the comment sign.
 * @returns YAML that `readBoat` reads back to the same boat.
 */
export async function boatText(boat: BoatContent, heading: readonly string[] = []): Promise<string> {
  const { stringify } = await import('yaml');
  const comment = heading.map((line) => `# ${line}\n`).join('');
  return comment + stringify(writtenForm(boat));
}

function writtenForm({ name, description, hull, foils, rig, crew, stability, tuning }: BoatContent): BoatFile {
  const foil = ({ area, span, sweep }: BoatContent['foils']['board']) => ({
    area_m2: area,
    span_m: span,
    sweep_deg: sweep,
  });
  const rows = hull.table?.speed.map((speed, i): [number, number] => [
    rounded(toKnots(speed)),
    hull.table!.resistance[i],
  ]);
  return {
    boat: name,
    description,
    hull: {
      waterline_m: hull.waterline,
      mass_kg: hull.mass,
      wetted_m2: hull.wettedArea,
      form_factor: hull.formFactor,
      residuary_factor: hull.residuaryFactor,
      ...(rows && { resistance: rows }),
      heel_drag: hull.heelDrag,
      wave_drag: hull.waveDrag,
    },
    foils: {
      board: foil(foils.board),
      rudder: foil(foils.rudder),
      gap: foils.gap,
      profile_drag: foils.profileDrag,
    },
    rig: {
      area_m2: rig.area,
      jib_m2: rig.jibArea,
      head_m: rig.head,
      centre_m: rig.centre,
      efficiency: rig.efficiency,
      cl_max: rig.clMax,
      camber_deg: rig.camber,
      viscous: rig.viscous,
      parasite: rig.parasite,
      windage_m2: rig.windage,
      sheeting_min_deg: rig.sheetingMin,
      sheeting_max_deg: rig.sheetingMax,
    },
    crew: { mass_kg: crew.mass, lever_m: crew.lever },
    stability: {
      metacentric_height_m: stability.metacentricHeight,
      heel_limit_deg: stability.heelLimit,
      heel_power: stability.heelPower,
    },
    tuning: {
      hull_resistance: tuning.hullResistance,
      rig_drag: tuning.rigDrag,
      righting_moment: tuning.rightingMoment,
      foil_slope: tuning.foilSlope,
    },
  };
}

/** Knots as written, without what the conversion to m/s and back adds. */
const rounded = (knots: number): number => Number(knots.toPrecision(12));
