import { denseTransition, rateSpread, unchangedTolerance, type DenseRates } from "./dense-transition";
import { agree, load, multiplySteps, repairRow, unpadded, type MatrixKernel } from "./matrix-kernel";
import { planTaylor } from "./taylor-plan";

/**
 * P(h), P(2h), P(4h), …, kept, so that a row can be taken to any time by its binary digits. Grows on demand; once a
 * squaring changes nothing, the last matrix stands for all longer times.
 *
 * P(h) itself is exact for every entry (it has squarings of its own behind it): a row moved by a few steps of a merely
 * truncated series would miss the entries that many jumps in one step lead to.
 */
export class Squarings {
  readonly size: number;
  readonly step: number;
  private readonly matrices: Float64Array[];
  private settled = false;
  private readonly kernel: MatrixKernel;
  private readonly scratch: Float64Array;

  private constructor(size: number, kernel: MatrixKernel, step: number, first: Float64Array) {
    this.size = size;
    this.kernel = kernel;
    this.step = step;
    this.matrices = [first];
    this.scratch = new Float64Array(size);
  }

  /**
   * Starts the list for times up to `horizon`, with h = horizon/2^k for the largest k that costs no squaring more than going
   * there at once: each further one would add its rounding error. Below one step a row is moved jump by jump.
   */
  static *open(chain: DenseRates, kernel: MatrixKernel, horizon: number): globalThis.Generator<number, Squarings, void> {
    const spread = rateSpread(chain);
    const squaringsTo = (time: number): number => planTaylor(chain.size, chain.largestExit * time, spread).squarings;
    const total = squaringsTo(horizon);
    let halvings = 0;
    while (halvings < total && squaringsTo(horizon / 2 ** (halvings + 1)) + halvings + 1 <= total) halvings++;
    const step = horizon / 2 ** halvings;
    return new Squarings(chain.size, kernel, step, yield* denseTransition(chain, step, kernel));
  }

  /** Highest power kept that differs from the one before it; a settled list needs no higher one. */
  get top(): number {
    return this.matrices.length - 1;
  }

  get isSettled(): boolean {
    return this.settled;
  }

  /** P(h·2^power), computing what is missing. */
  *matrix(power: number): globalThis.Generator<number, Float64Array, void> {
    if (power > this.top && !this.settled) {
      const block = this.kernel.open(this.size, 2);
      try {
        load(block, 0, this.matrices[this.top]);
        for (let now = 0; this.top < power && !this.settled; now = 1 - now) {
          yield* multiplySteps(block, 1 - now, now, now, 0);
          block.repair(1 - now);
          this.settled = agree(block, now, 1 - now, unchangedTolerance(this.size));
          if (!this.settled) this.matrices.push(unpadded(block, 1 - now));
        }
      } finally {
        block.close();
      }
    }
    return this.matrices[Math.min(power, this.top)];
  }

  /** row ← row · P(h·2^power) for a row of probabilities that sum to 1. */
  *advance(row: Float64Array, power: number): globalThis.Generator<number, void, void> {
    const matrix = yield* this.matrix(power);
    rowTimesMatrix(row, matrix, this.scratch);
    row.set(this.scratch);
    repairRow(row, 0, this.size);
  }
}

/** out = row · matrix. */
export function rowTimesMatrix(row: Float64Array, matrix: Float64Array, out: Float64Array): void {
  const n = row.length;
  out.fill(0);
  for (let i = 0; i < n; i++) {
    const weight = row[i];
    if (weight === 0) continue;
    for (let j = 0, at = i * n; j < n; j++, at++) out[j] += weight * matrix[at];
  }
}

/**
 * A time in units of the step: the powers of two that make up its whole part, highest first, and the rest below one step.
 */
export function binaryDigits(time: number, step: number): { powers: number[]; rest: number } {
  const units = time / step;
  let whole = Math.floor(units);
  const rest = (units - whole) * step;
  const powers: number[] = [];
  while (whole >= 1) {
    const power = Math.floor(Math.log2(whole));
    const unit = 2 ** power;
    // log2 of a number just below a power of two may round up to it.
    const exact = unit > whole ? power - 1 : power;
    powers.push(exact);
    whole -= 2 ** exact;
  }
  return { powers, rest };
}
