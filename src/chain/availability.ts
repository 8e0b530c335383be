import { valuesAt } from "../numerics/rows";
import { meanAbsorptionSteps } from "./absorption";
import { communicatingClasses, type StateSet } from "./classes";
import type { Generator } from "./generator";
import { checkTimes } from "./horizon";
import { failuresAlong } from "./jumps";
import { occupanciesSteps } from "./occupancy";
import { stationarySharesSteps } from "./stationary";
import { finish, type Steps } from "./steps";

/**
 * How likely is it to be up: in the long run, or at each of these times?
 *
 * Σ_{i∈up} π_i, or Σ_{i∈up} P(in i at time t). A small unavailability is asked for with the down states as `up`: it is then
 * a sum of small shares and keeps all its digits, as 1 − availability would not.
 *
 * @param generator - the chain, n states
 * @param up - the states that count as up
 * @param start - distribution at time 0; not needed in the long run with a single closed class, else the first state
 * @param times - each ≥ 0, in any order; omitted: the long run
 * @returns the long-run share, or one probability a time
 * @throws as `stationaryShares`; as `distributions` with times
 *
 * *Cost, accuracy*: those of `stationaryShares` and `distributions`.
 *
 * @example availability(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), Uint8Array.of(1, 0)) // 0.75
 */
export function availability(generator: Generator, up: StateSet, start?: Float64Array): number;
export function availability(
  generator: Generator, up: StateSet, start: Float64Array | undefined, times: ArrayLike<number>,
): Float64Array;
export function availability(
  generator: Generator, up: StateSet, start?: Float64Array, times?: ArrayLike<number>,
): number | Float64Array {
  return times ? finish(availabilityAtSteps(generator, up, start, times)) : finish(longRunAvailabilitySteps(generator, up, start));
}

export function* longRunAvailabilitySteps(generator: Generator, up: StateSet, start?: Float64Array): Steps<number> {
  return sumOver(up, yield* stationarySharesSteps(generator, start));
}

export function* availabilityAtSteps(
  generator: Generator, up: StateSet, start: Float64Array | undefined, times: ArrayLike<number>,
): Steps<Float64Array> {
  checkTimes(generator, times);
  const begin = start ?? Float64Array.from(up, (_, i) => (i === 0 ? 1 : 0));
  return (yield* valuesAt(generator, begin, times, [Float64Array.from(up)]))[0];
}

/**
 * What share of the next so many time units will it be up, on average?
 *
 * Σ_{i∈up} E[time in i over [0, horizon]] / horizon; at horizon 0 the start's share in `up`. Parameters as `availability`.
 *
 * @example intervalAvailability(Generator.fromArrows(1, []), Uint8Array.of(1), Float64Array.of(1), [10]) // [1]
 */
export function intervalAvailability(
  generator: Generator, up: StateSet, start: Float64Array, horizons: ArrayLike<number>,
): Float64Array {
  return finish(intervalAvailabilitySteps(generator, up, start, horizons));
}

export function* intervalAvailabilitySteps(
  generator: Generator, up: StateSet, start: Float64Array, horizons: ArrayLike<number>,
): Steps<Float64Array> {
  const times = yield* occupanciesSteps(generator, start, horizons);
  return Float64Array.from(times, (time, h) => (horizons[h] > 0 ? sumOver(up, time) / horizons[h] : sumOver(up, start)));
}

/** The seven figures of a repairable item; `NaN` or `Infinity` where one does not exist. */
export interface UpDown {
  readonly availability: number;
  readonly unavailability: number;
  /** Long-run jumps from up to down per time unit. */
  readonly failureRate: number;
  readonly meanUpTime: number;
  readonly meanDownTime: number;
  readonly meanTimeBetweenFailures: number;
  readonly meanTimeToFirstFailure: number;
}

/**
 * How often does it fail, how long is it up and down?
 *
 * With A = Σ_{i∈up} π_i, U = Σ_{i∉up} π_i and f = Σ_{i∈up, j∉up} π_i q_ij: mean up time A/f, mean down time U/f, mean time
 * between failures 1/f; these hold for any number of up and down states. The mean time to first failure is that from `start`
 * (or from the first up state) to the first state outside `up`.
 *
 * @param up - the states that count as up
 * @param start - distribution at time 0; omitted: the first up state for the first failure, and none for the long run
 * @returns seven figures. Long-run ones are `NaN` where several closed classes leave them open; without failures in the
 *   long run the up time and the time between failures are `Infinity` and the down time is `NaN`; the first failure is
 *   `Infinity` where it is not certain, 0 from a down state, `NaN` where no state is up
 * @throws `tooManyStates`, `ratesTooFarApart`
 *
 * *Method*: frequency of failures from products of shares and rates, down share summed as such (Barlow & Proschan 1965, ch. 3
 * for the two-state case). *Accuracy*: `test/reference/checks-chain.test.ts`.
 *
 * @example upDown(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), Uint8Array.of(1, 0)).meanDownTime // 0.3333333333333333
 */
export function upDown(generator: Generator, up: StateSet, start?: Float64Array): UpDown {
  return finish(upDownSteps(generator, up, start));
}

export function* upDownSteps(generator: Generator, up: StateSet, start?: Float64Array): Steps<UpDown> {
  const down = up.map((u) => 1 - u);
  let availability = NaN;
  let unavailability = NaN;
  let failureRate = NaN;
  if (start || communicatingClasses(generator).closed.filter(Boolean).length === 1) {
    const shares = yield* stationarySharesSteps(generator, start);
    availability = sumOver(up, shares);
    unavailability = sumOver(down, shares);
    failureRate = failuresAlong(generator, up, shares);
  }
  const means = yield* meanAbsorptionSteps(generator, down);
  const first = start ? expectation(start, means) : means[up.indexOf(1)] ?? NaN;
  return {
    availability,
    unavailability,
    failureRate,
    meanUpTime: availability / failureRate,
    meanDownTime: unavailability / failureRate,
    meanTimeBetweenFailures: 1 / failureRate,
    meanTimeToFirstFailure: first,
  };
}

function expectation(start: Float64Array, values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < start.length; i++) if (start[i] > 0) sum += start[i] * values[i];
  return sum;
}

function sumOver(set: StateSet, values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < set.length; i++) if (set[i]) sum += values[i];
  return sum;
}
