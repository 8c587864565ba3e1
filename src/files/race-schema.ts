import { z } from 'zod';
import { parsePosition } from './position.js';
import { isDay, isZone, parseTime } from './times.js';

/**
 * The race file as people write it. Strict: what is not named here is a mistake, `notes` and `x-…` apart (the latter
 * are taken out before this schema sees the data). An empty value counts as not given.
 */

const optional = <T extends z.ZodType>(schema: T) => schema.nullish();

const name = z.union([z.string().trim().min(1), z.number()]).transform(String);
const path = z.string().min(1, 'is empty: a file name is wanted');
const time = z
  .string('is not a time: write 14:05 or 2026-04-18T14:05:00+02:00')
  .refine((text) => parseTime(text) !== null, 'is not a time: write 14:05 or 2026-04-18T14:05:00+02:00')
  .meta({ description: 'ISO 8601 date and time, or a time of day on the day of the log.' });
const zone = z
  .string()
  .refine(isZone, 'is not a time zone: write one of the IANA data base, such as Europe/Zurich')
  .meta({ description: 'IANA time zone for times that carry none.' });
const day = z.string().refine(isDay, 'is not a day: write YYYY-MM-DD');
const direction = z.number().min(-360).max(360);
const notes = optional(z.unknown()).meta({
  description: 'For people; the program keeps text and reads no meaning from it.',
});

const pair = z.tuple([z.number().min(-90).max(90), z.number().min(-180).max(180)]);
const written = z
  .string()
  .refine((text) => parsePosition(text) !== null, 'is not a position: write [lat, lon] or "46 54.72 N 9 03.66 E"');
const position = z
  .union([pair, written])
  .meta({ description: '[lat, lon] in degrees, or text such as "46 54.72 N 9 03.66 E".' });
const mark = z
  .union([position, z.tuple([position, position]), z.tuple([position])])
  .meta({ description: 'One position is a mark, two are a gate or a line.' });

const logKeys = {
  file: path,
  zone: optional(zone),
  date: optional(day).meta({ description: 'Day of a log whose times carry no date.' }),
  columns: optional(z.record(z.string(), z.string())).meta({ description: 'Header: field or field:unit.' }),
  clock_s: optional(z.number()).meta({ description: 'Added to its clock. [s]' }),
  from: optional(time),
  to: optional(time),
  notes,
};
const log = z.union([path, z.strictObject(logKeys)]);
const logs = z.union([log, z.array(log).min(1)]);

const station = z.strictObject({
  ...logKeys,
  at: optional(position).meta({ description: 'Where it stood.' }),
  height_m: optional(z.number().positive().max(200)).meta({
    description: 'Height above the water; without it nothing is scaled.',
  }),
  accuracy: optional(
    z.strictObject({
      dir_deg: optional(z.number().nonnegative().max(180)),
      speed_percent: optional(z.number().nonnegative().max(100)),
      notes,
    }),
  ).meta({ description: 'One standard deviation of its mounting and calibration; 2 degrees and 2 % when not said.' }),
  offset_deg: optional(z.number().min(-360).max(360)).meta({ description: 'Added to its direction.' }),
});
const errorKeys = {
  se_deg: optional(z.number().positive().max(180)),
  se_kn: optional(z.number().positive().max(50)),
  notes,
};
const steadyWind = z.strictObject({ twd_deg: direction, tws_kn: z.number().nonnegative().max(150), ...errorKeys });
const windRow = z.tuple([time, direction, z.number().nonnegative().max(150)]);
const windReadings = z.strictObject({ readings: z.array(windRow).min(1), ...errorKeys });
const windEntry = z.union([path, station, steadyWind, windReadings]);

const setAndDrift = { set_deg: direction, drift_kn: z.number().nonnegative().max(20) };
const currentEntry = z.strictObject({ time, ...setAndDrift, notes });
const currentRow = z.tuple([time, direction, z.number().nonnegative().max(20)]);
const current = z.union([
  z.strictObject({ ...setAndDrift, notes }),
  z.array(z.union([currentEntry, currentRow])).min(1),
]);

const boat = z.strictObject({
  name: optional(name).meta({ description: 'As written; without it the name inside the track, else the file name.' }),
  sailor: optional(name).meta({ description: 'Who the season counts; the name when not said.' }),
  track: logs,
  instruments: optional(logs),
  boat: optional(path).meta({ description: 'Built-in boat or boat file.' }),
  crew_mass_kg: optional(z.number().positive().max(2000)),
  zone: optional(zone),
  from: optional(time),
  to: optional(time),
  notes,
});

const marks = z.strictObject({
  windward: optional(mark),
  leeward: optional(mark),
  start: optional(mark),
  finish: optional(mark),
  wing: optional(mark),
  offset: optional(mark),
  notes,
});

const oneOfSeveral = z.strictObject({ race: optional(name), start: optional(time), finish: optional(time), notes });

export const raceFileSchema = z
  .strictObject({
    $schema: optional(z.string()),
    race: optional(name),
    races: optional(z.array(oneOfSeveral).min(1)),
    start: optional(time).meta({ description: 'The gun.' }),
    finish: optional(time),
    zone: optional(zone),
    date: optional(day).meta({ description: 'Day of times of day, and of logs whose times carry no date.' }),
    boat: optional(path).meta({ description: 'Built-in boat or boat file for all boats that name none.' }),
    wind: optional(z.union([windEntry, z.array(windEntry)])),
    current: optional(current).meta({ description: 'Where it flows to, and how fast.' }),
    marks: optional(marks),
    runs: optional(z.array(z.tuple([time, time]))).meta({ description: 'Practice without a course: from, to.' }),
    exclude: optional(z.array(z.strictObject({ from: time, to: time, why: optional(z.string()), notes }))),
    boats: z.array(boat).min(1, 'names no boat: at least one with a `track` is needed'),
    notes,
  })
  .meta({ title: 'Legwork race file' });

export type RaceFile = z.output<typeof raceFileSchema>;
export type WrittenBoat = RaceFile['boats'][number];
export type WrittenLogs = WrittenBoat['track'];
export type WrittenMark = z.output<typeof mark>;
export type WrittenPosition = z.output<typeof position>;
export type WrittenWind = z.output<typeof windEntry>;
export type WrittenCurrent = z.output<typeof current>;
