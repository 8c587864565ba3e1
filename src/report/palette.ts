/**
 * Colours by role. Each names a custom property of the page with the light value behind it, so that a picture taken out
 * of the page keeps its colours. No pair of roles is told apart by colour alone: boats have line patterns, tacks have
 * letters.
 */
export const INK = 'var(--ink,#1b2733)';
export const SOFT = 'var(--soft,#5a636e)';
export const RULE = 'var(--rule,#cfc6b2)';
export const PAPER = 'var(--paper,#fbf8f1)';
export const CURSOR = 'var(--mark,#9c1b5a)';
export const PORT = 'var(--port,#ab3a31)';
export const STARBOARD = 'var(--starboard,#24734a)';
export const LOSS = 'var(--loss,#8d5a1b)';
export const GAIN = 'var(--gain,#1d6b6b)';

const BOATS = ['var(--boat-0,#1f4e79)', 'var(--boat-1,#a8570a)', 'var(--boat-2,#0d6e66)', 'var(--boat-3,#6b3a8c)'];
const PATTERNS = ['', '7 3.5', '2 3', '9 3 2 3'];

export interface BoatPaint {
  readonly colour: string;
  /** stroke-dasharray; empty: a whole line. */
  readonly dash: string;
}

/** Colour and pattern of a boat by its place in the result; beyond four the patterns move on against the colours. */
export function boatPaint(index: number): BoatPaint {
  const round = Math.floor(index / BOATS.length);
  return { colour: BOATS[index % BOATS.length], dash: PATTERNS[(index + round) % PATTERNS.length] };
}
