import { fillUniformized, rateSpread, unchangedTolerance, type DenseRates } from "./dense-transition";
import { agree, load, multiplySteps, unpadded, type MatrixBlock, type MatrixKernel } from "./matrix-kernel";
import { planTaylor } from "./taylor-plan";
import { TAYLOR_SLOTS, taylorCoefficients, taylorStart } from "./taylor-scheme";

/** The schemes for P have most of the terms beyond their order; the derivative's plain series takes so many more. */
const FURTHER_TERMS = 8;

type Steps<T> = globalThis.Generator<number, T, void>;

/**
 * The derivatives of P(t) with respect to single rates, the diagonal moving along: dP/dq_ij.
 *
 * *Method*: dual numbers through the very steps that compute P(t) (Al-Mohy & Higham, SIMAX 30 (2009) 1639–1657, for scaling
 * and squaring): D(2h) = P D + D P, and after each squaring the derivative of the row repair (ours), taken on the entry that
 * carried the slack in P. The squarings of P are kept and shared; each arrow costs two products a squaring. The first
 * D is exact for the truncated series: Σ_k c_k Σ_(a+b=k−1) Nᵃ (dN) Nᵇ with dN = h e_i (e_j − e_i)ᵀ of rank one.
 * All arrows at once by an adjoint would be cheaper but cancels at long times (1e-7 to 1e-4 measured).
 */
export class TransitionDerivative {
  private constructor(
    private readonly size: number,
    private readonly step: number,
    /** P at h, 2h, …, time; the last two may be short of time when nothing changed any more. */
    private readonly powers: readonly Float64Array[],
    private readonly uniformized: Float64Array,
    private readonly coefficients: Float64Array,
    private readonly block: MatrixBlock,
  ) {}

  /** Call `close` when done. */
  static *open(chain: DenseRates, time: number, kernel: MatrixKernel): Steps<TransitionDerivative> {
    const n = chain.size;
    const jumps = chain.largestExit * time;
    const { order, squarings } = planTaylor(n, jumps, rateSpread(chain));
    const step = time / 2 ** squarings;
    const block = kernel.open(n, TAYLOR_SLOTS);
    fillUniformized(block, chain, step);
    const uniformized = unpadded(block, 0);
    let now = yield* taylorStart(block, order, jumps / 2 ** squarings);
    block.repair(now);
    const powers = [unpadded(block, now)];
    // Once P no longer changes, two more doublings take D to its limit too: P D P = 0 for P² = P.
    for (let s = 1, further = Infinity; s <= squarings && further > 0; s++, further--) {
      const next = now === 0 ? 1 : 0;
      yield* multiplySteps(block, next, now, now, 0);
      block.repair(next);
      powers.push(unpadded(block, next));
      if (further === Infinity && agree(block, now, next, unchangedTolerance(n))) further = 3;
      now = next;
    }
    const coefficients = taylorCoefficients(order + FURTHER_TERMS, jumps / 2 ** squarings);
    return new TransitionDerivative(n, step, powers, uniformized, coefficients, block);
  }

  /** P(time), row-major. */
  get transition(): Float64Array {
    return this.powers[this.powers.length - 1];
  }

  /** dP(time)/dq_ij, row-major, for an arrow from `from` to `to`. */
  *along(from: number, to: number): Steps<Float64Array> {
    const { block, powers } = this;
    load(block, 0, this.firstDerivative(from, to));
    dualRepair(block, 0, powers[0]);
    let now = 0;
    for (let s = 1; s < powers.length; s++) {
      const next = 1 - now;
      load(block, 2, powers[s - 1]);
      yield* multiplySteps(block, 3, 2, now, 0);
      yield* multiplySteps(block, 4, now, 2, 0);
      block.combine(next, 0, [1, 1], [3, 4]);
      dualRepair(block, next, powers[s]);
      now = next;
    }
    return unpadded(block, now);
  }

  close(): void {
    this.block.close();
  }

  private firstDerivative(from: number, to: number): Float64Array {
    const { size: n, uniformized: matrix, coefficients: c, step } = this;
    const m = c.length - 1;
    const columns: Float64Array[] = [unit(n, from)];
    const rowsTo: Float64Array[] = [unit(n, to)];
    const rowsFrom: Float64Array[] = [unit(n, from)];
    for (let k = 1; k < m; k++) {
      columns.push(matrixTimes(matrix, columns[k - 1]));
      rowsTo.push(timesMatrix(rowsTo[k - 1], matrix));
      rowsFrom.push(timesMatrix(rowsFrom[k - 1], matrix));
    }
    const derivative = new Float64Array(n * n);
    for (let a = 0; a < m; a++) {
      const gain = new Float64Array(n);
      const loss = new Float64Array(n);
      for (let b = m - 1 - a; b >= 0; b--)
        for (let j = 0; j < n; j++) {
          gain[j] += c[a + b + 1] * rowsTo[b][j];
          loss[j] += c[a + b + 1] * rowsFrom[b][j];
        }
      for (let i = 0; i < n; i++) {
        const scale = step * columns[a][i];
        if (scale === 0) continue;
        for (let j = 0; j < n; j++) derivative[i * n + j] += scale * (gain[j] - loss[j]);
      }
    }
    return derivative;
  }
}

/** The derivative of the row repair at P: the entry that carried the slack takes it here too; else that of P / ΣP. */
function dualRepair(block: MatrixBlock, slot: number, transition: Float64Array): void {
  const { size: n, stride } = block;
  const d = block.slots[slot];
  for (let i = 0; i < n; i++) {
    const row = i * stride;
    let at = 0;
    for (let j = 1; j < n; j++) if (transition[i * n + j] > transition[i * n + at]) at = j;
    if (transition[i * n + at] >= 0.5) {
      let others = 0;
      for (let j = 0; j < n; j++) if (j !== at) others += d[row + j];
      d[row + at] = -others;
    } else {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += d[row + j];
      for (let j = 0; j < n; j++) d[row + j] -= transition[i * n + j] * sum;
    }
  }
}

function unit(n: number, at: number): Float64Array {
  const vector = new Float64Array(n);
  vector[at] = 1;
  return vector;
}

function matrixTimes(matrix: Float64Array, column: Float64Array): Float64Array {
  const n = column.length;
  return column.map((_, i) => {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += matrix[i * n + j] * column[j];
    return sum;
  });
}

function timesMatrix(row: Float64Array, matrix: Float64Array): Float64Array {
  const n = row.length;
  const out = new Float64Array(n);
  for (let i = 0; i < n; i++) if (row[i] !== 0) for (let j = 0; j < n; j++) out[j] += row[i] * matrix[i * n + j];
  return out;
}
