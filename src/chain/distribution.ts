import { rowsAt } from "../numerics/rows";
import type { Generator } from "./generator";
import { checkTimes } from "./horizon";
import { finish, type Steps } from "./steps";

/**
 * Where will it be at each of these times, given where it starts?
 *
 * p(t) = p(0) · exp(Qt)
 *
 * @param generator - the chain, n states
 * @param start - n probabilities that sum to 1
 * @param times - finite, 0 or more, in the rates' time unit, in any order
 * @returns for each time, in the order given, n probabilities in state order
 * @throws `timeNegative`, `timeNotFinite`, `horizonTooLong`
 *
 * *Method*: jump by jump (uniformization with full tails) or through stored squarings, whichever is cheaper;
 * `numerics/rows.ts`. *Cost*: Λt · arrows, or about (4 + log2(Λt)) n³ and log2(Λt) n² more a time. *Accuracy*: as
 * `transitionMatrix`, `test/reference/battery-time.test.ts`.
 *
 * @example distributions(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), [0, 1]) // [[1, 0], [Math.exp(-2), -Math.expm1(-2)]]
 */
export function distributions(generator: Generator, start: Float64Array, times: ArrayLike<number>): Float64Array[] {
  return finish(distributionsSteps(generator, start, times));
}

export function* distributionsSteps(
  generator: Generator,
  start: Float64Array,
  times: ArrayLike<number>,
): Steps<Float64Array[]> {
  checkTimes(generator, times);
  return yield* rowsAt(generator, start, times);
}
