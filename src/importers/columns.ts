/**
 * How headers of tables are understood: one table of the names people and devices give their columns, one of the
 * units, one of the words that only qualify. Common practice, no source.
 */
import { FOOT, KILOMETRE_PER_HOUR, KNOT, MILE_PER_HOUR } from '../math/units.js';
import type { Channel } from '../recording/recording.js';

/** What a column may mean: a channel, a part of the time, or the letter that belongs to the number beside it. */
export type Meaning = Channel | 'time' | 'date' | 'awaSide' | 'latSide' | 'lonSide';

/** Names, in lower case, words parted by blanks, without unit and qualifiers. */
const NAMES: Readonly<Record<Meaning, readonly string[]>> = {
  time: [
    'time',
    'timestamp',
    'time stamp',
    'datetime',
    'date time',
    'date and time',
    'time of day',
    'iso time',
    'iso8601',
    'iso',
    'utc time',
    'gmt time',
    'utc',
    'gmt',
    'epoch',
    'epoch time',
    'unix',
    'unix time',
    'unixtime',
    'unix timestamp',
    'posix time',
    'gps time',
    'local time',
    'clock',
    'ts',
    't',
    'when',
    'zeit',
    'uhrzeit',
    'zeitstempel',
    'datum zeit',
    'datum uhrzeit',
    'heure',
    'horodatage',
    'hora',
    'fecha hora',
    'ora',
    'data ora',
    'tijd',
    'tid',
    'tidspunkt',
    'aika',
    'czas',
    'tms',
    'logged at',
    'recorded at',
    'created at',
    'sample time',
    'date heure',
    'tijdstip',
  ],
  date: [
    'date',
    'day',
    'gps date',
    'utc date',
    'datum',
    'fecha',
    'jour',
    'data',
    'dato',
    'dag',
    'pvm',
    'ymd',
    'yyyy mm dd',
    'yyyymmdd',
  ],
  lat: [
    'lat',
    'latitude',
    'gps lat',
    'gps latitude',
    'lat wgs84',
    'position lat',
    'position latitude',
    'lat dd',
    'latitude dd',
    'breite',
    'breitengrad',
    'geogr breite',
    'latitud',
    'latitudine',
    'breedtegraad',
    'bredde',
    'breddegrad',
    'decimal latitude',
    'start lat',
    'location latitude',
  ],
  lon: [
    'lon',
    'long',
    'lng',
    'longitude',
    'gps lon',
    'gps long',
    'gps lng',
    'gps longitude',
    'lon wgs84',
    'position lon',
    'position long',
    'position longitude',
    'lon dd',
    'longitude dd',
    'lange',
    'laenge',
    'langengrad',
    'laengengrad',
    'longitud',
    'longitudine',
    'lengtegraad',
    'lengde',
    'lengdegrad',
    'longitudegrad',
    'decimal longitude',
    'start lon',
    'location longitude',
  ],
  sog: [
    'sog',
    'speed',
    'speed over ground',
    'speed over the ground',
    'gps speed',
    'gps sog',
    'ground speed',
    'groundspeed',
    'spd',
    'velocity',
    'location speed',
    'vitesse',
    'vitesse fond',
    'geschwindigkeit',
    'geschwindigkeit uber grund',
    'fahrt uber grund',
    'fug',
    'velocidad',
    'velocita',
    'snelheid',
    'fart',
    'hastighet',
    'nopeus',
    'v sog',
  ],
  cog: [
    'cog',
    'course',
    'course over ground',
    'course over the ground',
    'gps course',
    'gps cog',
    'gps heading',
    'track angle',
    'course made good',
    'cmg',
    'bearing',
    'gps bearing',
    'location course',
    'ground track',
    'kurs uber grund',
    'kug',
    'kurs',
    'route fond',
    'rumbo',
    'rotta',
    'koers',
    'suunta',
    'heading over ground',
  ],
  heading: ['hdt', 'gyro', 'gyro heading', 'true hdg'],
  headingMagnetic: [
    'hdg',
    'heading',
    'head',
    'hdm',
    'compass',
    'compass heading',
    'compass course',
    'boat heading',
    'bow',
    'cap',
    'steuerkurs',
    'kompass',
    'kompasskurs',
    'compas',
    'prua',
    'kompas',
  ],
  variation: [
    'variation',
    'var',
    'magvar',
    'mag var',
    'magnetic variation',
    'declination',
    'magnetic declination',
    'missweisung',
  ],
  stw: [
    'stw',
    'bsp',
    'bs',
    'boat speed',
    'boatspeed',
    'speed through water',
    'speed through the water',
    'water speed',
    'speed water',
    'log speed',
    'hull speed',
    'paddle wheel',
    'paddlewheel',
    'fahrt durchs wasser',
    'fdw',
    'geschwindigkeit durchs wasser',
    'vitesse surface',
    'vitesse eau',
  ],
  heel: [
    'heel',
    'heel angle',
    'roll',
    'roll angle',
    'krangung',
    'kraengung',
    'gite',
    'escora',
    'sbandamento',
    'helling',
    'list',
  ],
  awa: [
    'awa',
    'apparent wind angle',
    'app wind angle',
    'aw angle',
    'wind angle apparent',
    'wind angle',
    'relative wind angle',
    'rel wind angle',
    'apparent angle',
    'apparent wind direction',
    'apparent wind dir',
    'relative wind direction',
    'scheinbarer windwinkel',
    'scheinbarer wind winkel',
    'angle vent apparent',
    'angle du vent apparent',
    'rwa',
  ],
  aws: [
    'aws',
    'apparent wind speed',
    'app wind speed',
    'aw speed',
    'wind speed apparent',
    'relative wind speed',
    'rel wind speed',
    'apparent wind',
    'scheinbare windgeschwindigkeit',
    'vitesse vent apparent',
    'rws',
    'vitesse du vent apparent',
  ],
  twd: [
    'twd',
    'true wind direction',
    'true wind dir',
    'wind direction',
    'wind dir',
    'winddir',
    'winddirection',
    'wind from',
    'wind direction from',
    'wind dir from',
    'wdir',
    'wd',
    'gwd',
    'ground wind direction',
    'wind bearing',
    'wind heading',
    'dir',
    'direction',
    'windrichtung',
    'richtung',
    'direction du vent',
    'direction vent',
    'direccion del viento',
    'direccion viento',
    'direzione vento',
    'direzione del vento',
    'windrichting',
    'vindretning',
    'vindriktning',
    'wind degrees',
    'wind deg',
    'true wind from',
    'mean wind direction',
  ],
  twdMagnetic: ['magnetic wind direction', 'mwd'],
  tws: [
    'tws',
    'true wind speed',
    'wind speed',
    'windspeed',
    'wind spd',
    'wspd',
    'ws',
    'wind',
    'gws',
    'ground wind speed',
    'wind velocity',
    'wind strength',
    'wind force speed',
    'windgeschwindigkeit',
    'windstarke',
    'vitesse du vent',
    'vitesse vent',
    'velocidad del viento',
    'velocidad viento',
    'velocita vento',
    'velocita del vento',
    'windsnelheid',
    'vindhastighed',
    'vindstyrke',
    'vindhastighet',
    'true wind',
    'mean wind speed',
    'wind average',
    'wind speed average',
  ],
  twa: ['twa', 'true wind angle', 'wind angle true', 'angle vent reel', 'wahrer windwinkel'],
  awaSide: ['awa side', 'wind side', 'apparent wind side', 'side', 'tack side', 'awa lr', 'awa ps'],
  latSide: ['ns', 'n s', 'lat ns', 'lat n s', 'latitude ns', 'lat hemisphere', 'lat hem', 'latitude hemisphere'],
  lonSide: ['ew', 'e w', 'lon ew', 'lon e w', 'longitude ew', 'lon hemisphere', 'lon hem', 'longitude hemisphere'],
};

