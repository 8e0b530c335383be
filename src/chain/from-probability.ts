import { projectOntoGeneratorRow } from "../numerics/nearest-generator";
import { principalLogarithm } from "../numerics/principal-logarithm";
import { Generator, SMALLEST_RATE } from "./generator";
import { Problem } from "./problem";
import { finish, within, type Steps } from "./steps";
import { transitionMatrixSteps } from "./transition";

export interface FromProbability {
  readonly generator: Generator;
  /** True when exp(Q · period) is the given table to rounding; false when Q is the nearest generator only. */
  readonly exact: boolean;
}

/** A negative entry of the logarithm above this share of its largest one counts as rounding. */
const ROUNDING_SHARE = 1e-10;

/**
 * Which rates stand behind a table of one-period transition probabilities?
 *
 * Q = log(P) / period when that is a generator, else the generator nearest to it, row by row in least squares.
 *
 * @param size - number of states n
 * @param p - n × n, row-major; rows from, columns to; entries in [0, 1], rows sum to 1
 * @param period - the table's period, finite, above 0, in the time unit that the rates shall have
 * @throws `periodNotPositive` {period}; `noRealLogarithm` {} (no answer) when no real principal logarithm exists
 *
 * *Method*: inverse scaling and squaring, `numerics/principal-logarithm.ts`; quasi-optimisation, Kreinin & Sidelnikova 2001,
 * `numerics/nearest-generator.ts`. An entry is exactly 0 where the to-state cannot be reached. Israel, Rosenthal & Wei,
 * Math. Finance 11 (2001) 245–265, discuss when a generator exists at all.
 * *Cost*: some 10 inverses of order n a square root. *Accuracy*: exp(Q · period) agrees with p to 1e-12 where exact,
 * `test/unit/chain/from-probability.test.ts`.
 *
 * @example generatorFromProbability(2, Float64Array.of(0.8, 0.2, 0, 1), 1).generator.rateOf(0, 1) // -Math.log(0.8)
 */
export function generatorFromProbability(size: number, p: Float64Array, period: number): FromProbability {
  return finish(generatorFromProbabilitySteps(size, p, period));
}

export function* generatorFromProbabilitySteps(size: number, p: Float64Array, period: number): Steps<FromProbability> {
  if (!(period > 0 && period < Infinity)) throw new Problem("periodNotPositive", { period });
  const logarithm = yield* principalLogarithm(size, p);
  if (!logarithm) throw new Problem("noRealLogarithm", {}, "noAnswer");
  const reachable = reachability(size, p);
  let largest = 0;
  for (const value of logarithm) largest = Math.max(largest, Math.abs(value));
  let exact = true;
  for (let i = 0; i < size; i++)
    for (let j = 0; j < size; j++) {
      const at = i * size + j;
      if (i === j) continue;
      if (!reachable[at]) logarithm[at] = 0;
      else if (logarithm[at] < 0) {
        if (logarithm[at] < -ROUNDING_SHARE * largest) exact = false;
        else logarithm[at] = 0;
      }
    }
  if (exact) yield* fitSmallRates(size, p, logarithm, largest);
  else for (let i = 0; i < size; i++) projectOntoGeneratorRow(logarithm.subarray(i * size, (i + 1) * size), i);
  refuseTooSmall(size, logarithm, period);
  return { generator: generatorOf(size, logarithm, period), exact };
}

/**
 * Rates too small for the logarithm to see (it is right to a rounding of its largest entry) are taken from their own entries:
 * all below this share are dropped, and those come back without which an entry of the table would be missed.
 */
const UNSEEN_SHARE = 1e-13;
/** An entry is missed when it comes out too small by more than this share of itself. */
const MISSED_SHARE = 1e-11;
const FITTING_ROUNDS = 40;

