import { occupanciesAt } from "../numerics/rows";
import { Generator, type Arrow } from "./generator";
import { checkTimes } from "./horizon";
import { Problem } from "./problem";
import { finish, type Steps } from "./steps";

/**
 * How much of the period up to each horizon is spent in each state, on average?
 *
 * l_j(h) = ∫₀ʰ p_j(s) ds, p(s) = start · exp(Qs)
 *
 * @param generator - the chain, n states
 * @param start - n probabilities that sum to 1
 * @param horizons - finite, 0 or more, in the rates' time unit, in any order
 * @returns for each horizon, in the order given, n times in state order; they sum to the horizon
 * @throws `timeNegative`, `timeNotFinite`, `horizonTooLong`
 *
 * *Method*: uniformization with the tails of the Poisson weights, or row doubling l(2h) = l(h) + l(h)P(h) along stored
 * squarings, whichever is cheaper; `numerics/rows.ts`. *Cost*: as `distributions`. *Accuracy*: relative error of an
 * entry at most 1e-13, `test/reference/battery-time.test.ts`.
 *
 * @example occupancies(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), [1e9]) // [[0.5, 999999999.5]]
 */
export function occupancies(generator: Generator, start: Float64Array, horizons: ArrayLike<number>): Float64Array[] {
  return finish(occupanciesSteps(generator, start, horizons));
}

export function* occupanciesSteps(
  generator: Generator,
  start: Float64Array,
  horizons: ArrayLike<number>,
): Steps<Float64Array[]> {
  checkTimes(generator, horizons);
  return yield* occupanciesAt(generator, start, horizons);
}

/**
 * The same when time counts less the later it is: what is a unit a time in each state worth today?
 *
 * ∫₀ʰ e^(−rs) p_j(s) ds
 *
 * @param horizon - finite, 0 or more
 * @param discount - continuous rate r per time unit, 0 or more
 * @returns n discounted times in state order
 * @throws as `occupancies`, and `discountNegative` {discount}
 *
 * *Method*: a further state that every other enters at rate r: being alive then weighs e^(−rs), and the integral is a plain
 * occupancy of non-negative terms. Cost and accuracy as `occupancies`.
 *
 * @example discountedOccupancy(Generator.fromArrows(1, []), Float64Array.of(1), 1e6, 0.1) // [10]
 */
export function discountedOccupancy(
  generator: Generator,
  start: Float64Array,
  horizon: number,
  discount: number,
): Float64Array {
  return finish(discountedOccupancySteps(generator, start, horizon, discount));
}

export function* discountedOccupancySteps(
  generator: Generator,
  start: Float64Array,
  horizon: number,
  discount: number,
): Steps<Float64Array> {
  if (!(discount >= 0 && discount < Infinity)) throw new Problem("discountNegative", { discount });
  if (discount === 0) return (yield* occupanciesSteps(generator, start, [horizon]))[0];
  const n = generator.size;
  const arrows: Arrow[] = [...generator.arrows()];
  for (let i = 0; i < n; i++) arrows.push([i, n, discount]);
  const begin = new Float64Array(n + 1);
  begin.set(start);
  const [spent] = yield* occupanciesSteps(Generator.fromArrows(n + 1, arrows), begin, [horizon]);
  return spent.slice(0, n);
}
