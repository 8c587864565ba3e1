import type { Basis } from '../result/result.js';

/** How a figure is known, at length: what the page tells on hover, on focus or on a tap. */

export const BASIS_WORDS: Readonly<Record<Basis, string>> = {
  measured: 'measured',
  derived: 'worked out from measurements by geometry',
  inferred: 'inferred through the boat model',
  assumed: 'assumed',
};

/**
 * The whole sentence from a figure as shown and its short note (`errorNote`).
 *
 * @param shown Value with its unit.
 * @param note  "±0.03 kn, ±0.08 kn by calibration; derived".
 */
export function errorSentence(shown: string, note: string): string {
  const [errors, basis] = note.split('; ');
  const [own, calibration] = errors.split(', ');
  const parts = [
    own.startsWith('±') ? `${own} (one standard error)` : 'no error could be stated',
    ...(calibration
      ? [
          `a further ${calibration.replace(/ by calibration$/, '')} if the instruments are out by their usual calibration error`,
        ]
      : []),
    BASIS_WORDS[basis as Basis],
  ];
  return `${shown}: ${parts.join('; ')}.`;
}
