import { agree, rowsBetweenPauses, unpadded, UNPAUSED, type MatrixBlock, type MatrixKernel } from "./matrix-kernel";
import { planTaylor } from "./taylor-plan";
import { TAYLOR_SLOTS, taylorStart } from "./taylor-scheme";

/** A chain for the dense methods: rates off the diagonal (row-major, zero diagonal) and their row sums. */
export interface DenseRates {
  readonly size: number;
  readonly rates: Float64Array;
  readonly exits: Float64Array;
  /** Λ, the largest exit rate. */
  readonly largestExit: number;
}

const ROUNDOFF = 2 ** -53;

/** A squaring that moves no entry by more than this has reached the limit to rounding (the bound of one product). */
export function unchangedTolerance(size: number): number {
  return (2 + Math.sqrt(size)) * 2 * ROUNDOFF;
}

/**
 * All transition probabilities over `time`: P(t) = exp(Qt), every entry to high relative accuracy.
 *
 * *Method*: scaling and squaring of the Taylor series of N = (Q + ΛI)h, which has no negative term (Xue & Ye, Numer. Math.
 * 110 (2008) 393–403; Shao, Gao & Xue, UMINF 12.04), with row repair (ours, `repairRow`) after the start and after
 * every squaring, the order and the number of squarings by both limits of `planTaylor`, and an early end once a
 * squaring changes nothing.
 * *Cost*: 1 to 5 products for the start, log2(Λt) squarings at most, each n³ multiply-adds.
 */
export function* denseTransition(
  chain: DenseRates,
  time: number,
  kernel: MatrixKernel,
): globalThis.Generator<number, Float64Array, void> {
  const n = chain.size;
  const jumps = chain.largestExit * time;
  if (jumps === 0) return identity(n);
  const plan = planTaylor(n, jumps, rateSpread(chain));
  const block = kernel.open(n, TAYLOR_SLOTS);
  try {
    fillUniformized(block, chain, time / 2 ** plan.squarings);
    let now = yield* taylorStart(block, plan.order, jumps / 2 ** plan.squarings);
    block.repair(now);
    const tolerance = unchangedTolerance(n);
    const rows = rowsBetweenPauses(n);
    for (let s = 1; s <= plan.squarings; s++) {
      const next = now === 0 ? 1 : 0;
      for (let row = 0; row < n; row += rows) {
        block.multiply(next, now, now, row, Math.min(n, row + rows));
        if (n > UNPAUSED) yield s / (plan.squarings + 1);
      }
      block.repair(next);
      const settled = agree(block, now, next, tolerance);
      now = next;
      if (settled) break;
    }
    return unpadded(block, now);
  } finally {
    block.close();
  }
}

/** Slot 0 = (Q + ΛI)h. */
export function fillUniformized(block: MatrixBlock, chain: DenseRates, step: number): void {
  const { size: n, rates, exits, largestExit } = chain;
  const { stride } = block;
  const slot = block.slots[0];
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) slot[i * stride + j] = rates[i * n + j] * step;
    slot[i * stride + i] = (largestExit - exits[i]) * step;
  }
}

/** Λ ÷ smallest rate where every pair of states has an arrow, else Infinity. */
export function rateSpread(chain: DenseRates): number {
  const n = chain.size;
  let smallest = Infinity;
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++)
      if (i !== j && chain.rates[i * n + j] < smallest) {
        smallest = chain.rates[i * n + j];
        if (smallest === 0) return Infinity;
      }
  return chain.largestExit / smallest;
}

function identity(n: number): Float64Array {
  const values = new Float64Array(n * n);
  for (let k = 0; k < values.length; k += n + 1) values[k] = 1;
  return values;
}
