import { certainty } from "./absorption";
import { statesReached, type StateSet } from "./classes";
import type { Generator } from "./generator";
import { discountedOccupancySteps, occupanciesSteps } from "./occupancy";
import { Problem } from "./problem";
import { stationarySharesSteps } from "./stationary";
import { finish, type Steps } from "./steps";
import { eliminated, membersOf, subchain } from "./subchain";

/** n × n costs of each use of an arrow, row-major, the diagonal ignored; null where there are none. */
export type JumpCosts = Float64Array | null;

/** Costs per time unit in each state with the arrows' costs brought in as rate × cost. */
export function effectiveCosts(generator: Generator, stateCosts: Float64Array, jumpCosts: JumpCosts): Float64Array {
  if (!jumpCosts) return stateCosts;
  return stateCosts.map((cost, i) => {
    let sum = cost;
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++)
      sum += generator.rate[p] * jumpCosts[i * generator.size + generator.toState[p]];
    return sum;
  });
}

/**
 * What does it cost over the next so many time units?
 *
 * E ∫₀^horizon e^(−r s) c(X_s) ds + Σ over jumps of e^(−r · time of jump) · cost of the arrow.
 *
 * @param generator - the chain, n states
 * @param start - distribution at time 0
 * @param horizon - ≥ 0, finite
 * @param stateCosts - n costs per time unit; may be negative
 * @param jumpCosts - n × n costs of each use of an arrow, or null
 * @param discount - continuous rate r ≥ 0 per time unit
 * @returns the expected cost
 *
 * *Method*: expected (discounted) time in each state × (cost per time unit + Σ rate × arrow cost).
 * *Cost, accuracy*: those of `occupancies`; with costs of both signs the error is relative to the sum of their absolute values.
 *
 * @example costOver(Generator.fromArrows(1, []), Float64Array.of(1), 10, Float64Array.of(3), null, 0) // 30
 */
export function costOver(
  generator: Generator, start: Float64Array, horizon: number, stateCosts: Float64Array, jumpCosts: JumpCosts, discount: number,
): number {
  return finish(costOverSteps(generator, start, horizon, stateCosts, jumpCosts, discount));
}

export function* costOverSteps(
  generator: Generator, start: Float64Array, horizon: number, stateCosts: Float64Array, jumpCosts: JumpCosts, discount: number,
): Steps<number> {
  const time = discount > 0
    ? yield* discountedOccupancySteps(generator, start, horizon, discount)
    : (yield* occupanciesSteps(generator, start, [horizon]))[0];
  return sumProduct(time, effectiveCosts(generator, stateCosts, jumpCosts));
}

/**
 * What does it cost until one of these states is met, or without end at a discount?
 *
 * Parameters as `costOver`; `targets` - the states that end the watch (an empty set: without end). The jump that meets the
 * target is paid.
 *
 * @returns the expected cost; 0 from a target
 * @throws `targetNotCertain` (no answer) without discount unless a target is met with certainty; as `meanAbsorption`
 *
 * *Method*: one transposed elimination over the states that can be reached, the discount as a leak of its own.
 * *Cost*: one elimination. *Accuracy*: `test/reference/battery-chain.test.ts` (discounted time without end, 1e-14).
 *
 * @example costUntil(Generator.fromArrows(2, [[0, 1, 0.25]]), Float64Array.of(1, 0), Float64Array.of(3, 0), Uint8Array.of(0, 1), null, 0)
 * // 12
 */
export function costUntil(
  generator: Generator, start: Float64Array, stateCosts: Float64Array, targets: StateSet, jumpCosts: JumpCosts, discount: number,
): number {
  return finish(costUntilSteps(generator, start, stateCosts, targets, jumpCosts, discount));
}

export function* costUntilSteps(
  generator: Generator, start: Float64Array, stateCosts: Float64Array, targets: StateSet, jumpCosts: JumpCosts, discount: number,
): Steps<number> {
  const time = yield* discountedTimeBefore(generator, start, targets, discount);
  return sumProduct(time, effectiveCosts(generator, stateCosts, jumpCosts));
}

/** E ∫₀^T e^(−r s) 1[X_s = j] ds for each j, T the first time at a target. */
export function* discountedTimeBefore(
  generator: Generator, start: Float64Array, targets: StateSet, discount: number,
): Steps<Float64Array> {
  const reached = statesReached(generator, Uint8Array.from(start, (p) => (p > 0 ? 1 : 0)), targets);
  const inside = reached.map((r, i) => (r && !targets[i] ? 1 : 0));
  const time = new Float64Array(generator.size);
  if (!(discount > 0)) {
    const { certain } = certainty(generator, targets);
    if (inside.some((r, i) => r && !certain[i])) throw new Problem("targetNotCertain", {}, "noAnswer");
  }
  const part = subchain(generator, membersOf(inside), discount);
  if (part.members.length === 0) return time;
  const stay = (yield* eliminated(part)).solveTransposed(Float64Array.from(part.members, (state) => start[state]));
  part.members.forEach((state, at) => (time[state] = stay[at]));
  return time;
}

/**
 * What does it cost per time unit in the long run?
 *
 * Σ_i π_i (c_i + Σ_j q_ij k_ij). Parameters as `costOver`; result and problems as `stationaryShares`.
 *
 * @example costRate(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), Float64Array.of(0, 100), null) // 25
 */
export function costRate(
  generator: Generator, stateCosts: Float64Array, jumpCosts: JumpCosts, start?: Float64Array,
): number {
  return finish(costRateSteps(generator, stateCosts, jumpCosts, start));
}

export function* costRateSteps(
  generator: Generator, stateCosts: Float64Array, jumpCosts: JumpCosts, start?: Float64Array,
): Steps<number> {
  const shares = yield* stationarySharesSteps(generator, start);
  return sumProduct(shares, effectiveCosts(generator, stateCosts, jumpCosts));
}

/** Σ time × cost, where states that are never entered cost nothing. */
function sumProduct(time: Float64Array, costs: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < time.length; i++) if (time[i] !== 0) sum += time[i] * costs[i];
  return sum;
}