const MEANING_OF: ReadonlyMap<string, Meaning> = new Map(
  (Object.entries(NAMES) as [Meaning, readonly string[]][]).flatMap(([meaning, names]) =>
    names.map((name) => [name, meaning] as const),
  ),
);

export type Kind = 'speed' | 'angle' | 'time';

export interface Unit {
  readonly name: string;
  readonly kind: Kind;
  /** Times this, in m/s, degrees or seconds. */
  readonly factor: number;
}

const unit = (name: string, kind: Kind, factor: number): Unit => ({ name, kind, factor });
const KN = unit('kn', 'speed', KNOT);
const MS = unit('m/s', 'speed', 1);
const KMH = unit('km/h', 'speed', KILOMETRE_PER_HOUR);
const MPH = unit('mph', 'speed', MILE_PER_HOUR);
const FTS = unit('ft/s', 'speed', FOOT);
const DEG = unit('deg', 'angle', 1);
const RADIANS = unit('rad', 'angle', 180 / Math.PI);

/** Units, as words of a header: lower case, without signs between. */
const UNITS: Readonly<Record<string, Unit>> = {
  kn: KN,
  kt: KN,
  kts: KN,
  kns: KN,
  knot: KN,
  knots: KN,
  knoten: KN,
  noeuds: KN,
  nudos: KN,
  nodi: KN,
  knopen: KN,
  sm: KN,
  nmh: KN,
  'nm h': KN,
  ms: MS,
  mps: MS,
  'm s': MS,
  'm s 1': MS,
  'ms 1': MS,
  'm sec': MS,
  msec: MS,
  'meters per second': MS,
  'metres per second': MS,
  kmh: KMH,
  kph: KMH,
  kmph: KMH,
  'km h': KMH,
  'km h 1': KMH,
  mph: MPH,
  'mi h': MPH,
  mih: MPH,
  'miles per hour': MPH,
  'ft s': FTS,
  fps: FTS,
  deg: DEG,
  degs: DEG,
  degree: DEG,
  degrees: DEG,
  grad: DEG,
  dd: DEG,
  d: DEG,
  rad: RADIANS,
  rads: RADIANS,
  radian: RADIANS,
  radians: RADIANS,
  s: unit('s', 'time', 1),
  sec: unit('s', 'time', 1),
  secs: unit('s', 'time', 1),
  seconds: unit('s', 'time', 1),
  millis: unit('ms', 'time', 1e-3),
  milliseconds: unit('ms', 'time', 1e-3),
  us: unit('us', 'time', 1e-6),
  ns: unit('ns', 'time', 1e-9),
  'ms time': unit('ms', 'time', 1e-3),
};

