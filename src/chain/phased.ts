import { distributionsSteps } from "./distribution";
import type { Generator } from "./generator";
import { occupanciesSteps } from "./occupancy";
import { finish, within, type Steps } from "./steps";

/**
 * Where will it be at the end of each phase, when each phase has rates of its own?
 *
 * p_k = p_(k−1) · exp(Q_k d_k)
 *
 * @param generators - one chain a phase, all of the same n states
 * @param durations - of each phase, finite, 0 or more, in the rates' time unit
 * @param start - n probabilities that sum to 1
 * @returns for each phase, n probabilities at its end
 * @throws as `distributions`
 *
 * *Method*: the row is taken through the phases in order. Cost and accuracy as `distributions`, added up.
 *
 * @example phasedDistributions([Generator.fromArrows(2, [[0, 1, 2]]), Generator.fromArrows(2, [])], [1, 9], Float64Array.of(1, 0))[1]
 * // [Math.exp(-2), -Math.expm1(-2)]
 */
export function phasedDistributions(
  generators: readonly Generator[],
  durations: ArrayLike<number>,
  start: Float64Array,
): Float64Array[] {
  return finish(phasedDistributionsSteps(generators, durations, start));
}

export function* phasedDistributionsSteps(
  generators: readonly Generator[],
  durations: ArrayLike<number>,
  start: Float64Array,
): Steps<Float64Array[]> {
  const ends: Float64Array[] = [];
  const phases = generators.length;
  for (let k = 0; k < phases; k++) {
    const row = ends[k - 1] ?? start;
    const [end] = yield* within(distributionsSteps(generators[k], row, [durations[k]]), k / phases, (k + 1) / phases);
    ends.push(end);
  }
  return ends;
}

/**
 * How long is spent in each state during each phase, on average?
 *
 * Parameters and problems as `phasedDistributions`; result: for each phase, n times that sum to its duration.
 *
 * @example phasedOccupancies([Generator.fromArrows(2, [[0, 1, 2]])], [1e9], Float64Array.of(1, 0)) // [[0.5, 999999999.5]]
 */
export function phasedOccupancies(
  generators: readonly Generator[],
  durations: ArrayLike<number>,
  start: Float64Array,
): Float64Array[] {
  return finish(phasedOccupanciesSteps(generators, durations, start));
}

export function* phasedOccupanciesSteps(
  generators: readonly Generator[],
  durations: ArrayLike<number>,
  start: Float64Array,
): Steps<Float64Array[]> {
  const ends = yield* within(phasedDistributionsSteps(generators, durations, start), 0, 0.5);
  const spent: Float64Array[] = [];
  const phases = generators.length;
  for (let k = 0; k < phases; k++) {
    const row = ends[k - 1] ?? start;
    const part = within(occupanciesSteps(generators[k], row, [durations[k]]), 0.5 + k / phases / 2, 0.5 + (k + 1) / phases / 2);
    spent.push((yield* part)[0]);
  }
  return spent;
}
