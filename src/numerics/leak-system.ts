/**
 * A set of states that the chain may leave for good: the data of every elimination.
 *
 * Row i has the rates `rate[p]` to the states `toState[p]` inside the set, `p` from `rowStart[i]` to `rowStart[i + 1]`,
 * and `leak[i]`, the rate at which the set is left from i (towards targets, towards closed classes, by discounting).
 * The matrix that is solved with is M = diag(row sum + leak) − rates, an M-matrix whose row sums are the leaks. It is
 * never formed: its diagonal would have lost the leak by rounding.
 */
export interface LeakSystem {
  readonly size: number;
  readonly rowStart: Int32Array;
  readonly toState: Int32Array;
  readonly rate: Float64Array;
  readonly leak: Float64Array;
}

/** A finished elimination. All three answers consist of sums, products and quotients of non-negative numbers only. */
export interface Elimination {
  readonly size: number;
  /** False where an exit rate of a reduced chain left the double range, so that the answers mean nothing. */
  readonly sound: boolean;
  /** x with M x = w; w ≥ 0. */
  solve(w: Float64Array): Float64Array;
  /** x with xᵀ M = wᵀ; w ≥ 0. */
  solveTransposed(w: Float64Array): Float64Array;
  /** Of a set without leak that is one class: π ≥ 0 with πᵀ M = 0 and sum 1. */
  shares(): Float64Array;
}

/** Work that can be paused: yields the share done, 0 to 1. */
export type Pausable<T> = globalThis.Generator<number, T, void>;
