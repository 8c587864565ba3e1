/**
 * Begins what comes up to `most` at a time and gives the outcomes in the order of what came.
 *
 * @param begin Must not fail: an outcome can tell of a failure.
 */
export async function* inOrder<Step, Outcome>(
  steps: AsyncIterable<Step>,
  begin: (step: Step) => Promise<Outcome>,
  most: number,
): AsyncGenerator<Outcome> {
  const begun: Promise<Outcome>[] = [];
  for await (const step of steps) {
    begun.push(begin(step));
    if (begun.length >= most) yield await begun.shift()!;
  }
  for (const outcome of begun) yield await outcome;
}
