import { denseTransition } from "../numerics/dense-transition";
import { denseKernel } from "../numerics/method-choice";
import { denseOf } from "../numerics/rows";
import type { Generator } from "./generator";
import { checkMatrix, checkTimes } from "./horizon";
import { finish, type Steps } from "./steps";

/**
 * If it is here now, where will it be after this time?
 *
 * P(t) = exp(Qt), p_ij(t) = Pr(in state j at time t | in state i at time 0).
 *
 * @param generator - the chain, n states
 * @param time - finite, 0 or more, in the rates' time unit
 * @returns n × n, row-major: rows from, columns to; rows sum to 1; the identity at time 0
 * @throws `timeNegative`, `timeNotFinite`, `horizonTooLong`, `tooManyStates` above 1,000 states
 *
 * *Method*: Taylor series with non-negative terms, scaling and squaring, Xue & Ye 2008, with row repair (ours); see
 * `numerics/dense-transition.ts`. *Cost*: about 4 + log2(Λt) products of order n. *Accuracy*: entry by entry, relative
 * error at most 4e-15 (1 + |ln p|) for p ≥ 1e-280, below about 1e-290 products leave the double range;
 * `test/reference/battery-time.test.ts`.
 *
 * @example transitionMatrix(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), 0.5)[1] // -Math.expm1(-2) / 4
 */
export function transitionMatrix(generator: Generator, time: number): Float64Array {
  return finish(transitionMatrixSteps(generator, time));
}

export function* transitionMatrixSteps(generator: Generator, time: number): Steps<Float64Array> {
  checkMatrix(generator);
  checkTimes(generator, [time]);
  return yield* denseTransition(denseOf(generator), time, denseKernel());
}
