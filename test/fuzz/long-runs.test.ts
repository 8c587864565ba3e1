/**
 * Sixty thousand times the same letter at one place of a line: a reader that looks for something in a cell by trying
 * it from every letter takes the square of it. Two places of three kinds of logs in a usual run, every place of every
 * line of a kind with LEGWORK_LONG=1.
 */
import { expect, test } from 'vitest';
import { UserError } from '../../src/recording/issues.js';
import { importBytes } from '../importers/check-import.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const RUN = 60_000;
/** Processor time [s] for a log of 60 kB: the square of its length would be ten times that. */
const MOST = 1;

const RUNS = [' ', '\t', '0', '1', '9', '.', ',', ';', ':', '-', '+', 'x', 'T', 'Z', '"', "'", '(', ')', '[', ']'];
const MORE = ['*', '$', '!', '\\', '/', '<', '>', '&', '=', '#', '°', '\u00a0', '\ufeff', '\r', '\n', '\0', '1 ', '1.'];

const nmea = (body: string): string =>
  `$${body}*${[...body]
    .reduce((sum, letter) => sum ^ letter.charCodeAt(0), 0)
    .toString(16)
    .padStart(2, '0')
    .toUpperCase()}`;

interface Kind {
  readonly head: string;
  /** Lines that are damaged. */
  readonly lines: readonly string[];
  readonly tail: string;
}

const KINDS: Readonly<Record<string, Kind>> = {
  nmea: {
    head: `${nmea('GPRMC,120500,A,4654.72,N,00903.66,E,5.0,310.0,180426,,,A')}\n`,
    lines: [
      `2026-04-18T12:05:01Z ${nmea('GPRMC,120501,A,4654.73,N,00903.66,E,5.0,310.0,180426,,,A')}`,
      nmea('WIMWV,45.0,R,14.0,N,A'),
    ],
    tail: `\n${nmea('GPRMC,120502,A,4654.74,N,00903.66,E,5.0,310.0,180426,,,A')}\n`,
  },
  table: {
    head: 'date,time,lat,lon,sog\n2026-04-18,12:05:00,46.912,9.061,5.2\n',
    lines: ['2026-04-18,12:05:01,46.912,9.061,5.2', '18.04.2026,2:05 PM +02:00,46°54.72\'N,9°03.66\'E,"5,2 kn"'],
    tail: '\n2026-04-18,12:05:02,46.912,9.061,5.2\n',
  },
  'table of stamps': {
    head: 'time;twd;tws\n',
    lines: ['18/04/2026 14:05:00 +02:00;215;12.5', 'time;twd (deg true);tws [kn]'],
    tail: '\n18/04/2026 14:05:10 +02:00;215;12.5\n',
  },
  gpx: {
    head: '<?xml version="1.0"?><gpx><trk><name>a</name><trkseg>\n',
    lines: [
      '<trkpt lat="46.912" lon="9.061"><time>2026-04-18T12:05:01Z</time><speed>2.5</speed></trkpt>',
      '<!-- a --><extensions><x:speed unit="m/s">&amp;2</x:speed></extensions>',
    ],
    tail: '\n<trkpt lat="46.913" lon="9.062"><time>2026-04-18T12:05:02Z</time></trkpt></trkseg></trk></gpx>\n',
  },
};

/** Processor time of reading a log, whatever comes of it. [s] */
async function costOf(text: string): Promise<number> {
  const before = process.cpuUsage();
  try {
    await importBytes(new TextEncoder().encode(text), { zone: 'Europe/Zurich' });
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
  }
  const { user, system } = process.cpuUsage(before);
  return (user + system) / 1e6;
}

/** Where a run is put in: two places of a line, or all. */
function places(line: string): number[] {
  return LONG ? Array.from({ length: line.length + 1 }, (_, at) => at) : [0, Math.floor(line.length / 3)];
}

test.each(Object.keys(KINDS))(
  'runs of one letter in a log (%s) cost no more than their length',
  async (name) => {
    const { head, lines, tail } = KINDS[name];
    const slow: string[] = [];
    for (const line of lines) {
      for (const letters of LONG ? [...RUNS, ...MORE] : RUNS) {
        const run = letters.repeat(RUN / letters.length) + 'x';
        for (const at of places(line)) {
          const cost = await costOf(head + line.slice(0, at) + run + line.slice(at) + tail);
          if (cost > MOST) slow.push(`${JSON.stringify(letters)} at ${at} of ${line}: ${cost} s`);
        }
      }
    }
    expect(slow).toEqual([]);
  },
  3600_000,
);
