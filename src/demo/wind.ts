/** The wind on the lake that afternoon: southwesterly, swinging, veering a little; carried down the course as it blows. */
import { cosine, dice, sine } from './exact.js';

export const WIND_FROM = 218;
const MEAN_KN = 11;
const MEAN_MS = (MEAN_KN * 1852) / 3600;
const ROOM = 600;

export interface Breeze {
  /** Where it comes from [deg], how strong [kn]. */
  readonly direction: number;
  readonly speed: number;
}

export type WindAt = (x: number, y: number, second: number) => Breeze;

/** @param seconds Length of the afternoon. */
export function lakeWind(seconds: number): WindAt {
  const lot = dice(20260418);
  const directions: number[] = [];
  const speeds: number[] = [];
  let phase = 40;
  let pace = 0;
  let eddy = 0;
  let puff = 0;
  for (let i = 0; i < seconds + 2 * ROOM; i++) {
    pace += -pace / 400 + 0.02 * lot.bell();
    phase += 360 / 330 + 0.4 * Math.max(-1, Math.min(1, pace));
    eddy += -eddy / 25 + 0.25 * lot.bell();
    puff += -puff / 45 + 0.17 * lot.bell();
    const veer = (4 * (i - ROOM)) / seconds;
    directions.push(WIND_FROM + 7.5 * sine(phase) + 1.6 * sine(2.7 * phase + 50) + eddy + veer - 2);
    speeds.push(Math.max(6, MEAN_KN + 0.8 * sine(0.6 * phase + 120) + puff));
  }
  const east = sine(WIND_FROM) / MEAN_MS;
  const north = cosine(WIND_FROM) / MEAN_MS;
  return (x, y, second) => {
    const place = Math.min(directions.length - 2, Math.max(0, second + ROOM + x * east + y * north));
    const i = Math.floor(place);
    const f = place - i;
    return {
      direction: directions[i] * (1 - f) + directions[i + 1] * f,
      speed: speeds[i] * (1 - f) + speeds[i + 1] * f,
    };
  };
}
