import { planFor, startingMatrix, unchangedTolerance, type DenseRates } from "./dense-transition";
import { agree, multiplySteps, repairRow, unpadded, type MatrixBlock, type MatrixKernel } from "./matrix-kernel";
import { TAYLOR_SLOTS } from "./taylor-start";

/**
 * P(h), P(2h), P(4h), …, kept, so that a row can be taken to any time by its binary digits. Grows on demand; once a
 * squaring changes nothing, the last matrix stands for all longer times.
 */
export class Squarings {
  readonly size: number;
  readonly step: number;
  private readonly matrices: Float64Array[] = [];
  private settled = false;
  private readonly chain: DenseRates;
  private readonly kernel: MatrixKernel;
  private readonly scratch: Float64Array;

  /** `step` is h; the expansion at h has the degree that planning for `horizon` = h·2^squarings chose. */
  private constructor(chain: DenseRates, kernel: MatrixKernel, step: number) {
    this.chain = chain;
    this.kernel = kernel;
    this.size = chain.size;
    this.step = step;
    this.scratch = new Float64Array(chain.size);
  }

  /** Starts the list for times up to `horizon`: h = horizon/2^s with the cheapest exact s. */
  static *open(chain: DenseRates, kernel: MatrixKernel, horizon: number): globalThis.Generator<number, Squarings, void> {
    const plan = planFor(chain, horizon);
    const squarings = new Squarings(chain, kernel, horizon / 2 ** plan.squarings);
    const block = kernel.open(chain.size, TAYLOR_SLOTS + 1);
    try {
      const slot = yield* startingMatrix(block, chain, squarings.step, plan.degree);
      squarings.matrices.push(unpadded(block, slot));
    } finally {
      block.close();
    }
    return squarings;
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

  get largestExit(): number {
    return this.chain.largestExit;
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

function load(block: MatrixBlock, slot: number, values: Float64Array): void {
  const { size: n, stride } = block;
  for (let i = 0; i < n; i++) block.slots[slot].set(values.subarray(i * n, i * n + n), i * stride);
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
