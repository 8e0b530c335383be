import { valuesAt } from "../numerics/rows";
import type { StateSet } from "./classes";
import type { Generator } from "./generator";
import { checkTimes } from "./horizon";
import { passage } from "./passage";
import { finish, type Steps } from "./steps";

/**
 * How likely is it that no target has been met by each of these times?
 *
 * S(t) = Pr(T > t), T = time of the first visit to a target; a start in a target counts as met at 0.
 *
 * @param generator - the chain, n states
 * @param start - n probabilities that sum to 1
 * @param targets - the states waited for
 * @param times - finite, 0 or more, in the rates' time unit, in any order
 * @returns one probability a time
 * @throws `timeNegative`, `timeNotFinite`, `horizonTooLong`
 *
 * *Method*: the chain stopped at the targets; the probability still outside them is summed, never taken as 1 − F, so
 * a survival of 1e-200 keeps its digits. *Cost*: one row, see `distributions`. *Accuracy*:
 * `test/reference/battery-time.test.ts`.
 *
 * @example survival(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), Uint8Array.of(0, 1), [100]) // [Math.exp(-200)]
 */
export function survival(generator: Generator, start: Float64Array, targets: StateSet, times: ArrayLike<number>): Float64Array {
  return finish(survivalSteps(generator, start, targets, times));
}

export function* survivalSteps(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  times: ArrayLike<number>,
): Steps<Float64Array> {
  const [notMet] = yield* passageValues(generator, start, targets, times, ["notMet"]);
  return notMet;
}

/**
 * How likely is it that a target has been met by each of these times?
 *
 * F(t) = Pr(T ≤ t), read from the stopped chain's last state and never as 1 − S, so a chance of 1e-30 keeps its digits.
 * Parameters, result, problems, method, cost and accuracy as `survival`.
 *
 * @example reached(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), Uint8Array.of(0, 1), [1e-20]) // [2e-20]
 */
export function reached(generator: Generator, start: Float64Array, targets: StateSet, times: ArrayLike<number>): Float64Array {
  return finish(reachedSteps(generator, start, targets, times));
}

export function* reachedSteps(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  times: ArrayLike<number>,
): Steps<Float64Array> {
  const [met] = yield* passageValues(generator, start, targets, times, ["met"]);
  return met;
}

/**
 * How much probability per time unit meets a target at each of these times?
 *
 * f(t) = dF/dt = Σ_i p_i(t) · (rate from i into the targets), i outside the targets. Other points as `survival`.
 *
 * @example density(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), Uint8Array.of(0, 1), [0]) // [2]
 */
export function density(generator: Generator, start: Float64Array, targets: StateSet, times: ArrayLike<number>): Float64Array {
  return finish(densitySteps(generator, start, targets, times));
}

export function* densitySteps(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  times: ArrayLike<number>,
): Steps<Float64Array> {
  const [flow] = yield* passageValues(generator, start, targets, times, ["flow"]);
  return flow;
}

/** Survival below this has lost digits to the end of the double range; a hazard is not taken from it. */
export const SMALLEST_SURVIVAL = 1e-290;

/**
 * If no target has been met by then, at what rate is one being met?
 *
 * h(t) = f(t)/S(t). Other points as `survival`; NaN where S is 0 or below `SMALLEST_SURVIVAL`.
 *
 * @example hazard(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), Uint8Array.of(0, 1), [7]) // [2]
 */
export function hazard(generator: Generator, start: Float64Array, targets: StateSet, times: ArrayLike<number>): Float64Array {
  return finish(hazardSteps(generator, start, targets, times));
}

export function* hazardSteps(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  times: ArrayLike<number>,
): Steps<Float64Array> {
  const [notMet, flow] = yield* passageValues(generator, start, targets, times, ["notMet", "flow"]);
  return notMet.map((s, m) => (s < SMALLEST_SURVIVAL ? NaN : flow[m] / s));
}

type PassageValue = "met" | "notMet" | "flow";

function* passageValues(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  times: ArrayLike<number>,
  values: readonly PassageValue[],
): Steps<Float64Array[]> {
  checkTimes(generator, times);
  const { generator: stopped, start: begin, met, rateIn } = passage(generator, start, targets);
  const functionals = values.map((value) => {
    if (value === "flow") return rateIn;
    const mask = new Float64Array(met + 1).fill(value === "met" ? 0 : 1);
    mask[met] = value === "met" ? 1 : 0;
    return mask;
  });
  return yield* valuesAt(stopped, begin, times, functionals);
}