/** Words that say of which kind a value is and leave its name as it is. */
const TRUE_WORDS = new Set(['true', 't', 'geographic', 'rechtweisend', 'vrai']);
const MAGNETIC_WORDS = new Set(['magnetic', 'mag', 'm', 'magnetisch', 'compass', 'magnetique']);
const UTC_WORDS = new Set(['utc', 'gmt', 'z', 'zulu', 'unix', 'epoch']);
const IDLE_WORDS = new Set([
  'local',
  'lt',
  'loc',
  'mst',
  'mdt',
  'cet',
  'cest',
  'est',
  'edt',
  'pst',
  'pdt',
  'cst',
  'cdt',
  'bst',
  'eet',
  'eest',
  'avg',
  'average',
  'mean',
  'raw',
  'sensor',
  'value',
  'iso',
  'iso8601',
  'hh',
  'mm',
  'ss',
  'hhmmss',
  'yyyy',
  'dd',
  'decimal',
  'wgs84',
  'the',
  'from',
  '1min',
  '1hz',
  'gps',
  'gnss',
  'smoothed',
  'filtered',
  'measured',
]);

/** A header taken apart. */
export interface Header {
  readonly meaning: Meaning | null;
  readonly unit: Unit | null;
  /** The header says that its times are UTC. */
  readonly utc: boolean;
  /** The header says that its directions are relative to the sensor. */
  readonly sensor: boolean;
}

/** No header of a column is longer: what follows is damage, and taking it apart grows with the square of its length. */
const LONGEST_HEADER = 200;

const NO_HEADER: Header = { meaning: null, unit: null, utc: false, sensor: false };

