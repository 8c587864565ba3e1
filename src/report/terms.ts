import { html, type Safe } from './html.js';

/** The words of the page, each explained once, in a sailor's language. */
export interface Term {
  readonly word: string;
  readonly meaning: string;
}

export const TERMS = {
  vmg: {
    word: 'VMG',
    meaning:
      'Velocity made good: how fast the boat gains toward the wind, whatever way she points. Here it is through the water, along the wind of each moment.',
  },
  settled: {
    word: 'settled',
    meaning:
      'Close-hauled and in her stride: tacks, roundings, the seconds it takes to recover from them and the reach into the mark are left out.',
  },
  dayBest: {
    word: 'the day’s best',
    meaning:
      'The leg with the highest settled VMG of any boat in this report. The wind may have been stronger on it; the wind row says so.',
  },
  courseAngle: {
    word: 'course angle to the true wind',
    meaning:
      'The angle between where the boat goes through the water and where the true wind comes from. It includes leeway, so it is a few degrees wider than what the bow shows.',
  },
  tackingAngle: {
    word: 'tacking angle',
    meaning:
      'The angle between the settled courses on the two tacks. A narrow angle is height, not merit: VMG says whether it paid.',
  },
  speed: {
    word: 'speed',
    meaning: 'Speed through the water while settled; over the ground where no current is known.',
  },
  apparentAngle: {
    word: 'apparent wind angle',
    meaning: 'The wind angle felt aboard, off the bow, as a masthead vane would show it.',
  },
  beta: {
    word: 'course angle to the apparent wind',
    meaning:
      'Apparent wind angle plus leeway. It equals the drag angle of the rig plus the drag angle of hull and foils: the smaller the two together, the closer the boat can go.',
  },
  dragAngle: {
    word: 'drag angle',
    meaning:
      'How far the force of the rig, or of the hull and foils, leans back from square to the flow. Small is slippery.',
  },
  leeway: { word: 'leeway', meaning: 'Angle from the bow to the course through the water: the slip to leeward.' },
  sheeting: {
    word: 'sheeting angle',
    meaning: 'Angle of the boom off the centreline. Where it is inferred, it is soft: a few degrees either way.',
  },
  trueWind: {
    word: 'true wind',
    meaning: 'The wind as felt by somebody drifting with the water, at the height of the rig.',
  },
  asymmetry: {
    word: 'port less starboard',
    meaning:
      'How the two tacks differ. A wind direction that is out by one degree shows as two degrees here, so read it together with the trust section before blaming the crew.',
  },
  tackCost: {
    word: 'cost of a tack',
    meaning:
      'Metres to windward that the turn and the recovery cost, against sailing on settled. A clean dinghy tack too costs some metres.',
  },
  optimum: {
    word: 'model’s optimum',
    meaning:
      'The best VMG the boat model can find in that leg’s wind. It is the model’s opinion; unless the model was tuned to this boat, its level may be off by several per cent.',
  },
  ceiling: {
    word: 'upper bound',
    meaning:
      'No boat whose course makes this angle to the apparent wind can make more to windward: a theorem of the wind triangle. It is a bound, not a mark to be scored against.',
  },
  available: {
    word: 'available',
    meaning: 'Metres the reference would have made to windward in the same time and wind.',
  },
  reference: {
    word: 'reference',
    meaning:
      'What the ledger is measured against: the boat model, the model anchored on the best settled sailing of the day, or another boat file.',
  },
  standardError: {
    word: '± error',
    meaning:
      'One standard error: of three readings like this one, two lie within it and one does not. Differences smaller than two of them are not evidence.',
  },
  shift: {
    word: 'shifts',
    meaning:
      'What the wind’s swings gave or took on the tack that was sailed. Negative metres were gained. Luck and judgement are not told apart.',
  },
  layline: {
    word: 'layline',
    meaning:
      'The line on which a boat just fetches the mark without another tack, here drawn at her own settled angle.',
  },
  height: { word: 'height', meaning: 'The part of a difference in VMG that comes from pointing.' },
  quickness: { word: 'speed part', meaning: 'The part of a difference in VMG that comes from going faster.' },
} as const satisfies Record<string, Term>;

export type TermKey = keyof typeof TERMS;

/** A word that explains itself when touched, focused or clicked; works without a script. */
export function term(key: TermKey, words: string = TERMS[key].word): Safe {
  return html`<button type="button" class="term" popovertarget="word-${key}">${words}</button>`;
}

/** The cards behind the words. */
export function termCards(): Safe {
  return html`${Object.entries(TERMS).map(
    ([key, { word, meaning }]) =>
      html`<div popover id="word-${key}" class="card">
        <b>${word}</b>
        <p>${meaning}</p>
      </div>`,
  )}`;
}
