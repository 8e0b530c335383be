import { denseKernel } from "../numerics/method-choice";
import { denseOf } from "../numerics/rows";
import { settlingTime as settling } from "../numerics/settling";
import type { Generator } from "./generator";
import { checkMatrix } from "./horizon";
import { Problem } from "./problem";
import { finish, type Steps } from "./steps";

/**
 * How long until it no longer matters where it started from and how long ago?
 *
 * The smallest t with max_i ½ Σ_j |p_ij(t) − p_ij(∞)| ≤ tolerance.
 *
 * @param generator - the chain, n states
 * @param tolerance - total variation distance, above 0 and below 1
 * @returns the time, in the rates' time unit; 0 if every start is within the tolerance already
 * @throws `toleranceOutside` {tolerance}; `tooManyStates` {states} above 1,000 states
 *
 * *Method*: from P(t) itself by stored squarings, `numerics/settling.ts`; never from eigenvalues. *Cost*: about
 * 2 log2(Λt) + 20 products of order n. *Accuracy*: `test/unit/chain/over-time.test.ts` against closed forms, 1e-14 relative, down
 * to tolerances of 1e-300.
 *
 * @example settlingTime(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), 0.01) // Math.log(75) / 4
 */
export function settlingTime(generator: Generator, tolerance: number): number {
  return finish(settlingTimeSteps(generator, tolerance));
}

export function* settlingTimeSteps(generator: Generator, tolerance: number): Steps<number> {
  if (!(tolerance > 0 && tolerance < 1)) throw new Problem("toleranceOutside", { tolerance });
  checkMatrix(generator);
  return yield* settling(denseOf(generator), tolerance, denseKernel());
}
