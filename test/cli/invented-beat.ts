/**
 * A beat sailed by rule, for tests of the outside only: four tacks of two minutes, each 45 degrees off a steady wind
 * from the north at five knots, one fix a second.
 */
const START = Date.UTC(2026, 3, 18, 12, 0, 0);
const LAT = 46.9;
const LON = 9.06;
const SPEED = 2.572;

interface Fix {
  readonly time: number;
  readonly lat: number;
  readonly lon: number;
}

export function inventedBeat(shift = 0, tacks = 4, seconds = 120): Fix[] {
  const perLat = 111_160;
  const perLon = 76_200;
  let [x, y] = [shift, 0];
  return Array.from({ length: tacks * seconds }, (_, i) => {
    const leg = Math.floor(i / seconds);
    const since = i % seconds;
    const slow = leg > 0 && since < 10 ? 0.6 : 1;
    // The bow comes round through the wind within eight seconds.
    const turned = leg === 0 ? 1 : Math.min(1, since / 8);
    const side = leg % 2 === 0 ? 1 : -1;
    const course = side * 45 * (leg === 0 ? 1 : 2 * turned - 1);
    x += slow * SPEED * Math.sin((course * Math.PI) / 180);
    y += slow * SPEED * Math.cos((course * Math.PI) / 180);
    return { time: START + 1000 * i, lat: LAT + y / perLat, lon: LON + x / perLon };
  });
}

export function gpxText(fixes: readonly Fix[], name = ''): string {
  const points = fixes.map(
    ({ time, lat, lon }) =>
      `<trkpt lat="${lat.toFixed(7)}" lon="${lon.toFixed(7)}"><time>${new Date(time).toISOString()}</time></trkpt>`,
  );
  const title = name === '' ? '' : `<name>${name}</name>`;
  return `<?xml version="1.0"?>\n<gpx version="1.1" creator="test" xmlns="http://www.topografix.com/GPX/1/1">\n<trk>${title}<trkseg>\n${points.join('\n')}\n</trkseg></trk></gpx>\n`;
}

export function windText(from = START, seconds = 480): string {
  const rows = Array.from({ length: seconds / 10 }, (_, i) => `${new Date(from + 10_000 * i).toISOString()},0,10`);
  return `time,twd_deg,tws_kn\n${rows.join('\n')}\n`;
}
