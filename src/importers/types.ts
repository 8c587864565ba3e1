import type { StreamHash } from '../math/sha256.js';
import type { Issue, Rejection } from '../recording/issues.js';
import type { Channel, Recording } from '../recording/recording.js';

/** A log as it comes: a name for messages (never an absolute path) and its bytes in order. Browser-safe: no files. */
export interface LogSource {
  readonly name: string;
  /** A chunk is done with when the next is asked for: its memory may hold that one then. */
  readonly chunks: AsyncIterable<Uint8Array> | Iterable<Uint8Array>;
  /** A faster SHA-256 where the host has one; ours by default. */
  readonly createHash?: () => StreamHash;
  /** What comes of reading the log, where the host reads it in another way to the same end; null: it does not. */
  readonly elsewhere?: (options: ImportOptions) => Promise<ImportedLog> | null;
}

/** What the reader of a log may have to be told. */
export interface ImportOptions {
  /** IANA zone for times that carry none. Without it such times are read as UTC, with the warning `zone-assumed`. */
  readonly zone?: string;
  /** Day (YYYY-MM-DD) for logs whose times carry no date. */
  readonly date?: string;
  /** Header -> `field` or `field:unit`, as `--columns` gives it. */
  readonly columns?: Readonly<Record<string, string>>;
}

/** A column (or sentence field) as it was understood. `means` is null when nothing uses it. */
export interface ColumnReading {
  readonly header: string;
  readonly means: Channel | 'time' | 'date' | null;
  readonly unit: string | null;
}

export type LogKind = 'gpx' | 'nmea' | 'csv';

/** One log, read. rows = kept + ignored + rejected, always. */
export interface ImportedLog {
  readonly kind: LogKind;
  readonly recording: Recording;
  /** Records read: track points, table rows, sentences. */
  readonly rows: number;
  readonly kept: number;
  /** Valid records that hold nothing we use. */
  readonly ignored: number;
  readonly ignoredTypes: Readonly<Record<string, number>>;
  readonly rejected: readonly Rejection[];
  /** Positions with a time that reached the recording. */
  readonly fixes: number;
  /** Rows with wind (apparent or true). */
  readonly samples: number;
  readonly columns: readonly ColumnReading[];
  /** Warnings: cut file, zone assumed, spread stamps, generic names. */
  readonly issues: readonly Issue[];
  /** SHA-256 of the bytes as they came, lower-case hexadecimal. */
  readonly sha256: string;
}