/** What a header says, as far as it is known. */
export function readHeader(text: string): Header {
  if (text === '') return NO_HEADER;
  const header = text.slice(0, LONGEST_HEADER);
  const all = wordsOf(header);
  const { words, unit: said } = MEANING_OF.has(all.join(' ')) ? { words: all, unit: null } : splitUnit(header);
  const qualifiers = { utc: false, sensor: false, north: '' };
  const meaning = lookUp(words, qualifiers);
  const fits = meaning !== null && said !== null && said.kind === kindOf(meaning);
  return {
    meaning: withNorth(meaning, qualifiers.north),
    unit: fits ? said : null,
    utc: qualifiers.utc || words.some((word) => UTC_WORDS.has(word)),
    sensor: words.includes('sensor'),
  };
}

/** What kind of unit belongs to a meaning. */
export function kindOf(meaning: Meaning): Kind | null {
  if (meaning === 'sog' || meaning === 'stw' || meaning === 'aws' || meaning === 'tws') return 'speed';
  if (meaning === 'time') return 'time';
  return meaning === 'date' || meaning.endsWith('Side') ? null : 'angle';
}

/** A unit by its name, as in `Speed=sog:m/s`. */
export function readUnit(text: string, kind: Kind | null): Unit | null {
  const words = wordsOf(text);
  if (kind === 'time' && words.join(' ') === 'ms') return unit('ms', 'time', 1e-3);
  const found = unitNamed(words.join(' '));
  return found && found.kind === kind ? found : null;
}

function unitNamed(name: string): Unit | null {
  return Object.hasOwn(UNITS, name) ? UNITS[name] : null;
}

function withNorth(meaning: Meaning | null, north: string): Meaning | null {
  if (meaning === 'headingMagnetic' && north === 'true') return 'heading';
  if (meaning === 'heading' && north === 'magnetic') return 'headingMagnetic';
  if (meaning === 'twd' && north === 'magnetic') return 'twdMagnetic';
  // A magnetic course over ground has no channel.
  if (meaning === 'cog' && north === 'magnetic') return null;
  return meaning;
}

/** The words of a header: accents and signs gone, words in camel case parted. */
function wordsOf(text: string): string[] {
  return text
    .replace(/[°º]/g, ' deg ')
    .replace(/([\p{Ll}\d])(\p{Lu})/gu, '$1 $2')
    .replace(/(\p{Lu}+)(\p{Lu}\p{Ll})/gu, '$1 $2')
    .replaceAll('ß', 'ss')
    .normalize('NFD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .split(/[^\p{L}\p{N}]+/u)
    .filter((word) => word !== '');
}

/** Takes the unit off a header: what stands in parentheses or brackets, or the last words. */
function splitUnit(header: string): { words: string[]; unit: Unit | null } {
  let found: Unit | null = null;
  const rest = header.replace(/[([{]([^)\]}]*)[)\]}]/g, (_, inner: string) => {
    const words = wordsOf(inner);
    const own = unitNamed(words.join(' ')) ?? unitNamed(words[0] ?? '');
    if (!own) return ` ${inner} `;
    found = own;
    return ` ${words.slice(unitNamed(words.join(' ')) ? words.length : 1).join(' ')} `;
  });
  const words = wordsOf(rest);
  for (let length = 3; length >= 1 && !found; length--) {
    if (words.length <= length) continue;
    found = unitNamed(words.slice(-length).join(' '));
    if (found) words.splice(-length);
  }
  return { words: words.filter((word, k) => k === 0 || word !== 'in'), unit: found };
}

/** The meaning of words: as they are, or with the qualifying ones left out, one after another. */
function lookUp(words: readonly string[], found: { north: string }): Meaning | null {
  const exact = MEANING_OF.get(words.join(' '));
  if (exact) {
    if (exact === 'headingMagnetic' || exact === 'heading') found.north = northOfWords(words);
    return exact;
  }
  found.north = northOfWords(words);
  const bare = words.filter((word) => !IDLE_WORDS.has(word) && !UTC_WORDS.has(word));
  const north = bare.filter((word) => !TRUE_WORDS.has(word) && !MAGNETIC_WORDS.has(word));
  return MEANING_OF.get(bare.join(' ')) ?? MEANING_OF.get(north.join(' ')) ?? null;
}

function northOfWords(words: readonly string[]): string {
  if (words.some((word) => TRUE_WORDS.has(word))) return 'true';
  return words.some((word) => MAGNETIC_WORDS.has(word)) ? 'magnetic' : '';
}
