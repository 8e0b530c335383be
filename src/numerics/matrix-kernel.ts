/**
 * The matrix arithmetic that every dense method stands on, behind one small interface with two implementations:
 * plain JavaScript (`js-kernel.ts`) and WebAssembly SIMD (`wasm-kernel.ts`).
 *
 * All matrices of one computation have the same order and live in one block; they are named by slot number. Entries are
 * non-negative probabilities or scaled rates throughout, except where derivatives are carried.
 */
export interface MatrixKernel {
  readonly name: "js" | "wasm";
  /** Opens a block of `count` zeroed size × size matrices. Every block is closed by the one who opened it. */
  open(size: number, count: number): MatrixBlock;
}

export interface MatrixBlock {
  readonly size: number;
  /** Distance between two rows of a slot, at least `size`; what lies beyond a row's `size` entries is zero and stays so. */
  readonly stride: number;
  readonly slots: readonly Float64Array[];
  /** Rows `firstRow .. endRow` of target = left · right. `target` is neither of the two. */
  multiply(target: number, left: number, right: number, firstRow: number, endRow: number): void;
  /** target = constant · I + Σ coefficients[k] · slot sources[k]. `target` may be one of the sources. */
  combine(target: number, constant: number, coefficients: readonly number[], sources: readonly number[]): void;
  /**
   * Rows row … row + 3 of the target += factors (4 × 4, row by row) · its rows pivot … pivot + 3, in the columns from `from`, an
   * even number below the order, on.
   */
  addRows(target: number, row: number, pivot: number, from: number, factors: Float64Array): void;
  /** Row repair, see `repairRow`. */
  repair(target: number): void;
  close(): void;
}

/**
 * Smallest magnitude kept. A product below it has lost bits to gradual underflow already, and arithmetic on subnormal
 * numbers is slow on most processors, so it is set to zero.
 */
export const SMALLEST_NORMAL = 2.2250738585072014e-308;

/** Multiply-adds between two pauses: about 20 ms of the slower kernel on a machine of 2020. */
export const WORK_BETWEEN_PAUSES = 4e7;

/** Products of this order and below are over so soon that whole computations of them need no pause. */
export const UNPAUSED = 64;

/** Rows of a product of order n between two pauses. */
export function rowsBetweenPauses(n: number): number {
  return n <= UNPAUSED ? n : Math.max(4, Math.floor(WORK_BETWEEN_PAUSES / (n * n) / 4) * 4);
}

/** target = left · right, with a pause after every piece of work and after the whole, except in small ones. */
export function* multiplySteps(
  block: MatrixBlock,
  target: number,
  left: number,
  right: number,
  progress: number,
): globalThis.Generator<number, void, void> {
  const n = block.size;
  const rows = rowsBetweenPauses(n);
  for (let first = 0; first < n; first += rows) {
    block.multiply(target, left, right, first, Math.min(n, first + rows));
    if (n > UNPAUSED) yield progress;
  }
}

/**
 * Makes a row of n transition probabilities at `begin` sum to 1, without subtracting anything from a small entry.
 *
 * If the row's largest entry is at least ½ it becomes 1 − (sum of the others); otherwise the row is divided by its sum.
 * The largest entry is the only one that knows nothing of its own: its relative error is what the others leave it, at most a
 * rounding error of 1. So an entry of 1e-30 keeps the relative accuracy with which it was summed, and the row sum is right
 * to rounding after every squaring, which stops the doubling of its error by each further one.
 */
export function repairRow(values: Float64Array, begin: number, n: number): void {
  let largest = 0;
  let at = begin;
  let sum = 0;
  for (let k = begin; k < begin + n; k++) {
    const value = values[k];
    if (value < SMALLEST_NORMAL) {
      values[k] = 0;
      continue;
    }
    if (value > largest) {
      largest = value;
      at = k;
    }
    sum += value;
  }
  if (largest >= 0.5) {
    values[at] = 0;
    let others = 0;
    for (let k = begin; k < begin + n; k++) others += values[k];
    values[at] = 1 - others;
  } else if (sum > 0) {
    for (let k = begin; k < begin + n; k++) values[k] /= sum;
  }
}

/** Whether two slots agree entry by entry to the relative tolerance. Stops at the first entry that does not. */
export function agree(block: MatrixBlock, one: number, other: number, tolerance: number): boolean {
  const { size: n, stride } = block;
  const a = block.slots[one];
  const b = block.slots[other];
  for (let i = 0; i < n; i++)
    for (let k = i * stride; k < i * stride + n; k++) if (!(Math.abs(a[k] - b[k]) <= tolerance * b[k])) return false;
  return true;
}

/** The rows of a slot without their padding. */
export function unpadded(block: MatrixBlock, slot: number): Float64Array {
  const { size: n, stride } = block;
  const from = block.slots[slot];
  const values = new Float64Array(n * n);
  for (let i = 0, to = 0; i < n; i++) for (let k = i * stride; k < i * stride + n; k++) values[to++] = from[k];
  return values;
}

/** Fills a slot from unpadded rows. */
export function load(block: MatrixBlock, slot: number, values: Float64Array): void {
  const { size: n, stride } = block;
  const to = block.slots[slot];
  for (let i = 0, from = 0; i < n; i++) for (let k = i * stride; k < i * stride + n; k++) to[k] = values[from++];
}
