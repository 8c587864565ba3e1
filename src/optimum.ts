import { readBoat } from './files/boat.js';
import { BUILT_IN_BOATS, builtInBoat } from './physics/built-in.js';
import type { BoatSpec } from './physics/boat-spec.js';
import { makeModel } from './physics/model.js';
import { optimumTable, type OptimumTable } from './physics/optimum.js';
import { UserError } from './recording/issues.js';

/** A boat file as text, with its name for messages. */
export interface BoatFileText {
  readonly name: string;
  readonly text: string;
}

/**
 * The boat model's best upwind sailing over a range of winds.
 *
 * @param boat  Name of a built-in boat, or a boat file.
 * @param winds True wind speeds. [kn]
 * @param options `polar`: also the whole polar diagram.
 * @throws UserError (2) for a boat that is not known or a file that cannot be used.
 */
export async function optimum(
  boat: string | BoatFileText,
  winds: readonly number[],
  options: { readonly polar?: boolean } = {},
): Promise<OptimumTable> {
  const spec = typeof boat === 'string' ? knownBoat(boat) : await readBoat(boat.text, boat.name, [...BUILT_IN_BOATS]);
  return optimumTable(makeModel(spec), spec.name, winds, options);
}

function knownBoat(name: string): BoatSpec {
  const spec = builtInBoat(name);
  if (spec) return spec;
  const known = BUILT_IN_BOATS.map((one) => one.name).join(', ');
  throw new UserError(`${name}: no built-in boat of that name, and no such file.`, {
    exitCode: 2,
    suggestion: `The built-in boats are ${known}.`,
  });
}
