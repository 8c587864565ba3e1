/**
 * A race file after reading: every key understood, defaults filled in, times as UTC seconds, units as inside
 * (m/s, metres, degrees). Made by `files/race.ts` from what people write, or by the command line from bare log files.
 */

export interface LatLon {
  readonly lat: number;
  readonly lon: number;
}

/** A log named in the race file, and how to read it. */
export interface LogReference {
  /** As written, relative to the race file, `/` as separator. */
  readonly file: string;
  readonly zone?: string;
  readonly date?: string;
  readonly columns?: Readonly<Record<string, string>>;
  /** Use only this part, where a logger changed hands. UTC seconds. */
  readonly from?: number;
  readonly to?: number;
  /** Added to the log's clock. [s] */
  readonly clockS: number;
}

export interface StationReference extends LogReference {
  readonly kind: 'log';
  /** Where it stood; absent: not known (or it moves and logs its position). */
  readonly at?: LatLon;
  /** Height above the water; absent: nothing is scaled. [m] */
  readonly heightM?: number;
  /** One standard deviation of mounting. [deg] */
  readonly accuracyDir: number;
  /** One standard deviation of calibration, as a fraction (0.02). */
  readonly accuracySpeed: number;
  /** Added to its direction. [deg] */
  readonly offset: number;
}

export interface HandWind {
  readonly kind: 'by-hand';
  /** One reading holds for all times; several are interpolated. */
  readonly readings: readonly { readonly time: number | null; readonly twd: number; readonly tws: number }[];
  /** Standard errors. [deg], [m/s] */
  readonly seDir: number;
  readonly seSpeed: number;
}

export type WindReference = StationReference | HandWind;

export interface BoatReference {
  readonly name: string;
  readonly sailor: string;
  readonly track: readonly LogReference[];
  readonly instruments: readonly LogReference[];
  /** Built-in boat or boat file, as written. */
  readonly boat: string;
  readonly crewMassKg?: number;
}

export interface CurrentReading {
  /** null: holds for all times. UTC seconds. */
  readonly time: number | null;
  /** Where it flows to. [deg true] */
  readonly set: number;
  /** [m/s] */
  readonly drift: number;
}

export type MarkRole = 'windward' | 'leeward' | 'start' | 'finish' | 'wing' | 'offset';

/** One position is a mark, two a line or gate. */
export type Marks = Readonly<Partial<Record<MarkRole, readonly LatLon[]>>>;

export interface Span {
  readonly from: number;
  readonly to: number;
}

export interface Race {
  readonly name: string;
  /** The gun, UTC seconds; null: not known. */
  readonly start: number | null;
  readonly finish: number | null;
  /** IANA zone of the race, for the page; null: not given. */
  readonly zone: string | null;
  readonly wind: readonly WindReference[];
  /** null: not given, so unknown. */
  readonly current: readonly CurrentReading[] | null;
  readonly marks: Marks;
  /** Practice runs without a course. */
  readonly runs: readonly Span[];
  readonly exclude: readonly (Span & { readonly why: string })[];
  readonly boats: readonly BoatReference[];
  /** True when `boat` was not said and the default was taken. */
  readonly boatAssumed: boolean;
  readonly notes: string | null;
}
