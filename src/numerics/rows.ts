import type { DenseRates } from "./dense-transition";
import type { MatrixKernel } from "./matrix-kernel";
import { chooseMethod, denseKernel, type Method } from "./method-choice";
import { occupancyWeights, poissonWeights } from "./poisson";
import { binaryDigits, rowTimesMatrix, Squarings } from "./squarings";
import { JumpWalk, uniformizedSums, uniformizedValues, type SparseRates } from "./uniformization";

/** A chain that can be read both ways. */
export interface ChainRates extends SparseRates {
  dense(): Float64Array;
}

export interface RowOptions {
  readonly method?: Method;
  readonly kernel?: MatrixKernel;
}

type Steps<T> = globalThis.Generator<number, T, void>;

/** Distribution at each time from one start: row · P(t). */
export function* rowsAt(
  chain: ChainRates,
  start: Float64Array,
  times: ArrayLike<number>,
  options: RowOptions = {},
): Steps<Float64Array[]> {
  if (methodFor(chain, times, options) === "row") {
    const walk = new JumpWalk(chain, start);
    const weights = Array.from(times, (time) => poissonWeights(walk.largestExit * time));
    return yield* uniformizedSums(walk, chain.size, weights);
  }
  const squarings = yield* openSquarings(chain, times, options);
  const rows: Float64Array[] = [];
  for (let m = 0; m < times.length; m++) {
    rows.push(yield* rowBySquarings(chain, squarings, start, times[m]));
    yield (m + 1) / times.length;
  }
  return rows;
}

/** Σ_j value_j · p_j(t) for each functional and time: `result[functional][time]`. Values are ≥ 0. */
export function* valuesAt(
  chain: ChainRates,
  start: Float64Array,
  times: ArrayLike<number>,
  functionals: readonly Float64Array[],
  options: RowOptions = {},
): Steps<Float64Array[]> {
  if (methodFor(chain, times, options, functionals.length) === "row") {
    const walk = new JumpWalk(chain, start);
    const weights = Array.from(times, (time) => poissonWeights(walk.largestExit * time));
    return yield* uniformizedValues(walk, functionals, weights);
  }
  const rows = yield* rowsAt(chain, start, times, { ...options, method: "matrix" });
  return functionals.map((values) => Float64Array.from(rows, (row) => row.reduce((sum, p, j) => sum + p * values[j], 0)));
}

/**
 * Expected time in each state over [0, horizon] for each horizon: ∫₀ʰ row · P(s) ds.
 *
 * *Method*: jump by jump with the tails of the Poisson weights; through the matrix by row doubling, l(2h) = l(h) + l(h)P(h)
 * (it replaces the block exponential of twice the order). A horizon that is not h·2^k is made of its binary
 * digits, and all of them share one Horner pass: Σ_k v_k (I + P(h))(I + P(2h))⋯(I + P(h·2^(k−1))) · l₀.
 */
export function* occupanciesAt(
  chain: ChainRates,
  start: Float64Array,
  horizons: ArrayLike<number>,
  options: RowOptions = {},
): Steps<Float64Array[]> {
  if (methodFor(chain, horizons, options) === "row") {
    const walk = new JumpWalk(chain, start);
    if (walk.largestExit === 0) return Array.from(horizons, (horizon) => start.map((p) => p * horizon));
    const weights = Array.from(horizons, (horizon) => occupancyWeights(walk.largestExit * horizon, horizon));
    return yield* uniformizedSums(walk, chain.size, weights);
  }
  const squarings = yield* openSquarings(chain, horizons, options);
  const rows: Float64Array[] = [];
  for (let m = 0; m < horizons.length; m++) {
    rows.push(yield* occupancyBySquarings(chain, squarings, start, horizons[m]));
    yield (m + 1) / horizons.length;
  }
  return rows;
}

function* occupancyBySquarings(
  chain: ChainRates,
  squarings: Squarings,
  start: Float64Array,
  horizon: number,
): Steps<Float64Array> {
  const n = chain.size;
  const { powers, rest } = binaryDigits(horizon, squarings.step);
  let row = start;
  let total: Float64Array = new Float64Array(n);
  if (rest > 0) {
    total = yield* occupancyOfStep(chain, start, rest);
    row = yield* rowOfStep(chain, start, rest);
  }
  if (powers.length === 0) return total;
  row = row.slice();
  // Segments in the order of falling powers; `sum` holds Σ v_k Π (I + P) over the powers done.
  const sum = new Float64Array(n);
  const moved = new Float64Array(n);
  for (let power = powers[0], next = 0; power >= 0; power--) {
    const matrix = yield* squarings.matrix(power);
    rowTimesMatrix(sum, matrix, moved);
    for (let j = 0; j < n; j++) sum[j] += moved[j];
    if (powers[next] === power) {
      for (let j = 0; j < n; j++) sum[j] += row[j];
      yield* squarings.advance(row, power);
      next++;
    }
  }
  const count = sum.reduce((a, b) => a + b, 0);
  const first = yield* occupancyOfStep(chain, sum.map((v) => v / count), squarings.step);
  for (let j = 0; j < n; j++) total[j] += first[j] * count;
  return total;
}

export function* rowBySquarings(
  chain: ChainRates,
  squarings: Squarings,
  start: Float64Array,
  time: number,
): Steps<Float64Array> {
  const { powers, rest } = binaryDigits(time, squarings.step);
  const row = rest > 0 ? yield* rowOfStep(chain, start, rest) : start.slice();
  for (const power of powers) yield* squarings.advance(row, power);
  return row;
}

/** row · P(τ) for a τ below the step of the squarings, jump by jump. */
export function* rowOfStep(chain: ChainRates, row: Float64Array, time: number): Steps<Float64Array> {
  const walk = new JumpWalk(chain, row);
  const [moved] = yield* uniformizedSums(walk, chain.size, [poissonWeights(walk.largestExit * time)]);
  return moved;
}

function* occupancyOfStep(chain: ChainRates, row: Float64Array, time: number): Steps<Float64Array> {
  const walk = new JumpWalk(chain, row);
  if (walk.largestExit === 0) return row.map((p) => p * time);
  const [spent] = yield* uniformizedSums(walk, chain.size, [occupancyWeights(walk.largestExit * time, time)]);
  return spent;
}

export function denseOf(chain: ChainRates): DenseRates {
  return { size: chain.size, rates: chain.dense(), exits: chain.exitRate, largestExit: largestOf(chain.exitRate) };
}

function* openSquarings(chain: ChainRates, times: ArrayLike<number>, options: RowOptions): Steps<Squarings> {
  return yield* Squarings.open(denseOf(chain), options.kernel ?? denseKernel(), largestOf(times));
}

function methodFor(chain: ChainRates, times: ArrayLike<number>, options: RowOptions, values?: number): Method {
  const jumps = largestOf(chain.exitRate) * largestOf(times);
  if (jumps === 0) return "row";
  return options.method ?? chooseMethod(chain.size, chain.rate.length, jumps, values ? values / chain.size : times.length);
}

function largestOf(values: ArrayLike<number>): number {
  let largest = 0;
  for (let k = 0; k < values.length; k++) if (values[k] > largest) largest = values[k];
  return largest;
}
