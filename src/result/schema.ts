import { z } from 'zod';

/**
 * Schemas of what the program writes for other programs. Built twice: strict (nothing unnamed: the shipped JSON Schema
 * and our own tests) and open (readers: a later program of the same version may have added keys).
 */
type ObjectMaker = <T extends z.core.$ZodLooseShape>(shape: T) => z.ZodObject<T>;

const strict: ObjectMaker = (shape) => z.strictObject(shape);
const open: ObjectMaker = (shape) => z.looseObject(shape);

const time = z.iso.datetime().meta({ description: 'ISO 8601, UTC.' });
const count = z.int().nonnegative();
const digest = z.string().regex(/^[0-9a-f]{64}$/);
const side = z.enum(['port', 'starboard']);

function quantityIn(object: ObjectMaker) {
  const basis = z.enum(['measured', 'derived', 'inferred', 'assumed']);
  return object({
    value: z.number(),
    se: z.number().nonnegative().nullable().meta({ description: 'One standard error.' }),
    sys: z.number().optional().meta({ description: 'Shift for one standard deviation of calibration and mounting.' }),
    basis,
  }).nullable();
}

const quantities = <K extends string, S>(keys: readonly K[], schema: S): Record<K, S> =>
  Object.fromEntries(keys.map((key) => [key, schema])) as Record<K, S>;

const TACK_SIDE = [
  'gamma_deg',
  'speed_kn',
  'vmg_kn',
  'tws_kn',
  'aws_kn',
  'beta_deg',
  'awa_deg',
  'leeway_deg',
  'sheeting_deg',
  'incidence_deg',
  'aero_drag_angle_deg',
  'hydro_drag_angle_deg',
] as const;
const OPTIMUM = ['gamma_deg', 'speed_kn', 'vmg_kn', 'beta_deg', 'leeway_deg', 'sheeting_deg'] as const;
/** How the optimum's beta divides: files of others need not say. */
const OPTIMUM_PARTS = ['aero_drag_angle_deg', 'hydro_drag_angle_deg'] as const;
const PAIR = ['vmg_difference_kn', 'height_part_kn', 'speed_part_kn', 'gamma_difference_deg', 'gain_m'] as const;
/** Files of earlier programs do not say. */
const PAIR_TRIM = ['leeway_difference_deg', 'sheeting_difference_deg'] as const;
const LEEWAY_WAYS = ['heading', 'masthead', 'forces'] as const;
const CAUSES = ['manoeuvres', 'start', 'high', 'low', 'trim', 'speed', 'overstood', 'stopped', 'shifts'] as const;

function inputShape(object: ObjectMaker) {
  return {
    file: z.string(),
    sha256: digest,
    kind: z.string(),
    rows: count,
    kept: count,
    ignored: count,
    ignored_types: z.record(z.string(), count),
    rejected: z.array(object({ reason: z.string(), count, first_line: count })),
    fixes: count,
    samples: count,
    gaps: z.array(object({ from: time, seconds: z.number().nonnegative() })),
  };
}

function legIn(object: ObjectMaker) {
  const q = quantityIn(object);
  const tack = { seconds: z.number().nonnegative(), ...quantities(TACK_SIDE, q) };
  const steady = object({
    ...tack,
    tacking_angle_deg: q,
    port: object(tack).nullable(),
    starboard: object(tack).nullable(),
  });
  const ledger = object({
    reference: z.enum(['model', 'best', 'file']),
    ...quantities(['available_m', 'made_m', 'lost_m'] as const, q),
    entries: z.array(object({ cause: z.enum(CAUSES), metres: q })),
  });
  const way = z.enum(LEEWAY_WAYS);
  const trim = object({
    leeway_ways: z.array(object({ way, leeway_deg: q, weight: z.number() })),
    ...quantities(['sheeting_prior_deg', 'sheeting_posterior_deg'] as const, q),
  });
  return object({
    kind: z.enum(['upwind', 'downwind', 'reach']),
    lap: count,
    start: time,
    end: time,
    tacks: count,
    gybes: count,
    vmg_kn: q,
    steady: steady.nullable(),
    optimum: object({ ...quantities(OPTIMUM, q), ...quantities(OPTIMUM_PARTS, q.optional()) }).nullable(),
    ceiling_vmg_kn: q,
    efficiency: q,
    share: q,
    ledger: ledger.nullable(),
    trim: trim.nullable().optional(),
    notes: z.array(z.string()),
  });
}

function boatIn(object: ObjectMaker) {
  const q = quantityIn(object);
  const manoeuvre = object({
    kind: z.enum(['tack', 'gybe', 'round-up', 'bear-away', 'full-turn']),
    time,
    from: side,
    to: side,
    seconds: z.number().nonnegative(),
    loss_m: q,
  });
  return object({
    name: z.string(),
    sailor: z.string(),
    crew_mass_kg: z.number().positive().optional(),
    model: object({ boat: z.string(), tuned: z.boolean(), sha256: digest }),
    corrections: object({ compass_offset_deg: q, awa_offset_deg: q }),
    manoeuvres: z.array(manoeuvre),
    legs: z.array(legIn(object)),
    excess: object({
      over: z.string(),
      causes: z.array(object({ cause: z.enum(CAUSES), metres: q, stands: z.boolean() })),
    })
      .nullable()
      .optional(),
    hints: z.array(object({ text: z.string(), metres: q })).default([]),
  });
}

