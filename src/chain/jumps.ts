import type { StateSet } from "./classes";
import type { Generator } from "./generator";
import { occupanciesSteps } from "./occupancy";
import { stationarySharesSteps } from "./stationary";
import { finish, type Steps } from "./steps";

/**
 * How often is each arrow used over the next so many time units?
 *
 * Expected number of jumps i→j over [0, horizon] = expected time in i × q_ij.
 *
 * @param generator - the chain, n states
 * @param start - distribution at time 0
 * @param horizon - ≥ 0
 * @returns n × n, rows "from", columns "to", diagonal 0
 *
 * *Cost, accuracy*: those of `occupancies`.
 *
 * @example jumpCounts(Generator.fromArrows(2, [[0, 1, 1e-9]]), Float64Array.of(1, 0), 1)[1] // 9.999999995e-10
 */
export function jumpCounts(generator: Generator, start: Float64Array, horizon: number): Float64Array {
  return finish(jumpCountsSteps(generator, start, horizon));
}

export function* jumpCountsSteps(generator: Generator, start: Float64Array, horizon: number): Steps<Float64Array> {
  const [time] = yield* occupanciesSteps(generator, start, [horizon]);
  return perArrow(generator, time);
}

/**
 * How many failures over the next so many time units?
 *
 * Expected number of jumps from `up` to a state outside it over [0, horizon]: Σ_{i∈up} time in i × Σ_{j∉up} q_ij.
 * Parameters as `jumpCounts`.
 *
 * @example failureCount(Generator.fromArrows(2, [[0, 1, 1e-9]]), Uint8Array.of(1, 0), Float64Array.of(1, 0), 1) // 9.999999995e-10
 */
export function failureCount(generator: Generator, up: StateSet, start: Float64Array, horizon: number): number {
  return finish(failureCountSteps(generator, up, start, horizon));
}

export function* failureCountSteps(
  generator: Generator, up: StateSet, start: Float64Array, horizon: number,
): Steps<number> {
  const [time] = yield* occupanciesSteps(generator, start, [horizon]);
  return failuresAlong(generator, up, time);
}

/** Σ_{i∈up} weight_i Σ_{j∉up} q_ij. */
export function failuresAlong(generator: Generator, up: StateSet, weight: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < generator.size; i++) {
    if (!up[i] || weight[i] === 0) continue;
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++)
      if (!up[generator.toState[p]]) sum += weight[i] * generator.rate[p];
  }
  return sum;
}

/**
 * How often is each arrow used per time unit in the long run?
 *
 * π_i q_ij, n × n. Parameters and problems as `stationaryShares`.
 *
 * @example flows(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]])) // [0, 0.75, 0.75, 0]
 */
export function flows(generator: Generator, start?: Float64Array): Float64Array {
  return finish(flowsSteps(generator, start));
}

export function* flowsSteps(generator: Generator, start?: Float64Array): Steps<Float64Array> {
  return perArrow(generator, yield* stationarySharesSteps(generator, start));
}

/**
 * Where does it go next?
 *
 * q_ij / q_i, n × n probabilities of the next state at a jump; the row of an absorbing state is 1 on the diagonal.
 *
 * @example jumpChain(Generator.fromArrows(2, [[0, 1, 4]])) // [0, 1, 0, 1]
 */
export function jumpChain(generator: Generator): Float64Array {
  const n = generator.size;
  const result = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    if (generator.rowStart[i] === generator.rowStart[i + 1]) result[i * n + i] = 1;
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++)
      result[i * n + generator.toState[p]] = generator.rate[p] / generator.exitRate[i];
  }
  return result;
}

/**
 * How long does a stay in each state last on average?
 *
 * 1 / q_i; `Infinity` in an absorbing state.
 *
 * @example holdingTimes(Generator.fromArrows(2, [[0, 1, 4]])) // [0.25, Infinity]
 */
export function holdingTimes(generator: Generator): Float64Array {
  return generator.exitRate.map((exit) => 1 / exit);
}

function perArrow(generator: Generator, weight: Float64Array): Float64Array {
  const n = generator.size;
  const result = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++)
      result[i * n + generator.toState[p]] = weight[i] * generator.rate[p];
  return result;
}
