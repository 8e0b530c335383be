import { Problem } from "./problem";

/** One arrow of the chain: from-state, to-state (both from 0), rate per time unit. */
export type Arrow = readonly [from: number, to: number, rate: number];

/** Largest and smallest rate that is taken; beyond these, products leave the double range. */
export const LARGEST_RATE = 1e150;
export const SMALLEST_RATE = 1e-150;

/**
 * The validated, immutable generator of a continuous-time Markov chain.
 *
 * Off-diagonal rates are the data, stored by from-state in compressed rows with ascending columns;
 * a typed diagonal is never kept or computed with. `exitRate[i]` is the sum of the row, compensated
 * (Neumaier 1974) so that it is correct to the last bit or next to it.
 */
export class Generator {
  readonly size: number;
  /** `rowStart[i] .. rowStart[i + 1]` are the positions of state i's arrows. Length size + 1. */
  readonly rowStart: Int32Array;
  readonly toState: Int32Array;
  readonly rate: Float64Array;
  readonly exitRate: Float64Array;
  private denseRates: Float64Array | null = null;

  private constructor(size: number, rowStart: Int32Array, toState: Int32Array, rate: Float64Array) {
    this.size = size;
    this.rowStart = rowStart;
    this.toState = toState;
    this.rate = rate;
    this.exitRate = new Float64Array(size);
    for (let i = 0; i < size; i++) this.exitRate[i] = compensatedSum(rate, rowStart[i], rowStart[i + 1]);
  }

  /** From arrows in any order. Zero rates are dropped; a repeated arrow, a loop or a bad rate is a `Problem`. */
  static fromArrows(size: number, arrows: Iterable<Arrow>): Generator {
    const kept: Arrow[] = [];
    const count = new Int32Array(size + 1);
    for (const arrow of arrows) {
      const [from, to, rate] = arrow;
      if (rate === 0) continue;
      if (!(from >= 0 && from < size && to >= 0 && to < size)) throw new Problem("arrowOutside", { from, to, size });
      if (from === to) throw new Problem("arrowToItself", { from });
      checkRate(from, to, rate);
      kept.push(arrow);
      count[from + 1]++;
    }
    for (let i = 0; i < size; i++) count[i + 1] += count[i];
    const rowStart = count.slice();
    const order = count.slice(0, size);
    const toState = new Int32Array(kept.length);
    const rates = new Float64Array(kept.length);
    kept.sort((a, b) => a[1] - b[1]);
    for (const [from, to, rate] of kept) {
      const at = order[from]++;
      if (at > rowStart[from] && toState[at - 1] === to) throw new Problem("arrowRepeated", { from, to });
      toState[at] = to;
      rates[at] = rate;
    }
    return new Generator(size, rowStart, toState, rates);
  }

  /** From a row-major size × size array; the diagonal is ignored. */
  static fromDense(size: number, values: ArrayLike<number>): Generator {
    const rowStart = new Int32Array(size + 1);
    const toState: number[] = [];
    const rates: number[] = [];
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) {
        const rate = values[i * size + j];
        if (i === j || rate === 0) continue;
        checkRate(i, j, rate);
        toState.push(j);
        rates.push(rate);
      }
      rowStart[i + 1] = rates.length;
    }
    return new Generator(size, rowStart, Int32Array.from(toState), Float64Array.from(rates));
  }

  /** From compressed rows with ascending columns and rates that were checked before: a part of another chain. Nothing is copied. */
  static fromRows(size: number, rowStart: Int32Array, toState: Int32Array, rate: Float64Array): Generator {
    return new Generator(size, rowStart, toState, rate);
  }

  get arrowCount(): number {
    return this.rate.length;
  }

  *arrows(): IterableIterator<Arrow> {
    for (let i = 0; i < this.size; i++)
      for (let k = this.rowStart[i]; k < this.rowStart[i + 1]; k++) yield [i, this.toState[k], this.rate[k]];
  }

  /** Off-diagonal rates, row-major, zero diagonal. Shared: callers must not write to it. */
  dense(): Float64Array {
    if (!this.denseRates) {
      const n = this.size;
      const dense = new Float64Array(n * n);
      for (const [i, j, rate] of this.arrows()) dense[i * n + j] = rate;
      this.denseRates = dense;
    }
    return this.denseRates;
  }

  rateOf(from: number, to: number): number {
    for (let k = this.rowStart[from]; k < this.rowStart[from + 1]; k++) if (this.toState[k] === to) return this.rate[k];
    return 0;
  }

  /** Largest exit rate, the Λ of uniformization; 0 for a chain without arrows. */
  largestExit(): number {
    let largest = 0;
    for (const exit of this.exitRate) if (exit > largest) largest = exit;
    return largest;
  }
}

function checkRate(from: number, to: number, rate: number): void {
  if (!Number.isFinite(rate)) throw new Problem("rateNotFinite", { from, to, rate });
  if (rate < 0) throw new Problem("rateNegative", { from, to, rate });
  if (rate > LARGEST_RATE || rate < SMALLEST_RATE) throw new Problem("rateOutOfRange", { from, to, rate });
}

/** Sum of `values[begin .. end]`, correct to the last bit or next to it (Neumaier 1974). */
export function compensatedSum(values: ArrayLike<number>, begin: number, end: number): number {
  let sum = 0;
  let lost = 0;
  for (let k = begin; k < end; k++) {
    const next = sum + values[k];
    lost += sum >= values[k] ? sum - next + values[k] : values[k] - next + sum;
    sum = next;
  }
  return sum + lost;
}
