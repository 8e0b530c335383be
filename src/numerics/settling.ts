import { denseTransition, type DenseRates } from "./dense-transition";
import { load, multiplySteps, unpadded, type MatrixBlock, type MatrixKernel } from "./matrix-kernel";
import { Squarings } from "./squarings";

type Steps<T> = globalThis.Generator<number, T, void>;

/** 2^POWERS steps exceed every time that a double can hold. */
const POWERS = 1040;

/** A product that lost more than this share of its distance has lost that much of its digits, too. */
const LARGE_DROP = 0.01;

/** P(t) less its limit, at t = h·2^k: how far its largest row is, and about which share of that is rounding. */
interface Deviation {
  readonly distance: number;
  readonly error: number;
  /** null where it is P(t) less the limit, formed again when needed. */
  readonly squared: Float64Array | null;
}

/**
 * The time after which every row of P(t) is within `tolerance` of its limit, in total variation distance.
 *
 * The distance d(t) = max_i ½ Σ_j |p_ij(t) − p_ij(∞)| never grows with t. P(h2^k) is squared until nothing changes (that is
 * the limit Π), the last time with d > tolerance is built from its binary digits, and the rest below one step is found by false
 * position (Illinois variant) on ln d. No eigenvalue is used: for chains that cannot be diagonalised it would mean nothing.
 *
 * The deviation D(t) = P(t) − Π is what is carried, since D(s)P(t) = D(s)D(t) = D(s + t): as a difference it is good to about
 * 1e-16 whatever its size, as a square to twice the relative error of its root. For each power the better of both is taken,
 * so that distances of 1e-300 are as sound as large ones, and plateaus before the last decay are not squared away.
 */
export function* settlingTime(chain: DenseRates, tolerance: number, kernel: MatrixKernel): Steps<number> {
  const n = chain.size;
  if (chain.largestExit === 0) return 0;
  const squarings = yield* Squarings.open(chain, kernel, 1 / chain.largestExit);
  for (let power = 1; !squarings.isSettled && power < POWERS; power++) {
    yield* squarings.matrix(power);
    yield Math.min(0.5, power / 120);
  }
  const limit = yield* squarings.matrix(squarings.top);
  const beginning = less(identity(n), limit);
  if (distance(beginning, n) <= tolerance) return 0;

  const block = kernel.open(n, 3);
  try {
    const byPower: Deviation[] = [];
    const matrixAt = function* (power: number): Steps<Float64Array> {
      return byPower[power].squared ?? less(yield* squarings.matrix(power), limit);
    };
    do {
      const power = byPower.length;
      const difference = power > squarings.top ? 0 : distance(less(yield* squarings.matrix(power), limit), n);
      const error = difference > 0 ? Number.EPSILON / difference : Infinity;
      const root = byPower[power - 1];
      if (root && 2 * root.error < error) {
        const matrix = yield* matrixAt(power - 1);
        const squared = yield* product(block, matrix, matrix);
        byPower.push({ distance: distance(squared, n), error: 2 * root.error, squared });
      } else byPower.push({ distance: difference, error, squared: null });
      yield 0.5;
    } while (byPower[byPower.length - 1].distance > tolerance && byPower.length < POWERS);

    let held = beginning;
    let time = 0;
    for (let power = byPower.length - 1; power >= 0; power--) {
      let moved = time === 0 ? yield* matrixAt(power) : yield* product(block, held, yield* squarings.matrix(power));
      if (time > 0 && (power > squarings.top || distance(moved, n) < LARGE_DROP * distance(held, n)))
        moved = yield* product(block, held, yield* matrixAt(power));
      if (distance(moved, n) > tolerance) {
        held = moved;
        time += squarings.step * 2 ** power;
      }
      yield 0.8 - (0.3 * power) / byPower.length;
    }
    let low = 0;
    let atLow = Math.log(distance(held, n) / tolerance);
    let high = squarings.step;
    const end = yield* product(block, held, yield* squarings.matrix(0));
    let atHigh = Math.log(distance(end, n) / tolerance);
    let side = 0;
    for (let round = 0; round < 100 && high - low > 2 ** -50 * (time + high) && atLow !== 0; round++) {
      let middle = atHigh === -Infinity ? (low + high) / 2 : low + ((high - low) * atLow) / (atLow - atHigh);
      if (!(middle > low && middle < high)) middle = (low + high) / 2;
      const moved = yield* product(block, held, yield* denseTransition(chain, middle, kernel));
      const at = Math.log(distance(moved, n) / tolerance);
      if (at > 0) {
        low = middle;
        atLow = at;
        if (side === 1) atHigh /= 2;
        side = 1;
      } else {
        high = middle;
        if (at > -1e-15) break;
        atHigh = at;
        if (side === -1) atLow /= 2;
        side = -1;
      }
      yield 0.8 + 0.2 * Math.min(1, round / 20);
    }
    return time + high;
  } finally {
    block.close();
  }
}

function identity(n: number): Float64Array {
  const matrix = new Float64Array(n * n);
  for (let k = 0; k < matrix.length; k += n + 1) matrix[k] = 1;
  return matrix;
}

function less(matrix: Float64Array, limit: Float64Array): Float64Array {
  return matrix.map((value, k) => value - limit[k]);
}

function* product(block: MatrixBlock, left: Float64Array, right: Float64Array): Steps<Float64Array> {
  load(block, 0, left);
  load(block, 1, right);
  yield* multiplySteps(block, 2, 0, 1, 0.5);
  return unpadded(block, 2);
}

/** Largest total variation distance of a row from its limit. */
function distance(deviation: Float64Array, n: number): number {
  let largest = 0;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let k = i * n; k < i * n + n; k++) sum += Math.abs(deviation[k]);
    largest = Math.max(largest, sum / 2);
  }
  return largest;
}
