import type { Basis, Cause, Ledger } from '../result/result.js';

/** The causes of the ledger in a sailor's words. */
export const CAUSE_WORDS: Readonly<Record<Cause, string>> = {
  manoeuvres: 'Tacks and turns',
  start: 'Start and roundings',
  high: 'Sailing high',
  low: 'Sailing low',
  trim: 'Trim',
  speed: 'Speed for the angle',
  overstood: 'Overstanding',
  stopped: 'Stopped',
  shifts: 'Shifts',
};

export const CAUSE_MEANING: Readonly<Record<Cause, string>> = {
  manoeuvres: 'Tacks, other turns and the recovery after them.',
  start: 'From the gun or the leeward turn until settled, and the last seconds at the windward mark.',
  high: 'Sailed nearer the wind than the reference’s best angle.',
  low: 'Sailed wider than the reference’s best angle; the reach into the mark after a lift is in it.',
  trim: 'What the inferred sheeting angle accounts for, where leeway was measured.',
  speed:
    'Slower than the reference at the angle sailed: waves, weight, gear, steering, and what the boat model does not know.',
  overstood: 'Sailed past the layline before the last tack.',
  stopped: 'Slower than a third of settled speed, or turning full circles.',
  shifts: 'What the swings of the wind gave (negative) or took on the tack that was sailed.',
};

export const REFERENCE_WORDS: Readonly<Record<Ledger['reference'], string>> = {
  model: 'the boat model as it stands',
  best: 'the boat model anchored on the best settled sailing of the day',
  file: 'another boat file',
};

export const BASIS_SHORT: Readonly<Record<Basis, string>> = {
  measured: 'measured',
  derived: 'derived',
  inferred: 'inferred',
  assumed: 'assumed',
};