function* fitSmallRates(n: number, p: Float64Array, logarithm: Float64Array, largest: number): Steps<void> {
  const unseen: number[] = [];
  for (let k = 0; k < n * n; k++)
    if (k % (n + 1) !== 0 && logarithm[k] <= UNSEEN_SHARE * largest) {
      logarithm[k] = 0;
      if (p[k] > 0) unseen.push(k);
    }
  if (unseen.length === 0) return;
  // An entry answers to its own small rate in proportion: at first by the rate times ∫ e^(−q_i s) e^(−q_j (1 − s)) ds, the
  // logarithmic mean of the stays, then by what the last change was seen to do.
  const answer = Float64Array.from(unseen, (k) => logarithmicMean(p[Math.floor(k / n) * (n + 1)], p[(k % n) * (n + 1)]));
  const lastStep = new Float64Array(unseen.length);
  let before: Float64Array | null = null;
  for (let round = 0; round < FITTING_ROUNDS; round++) {
    const back: Float64Array = yield* transitionMatrixSteps(generatorOf(n, logarithm, 1), 1);
    let missed = false;
    unseen.forEach((k, u) => {
      if (before && lastStep[u] !== 0 && (back[k] - before[k]) / lastStep[u] > 0) answer[u] = (back[k] - before[k]) / lastStep[u];
      const gap = p[k] - back[k];
      lastStep[u] = 0;
      if (!(Math.abs(gap) > MISSED_SHARE * p[k]) || (gap < 0 && logarithm[k] === 0)) return;
      missed = true;
      const next = Math.max(0, logarithm[k] + gap / answer[u]);
      lastStep[u] = next - logarithm[k];
      logarithm[k] = next;
    });
    if (!missed) return;
    before = back;
  }
}

function logarithmicMean(a: number, b: number): number {
  return Math.abs(a - b) < 1e-6 * a ? a : (a - b) / Math.log(a / b);
}

/** A period so long that a rate would vanish is refused, as rates of that size are in a table. */
function refuseTooSmall(n: number, rates: Float64Array, period: number): void {
  for (let k = 0; k < n * n; k++)
    if (rates[k] >= SMALLEST_RATE && rates[k] / period < SMALLEST_RATE)
      throw new Problem("rateOutOfRange", { row: Math.floor(k / n), column: k % n, rate: rates[k] / period });
}

function generatorOf(n: number, rates: Float64Array, period: number): Generator {
  return Generator.fromDense(n, rates.map((rate) => (rate / period < SMALLEST_RATE ? 0 : rate / period)));
}

/**
 * How far is that table from the nearest one that rates can explain?
 *
 * max_ij |p_ij − exp(Q · period)_ij| with the Q of `generatorFromProbability`; 0 to rounding when a valid generator exists.
 *
 * Parameters, problems, method and cost as there.
 *
 * @example embeddingGap(2, Float64Array.of(0.8, 0.2, 0, 1), 1) < 1e-15 // true
 */
export function embeddingGap(size: number, p: Float64Array, period: number): number {
  return finish(embeddingGapSteps(size, p, period));
}

export function* embeddingGapSteps(size: number, p: Float64Array, period: number): Steps<number> {
  const { generator } = yield* within(generatorFromProbabilitySteps(size, p, period), 0, 0.8);
  const back = yield* within(transitionMatrixSteps(generator, period), 0.8, 1);
  return p.reduce((gap, value, k) => Math.max(gap, Math.abs(value - back[k])), 0);
}

/** For each pair, 1 where the to-state can be reached from the from-state through positive entries. */
function reachability(n: number, p: Float64Array): Uint8Array {
  const reachable = new Uint8Array(n * n);
  for (let i = 0; i < n; i++) {
    const open = [i];
    for (let k = open.pop(); k !== undefined; k = open.pop())
      for (let j = 0; j < n; j++)
        if (p[k * n + j] > 0 && !reachable[i * n + j]) {
          reachable[i * n + j] = 1;
          open.push(j);
        }
  }
  return reachable;
}