function pairIn(object: ObjectMaker) {
  const q = quantityIn(object);
  const parts = { ...quantities(PAIR, q), ...quantities(PAIR_TRIM, q.optional()), blocks: count };
  const way = object({ way: z.enum(LEEWAY_WAYS), leeway_difference_deg: q, weight: z.number() });
  const name = z.string().nullable();
  return object({
    boats: z.tuple([z.string(), z.string()]),
    ...parts,
    settled_s: z.number().nonnegative(),
    faster: name,
    higher: name,
    quicker: name,
    more_leeway: name.optional(),
    sheeted_wider: name.optional(),
    leeway_ways: z.array(way).optional(),
    legs: z.array(object({ lap: count, ...parts })),
    notes: z.array(z.string()),
  });
}

function warningIn(object: ObjectMaker) {
  return object({ code: z.string().regex(/^[a-z0-9-]+$/), message: z.string(), file: z.string().optional() });
}

function resultIn(object: ObjectMaker) {
  const q = quantityIn(object);
  return object({
    format: z.literal('legwork-result'),
    version: z.literal(1),
    program: object({ name: z.literal('legwork'), version: z.string() }),
    race: object({ name: z.string(), start: time.nullable(), finish: time.nullable() }),
    inputs: z.array(object(inputShape(object))),
    wind: object({
      sources: z.array(z.enum(['station', 'on-board', 'tracks', 'by-hand'])),
      twd_deg: q,
      tws_kn: q,
    }),
    corrections: object({ twd_offset_deg: q, current: object({ set_deg: q, drift_kn: q }).nullable() }),
    boats: z.array(boatIn(object)),
    pairs: z.array(pairIn(object)).optional(),
    warnings: z.array(warningIn(object)),
  });
}

/** The result file, nothing unnamed. */
export const resultSchema = resultIn(strict).meta({ title: 'Legwork result file' });
/** The result file as readers take it: unknown keys pass. */
export const openResultSchema = resultIn(open);

/** Of a result file what a season reads: a logbook may hold thousands. */
export const seasonResultSchema = seasonResult();

function seasonResult() {
  const q = z.object({ value: z.number(), se: z.number().nonnegative().nullable() }).nullable();
  const steady = z.object({
    seconds: z.number().nonnegative(),
    ...quantities(['vmg_kn', 'tws_kn', 'leeway_deg', 'sheeting_deg'] as const, q),
  });
  const leg = z.object({
    kind: z.enum(['upwind', 'downwind', 'reach']),
    ...quantities(['start', 'end'] as const, z.string()),
    steady: steady.nullable(),
    optimum: z.object(quantities(['leeway_deg', 'sheeting_deg'] as const, q)).nullable(),
    ...quantities(['efficiency', 'share'] as const, q),
    ledger: z.object({ reference: z.string(), ...quantities(['available_m', 'made_m'] as const, q) }).nullable(),
  });
  const boat = z.object({
    ...quantities(['name', 'sailor'] as const, z.string()),
    crew_mass_kg: z.number().positive().optional(),
    model: z.object({ boat: z.string(), sha256: z.string() }),
    manoeuvres: z.array(z.object({ kind: z.string(), loss_m: q })),
    legs: z.array(leg),
  });
  return z.object({
    format: z.literal('legwork-result'),
    version: z.literal(1),
    race: z.object({ name: z.string(), start: z.string().nullable() }),
    wind: z.object({ tws_kn: q }),
    boats: z.array(boat),
  });
}

const column = strict({ header: z.string(), means: z.string().nullable(), unit: z.string().nullable() });
const stretch = strict({ from: time, to: time, what: z.string() });

export const inspectSchema = z
  .strictObject({
    format: z.literal('legwork-inspect'),
    version: z.literal(1),
    files: z.array(
      z.strictObject({
        ...inputShape(strict),
        columns: z.array(column),
        from: time.nullable(),
        to: time.nullable(),
        rate_hz: z.number().nonnegative().nullable(),
        stretches: z.array(stretch),
        warnings: z.array(warningIn(strict)),
      }),
    ),
  })
  .meta({ title: 'Legwork inspect file' });

const OPTIMUM_ROW = [
  'tws_kn',
  'gamma_deg',
  'speed_kn',
  'vmg_kn',
  'beta_deg',
  'aero_drag_angle_deg',
  'hydro_drag_angle_deg',
  'leeway_deg',
  'sheeting_deg',
  'incidence_deg',
  'heel_deg',
  'aws_kn',
] as const;

export const optimumSchema = z
  .strictObject({
    format: z.literal('legwork-optimum'),
    version: z.literal(1),
    boat: z.string(),
    rows: z.array(strict(quantities(OPTIMUM_ROW, z.number()))),
    polar: z.array(strict({ tws_kn: z.number(), gamma_deg: z.number(), speed_kn: z.number() })).optional(),
  })
  .meta({ title: 'Legwork optimum file' });

const trend = strict({
  quantity: z.string(),
  slope_per_30_days: quantityIn(strict),
  p: z.number().min(0).max(1).nullable(),
  verdict: z.enum(['better', 'worse', 'nothing shown yet']),
  races_needed: z.number().nullable(),
});

export const seasonSchema = z
  .strictObject({
    format: z.literal('legwork-season'),
    version: z.literal(1),
    sailors: z.array(strict({ name: z.string(), races: count, trends: z.array(trend) })),
  })
  .meta({ title: 'Legwork season file' });
