/** The result file: the contract of `legwork debrief --json`. Plain JSON, knots, degrees, metres, UTC. */

export type Basis = 'measured' | 'derived' | 'inferred' | 'assumed';

/** A quantity with its error. `se`: one standard error as sailed; `sys`: shift for one sd of calibration and mounting. */
export interface Quantity {
  readonly value: number;
  readonly se: number | null;
  readonly sys?: number;
  readonly basis: Basis;
}

export type Q = Quantity | null;

export interface InputEntry {
  readonly file: string;
  readonly sha256: string;
  readonly kind: string;
  readonly rows: number;
  readonly kept: number;
  readonly ignored: number;
  readonly ignored_types: Readonly<Record<string, number>>;
  readonly rejected: readonly { readonly reason: string; readonly count: number; readonly first_line: number }[];
  readonly fixes: number;
  readonly samples: number;
  readonly gaps: readonly { readonly from: string; readonly seconds: number }[];
}

export type WindSource = 'station' | 'on-board' | 'tracks' | 'by-hand';
export type Side = 'port' | 'starboard';
export type ManoeuvreKind = 'tack' | 'gybe' | 'round-up' | 'bear-away' | 'full-turn';
export type Cause = 'manoeuvres' | 'start' | 'high' | 'low' | 'trim' | 'speed' | 'overstood' | 'stopped' | 'shifts';

export interface ManoeuvreResult {
  readonly kind: ManoeuvreKind;
  /** Bow (or course) through the wind. */
  readonly time: string;
  readonly from: Side;
  readonly to: Side;
  readonly seconds: number;
  readonly loss_m: Q;
}

export interface TackSide {
  readonly seconds: number;
  readonly gamma_deg: Q;
  readonly speed_kn: Q;
  readonly vmg_kn: Q;
  readonly tws_kn: Q;
  readonly aws_kn: Q;
  readonly beta_deg: Q;
  readonly awa_deg: Q;
  readonly leeway_deg: Q;
  readonly sheeting_deg: Q;
  readonly incidence_deg: Q;
  readonly aero_drag_angle_deg: Q;
  readonly hydro_drag_angle_deg: Q;
}

export interface Steady extends TackSide {
  readonly tacking_angle_deg: Q;
  readonly port: TackSide | null;
  readonly starboard: TackSide | null;
}

export interface OptimumResult {
  readonly gamma_deg: Q;
  readonly speed_kn: Q;
  readonly vmg_kn: Q;
  readonly beta_deg: Q;
  readonly aero_drag_angle_deg?: Q;
  readonly hydro_drag_angle_deg?: Q;
  readonly leeway_deg: Q;
  readonly sheeting_deg: Q;
}

export interface Ledger {
  readonly reference: 'model' | 'best' | 'file';
  readonly available_m: Q;
  readonly made_m: Q;
  readonly lost_m: Q;
  readonly entries: readonly { readonly cause: Cause; readonly metres: Q }[];
}

export interface LegResult {
  readonly kind: 'upwind' | 'downwind' | 'reach';
  readonly lap: number;
  readonly start: string;
  readonly end: string;
  readonly tacks: number;
  readonly gybes: number;
  readonly vmg_kn: Q;
  readonly steady: Steady | null;
  readonly optimum: OptimumResult | null;
  readonly ceiling_vmg_kn: Q;
  readonly efficiency: Q;
  readonly share: Q;
  readonly ledger: Ledger | null;
  readonly trim?: TrimResult | null;
  readonly notes: readonly string[];
}

/** What leeway and sheeting of a beat rest on. */
export interface TrimResult {
  /** Each way leeway was had by, with its weight in the mean. */
  readonly leeway_ways: readonly {
    readonly way: 'heading' | 'masthead' | 'forces';
    readonly leeway_deg: Q;
    readonly weight: number;
  }[];
  /** Sheeting as believed before the log was seen, and after, however little it says. */
  readonly sheeting_prior_deg: Q;
  readonly sheeting_posterior_deg: Q;
}

export interface BoatResult {
  readonly name: string;
  readonly sailor: string;
  /** Where the race file says it. [kg] */
  readonly crew_mass_kg?: number;
  readonly model: { readonly boat: string; readonly tuned: boolean; readonly sha256: string };
  readonly corrections: { readonly compass_offset_deg: Q; readonly awa_offset_deg: Q };
  readonly manoeuvres: readonly ManoeuvreResult[];
  readonly legs: readonly LegResult[];
  /** What the boat lost more than the day's best boat, or that more than the next; null with one boat. */
  readonly excess?: ExcessResult | null;
  /** At most three plain sentences, strongest first. */
  readonly hints: readonly Hint[];
}

/** Metres lost more than another boat, largest first, shifts last. Errors are of the habit, not of the race as sailed. */
export interface ExcessResult {
  readonly over: string;
  readonly causes: readonly {
    readonly cause: Cause;
    readonly metres: Q;
    /** Beyond what chance makes of so many causes: then there is a hint. */
    readonly stands: boolean;
  }[];
}

export interface Hint {
  readonly text: string;
  readonly metres: Q;
}

export interface PairLeg {
  readonly lap: number;
  readonly vmg_difference_kn: Q;
  readonly height_part_kn: Q;
  readonly speed_part_kn: Q;
  readonly gamma_difference_deg: Q;
  readonly gain_m: Q;
  /** Over the same blocks; left out by earlier programs. `sys`: offsets, what is left of compass and vane, the boat file. */
  readonly leeway_difference_deg?: Q;
  readonly sheeting_difference_deg?: Q;
  readonly blocks: number;
}

export interface PairResult {
  readonly boats: readonly [string, string];
  readonly vmg_difference_kn: Q;
  readonly height_part_kn: Q;
  readonly speed_part_kn: Q;
  readonly gamma_difference_deg: Q;
  readonly gain_m: Q;
  readonly leeway_difference_deg?: Q;
  readonly sheeting_difference_deg?: Q;
  readonly blocks: number;
  readonly settled_s: number;
  readonly faster: string | null;
  readonly higher: string | null;
  readonly quicker: string | null;
  /** Who made more leeway, and whose boom was farther out, beyond chance and what the instruments are good to. */
  readonly more_leeway?: string | null;
  readonly sheeted_wider?: string | null;
  /** Each way the difference in leeway was had by, with its weight in the mean. */
  readonly leeway_ways?: readonly {
    readonly way: 'heading' | 'masthead' | 'forces';
    readonly leeway_difference_deg: Q;
    readonly weight: number;
  }[];
  readonly legs: readonly PairLeg[];
  readonly notes: readonly string[];
}

export interface Warning {
  readonly code: string;
  readonly message: string;
  readonly file?: string;
}

export interface Result {
  readonly format: 'legwork-result';
  readonly version: 1;
  readonly program: { readonly name: 'legwork'; readonly version: string };
  readonly race: { readonly name: string; readonly start: string | null; readonly finish: string | null };
  readonly inputs: readonly InputEntry[];
  readonly wind: { readonly sources: readonly WindSource[]; readonly twd_deg: Q; readonly tws_kn: Q };
  readonly corrections: {
    readonly twd_offset_deg: Q;
    readonly current: { readonly set_deg: Q; readonly drift_kn: Q } | null;
  };
  readonly boats: readonly BoatResult[];
  readonly pairs?: readonly PairResult[];
  readonly warnings: readonly Warning[];
}
