import { denseTransition, unchangedTolerance, type DenseRates } from "./dense-transition";
import { agree, load, multiplySteps, unpadded, type MatrixBlock, type MatrixKernel } from "./matrix-kernel";
import { Squarings } from "./squarings";

type Steps<T> = globalThis.Generator<number, T, void>;

/** 2^POWERS steps exceed every time that a double can hold. */
const POWERS = 1040;

/**
 * The time after which every row of P(t) is within `tolerance` of its limit, in total variation distance.
 *
 * The distance d(t) = max_i ½ Σ_j |p_ij(t) − p_ij(∞)| never grows with t. P(h2^k) is squared until nothing changes (that is
 * the limit), the last time with d > tolerance is built from its binary digits, and the rest below one step is found by false
 * position (Illinois variant) on ln d. No eigenvalue is used: for chains that cannot be diagonalised it would mean nothing.
 */
export function* settlingTime(chain: DenseRates, tolerance: number, kernel: MatrixKernel): Steps<number> {
  const n = chain.size;
  if (chain.largestExit === 0) return 0;
  const squarings = yield* Squarings.open(chain, kernel, 1 / chain.largestExit);
  for (let power = 1; !squarings.isSettled && power < POWERS; power++) {
    yield* squarings.matrix(power);
    yield Math.min(0.5, power / 120);
  }
  const top = squarings.top;
  const limit = yield* squarings.matrix(top);
  const identity = new Float64Array(n * n);
  for (let k = 0; k < identity.length; k += n + 1) identity[k] = 1;
  if (distance(identity, limit, n) <= tolerance) return 0;

  const block = kernel.open(n, 3);
  try {
    let held: Float64Array = identity;
    let time = 0;
    for (let power = top; power >= 0; power--) {
      const step = yield* squarings.matrix(power);
      const moved = held === identity ? step : yield* product(block, held, step);
      if (distance(moved, limit, n) > tolerance) {
        held = moved;
        time += squarings.step * 2 ** power;
      }
      yield 0.5 + (0.3 * (top - power)) / (top + 1);
    }
    let low = 0;
    let atLow = Math.log(distance(held, limit, n) / tolerance);
    let high = squarings.step;
    const end = yield* product(block, held, yield* squarings.matrix(0));
    let atHigh = Math.log(distance(end, limit, n) / tolerance);
    let side = 0;
    for (let round = 0; round < 100 && high - low > 2 ** -50 * (time + high) && atLow !== 0; round++) {
      let middle = atHigh === -Infinity ? (low + high) / 2 : low + ((high - low) * atLow) / (atLow - atHigh);
      if (!(middle > low && middle < high)) middle = (low + high) / 2;
      const moved = yield* product(block, held, yield* denseTransition(chain, middle, kernel));
      const at = Math.log(distance(moved, limit, n) / tolerance);
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

function* product(block: MatrixBlock, left: Float64Array, right: Float64Array): Steps<Float64Array> {
  load(block, 0, left);
  load(block, 1, right);
  yield* multiplySteps(block, 2, 0, 1, 0);
  block.repair(2);
  return agree(block, 0, 2, unchangedTolerance(block.size)) ? left : unpadded(block, 2);
}

/** Largest total variation distance of a row from its limit. */
function distance(matrix: Float64Array, limit: Float64Array, n: number): number {
  let largest = 0;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let k = i * n; k < i * n + n; k++) sum += Math.abs(matrix[k] - limit[k]);
    largest = Math.max(largest, sum / 2);
  }
  return largest;
}
