import type { Elimination, LeakSystem, Pausable } from "./leak-system";
import { unpadded, type MatrixBlock } from "./matrix-kernel";
import { denseKernel } from "./method-choice";
import { scaledShares } from "./scaled-flow";

/** Multiply-adds between two pauses, some 10 ms. */
const SLICE = 8e6;
/** Rows, and states taken out of them, at a time. */
const BLOCK = 4;
/** Beyond these the plain balance is repeated with separate exponents. */
const SMALL = 1e-280;
const LARGE = 1e280;

/**
 * State reduction on a full matrix, with a leak.
 *
 * States are taken out in the order 0, 1, …: what is left is the chain watched only while it is in the later states.
 * Taking out k adds rate(i→k) · P(k's next later state is j) to rate(i→j) and rate(i→k) · P(k leaks) to i's leak. The
 * exit rate of k is then the *sum* of its remaining rates and leak, never a diagonal entry from which something was
 * subtracted; so every entry of every answer keeps its relative accuracy, whatever the spread of the rates.
 *
 * *Method*: Grassmann, Taksar & Heyman, Oper. Res. 33 (1985) 1107–1116 for the chain without leak; Alfa, Xue & Ye,
 * Math. Comp. 71 (2002) 217–236 with the leak as a column of its own. Ours takes four states
 * out of four rows at a time, eight operands for sixteen multiply-adds, in the dense kernel (`addRows`).
 * *Cost*: n³/3 multiply-adds, n² numbers.
 * *Accuracy*: `test/reference/battery-chain.test.ts`.
 */
export function* eliminateDense(system: LeakSystem, kernel = denseKernel()): Pausable<DenseElimination> {
  const n = system.size;
  const work = kernel.open(n, 1);
  try {
    return yield* reduceAll(system, work);
  } finally {
    work.close();
  }
}

function* reduceAll(system: LeakSystem, work: MatrixBlock): Pausable<DenseElimination> {
  const { size: n, stride } = work;
  const a = work.slots[0];
  a.fill(0);
  for (let i = 0; i < n; i++)
    for (let p = system.rowStart[i]; p < system.rowStart[i + 1]; p++) a[i * stride + system.toState[p]] = system.rate[p];
  const exit = new Float64Array(n);
  const leakShare = new Float64Array(n);
  const leaks = system.leak.slice();
  const total = (n * n * n) / 3 || 1;
  let done = 0;
  let since = 0;
  let sound = true;
  for (let i = 0; i < n; i++) {
    const block = i - (i % BLOCK);
    const whole = block + BLOCK <= n;
    if (i === block && whole) reduceBlock(work, i, leaks, leakShare);
    exit[i] = finishRow(work, i, whole ? block : 0, leaks, leakShare);
    if (!(exit[i] > 0 && exit[i] < Infinity) && (i < n - 1 || exit[i] !== 0)) sound = false;
    since += i * (n - i / 2);
    if (since > SLICE) {
      done += since;
      since = 0;
      yield Math.min(1, done / total);
    }
  }
  return new DenseElimination(system, unpadded(work, 0), exit, leakShare, sound);
}

const factors = new Float64Array(BLOCK * BLOCK);

/**
 * Takes the states before i out of rows i … i + 3, four states at a time. The sixteen rates into the four states come first,
 * each with what the states before it pass on; then one pass over the columns does sixteen multiply-adds for eight entries.
 */
function reduceBlock(work: MatrixBlock, i: number, leaks: Float64Array, leakShare: Float64Array): void {
  const { size: n, stride } = work;
  const a = work.slots[0];
  for (let k = 0; k < i; k += BLOCK) {
    const p0 = k * stride + k;
    const p1 = p0 + stride;
    const p2 = p1 + stride;
    const l0 = leakShare[k];
    const l1 = leakShare[k + 1];
    const l2 = leakShare[k + 2];
    const l3 = leakShare[k + 3];
    let any = 0;
    for (let r = 0, at = i * stride + k; r < BLOCK; r++, at += stride) {
      const c0 = a[at];
      const c1 = a[at + 1] + c0 * a[p0 + 1];
      const c2 = a[at + 2] + c0 * a[p0 + 2] + c1 * a[p1 + 2];
      const c3 = a[at + 3] + c0 * a[p0 + 3] + c1 * a[p1 + 3] + c2 * a[p2 + 3];
      a[at + 1] = factors[BLOCK * r + 1] = c1;
      a[at + 2] = factors[BLOCK * r + 2] = c2;
      a[at + 3] = factors[BLOCK * r + 3] = c3;
      factors[BLOCK * r] = c0;
      leaks[i + r] += c0 * l0 + c1 * l1 + (c2 * l2 + c3 * l3);
      any += c0 + c1 + c2 + c3;
    }
    if (any > 0 && k + BLOCK < n) work.addRows(0, i, k, k + BLOCK, factors);
  }
}

/** Takes the states `from … i − 1` out of row i and turns its later part into probabilities; returns its exit rate. */
function finishRow(work: MatrixBlock, i: number, from: number, leaks: Float64Array, leakShare: Float64Array): number {
  const { size: n, stride } = work;
  const a = work.slots[0];
  const row = i * stride;
  let leak = leaks[i];
  for (let k = from; k < i; k++) {
    const c = a[row + k];
    if (c === 0) continue;
    const pivot = k * stride;
    leak += c * leakShare[k];
    for (let j = k + 1; j < n; j++) a[row + j] += c * a[pivot + j];
  }
  let exit = leak;
  for (let j = i + 1; j < n; j++) exit += a[row + j];
  if (exit > 0) {
    leakShare[i] = leak / exit;
    for (let j = i + 1; j < n; j++) a[row + j] /= exit;
  }
  return exit;
}

/** Below the diagonal rates to states eliminated before, above it probabilities of the next later state. */
export class DenseElimination implements Elimination {
  readonly size: number;

  constructor(
    private readonly system: LeakSystem,
    private readonly a: Float64Array,
    private readonly exit: Float64Array,
    private readonly leakShare: Float64Array,
    readonly sound: boolean,
  ) {
    this.size = system.size;
  }

  solve(w: Float64Array): Float64Array {
    return this.substituteBack(this.reduce(w));
  }

  /** What each state collects per visit, visits to the states taken out before it included. */
  private reduce(w: Float64Array): Float64Array {
    const { size: n, a, exit } = this;
    const z = new Float64Array(n);
    for (let i = 0; i < n; i++) {
      let sum = w[i];
      for (let k = 0; k < i; k++) sum += a[i * n + k] * z[k];
      z[i] = sum / exit[i];
    }
    return z;
  }

  private substituteBack(z: Float64Array): Float64Array {
    const { size: n, a } = this;
    const x = z.slice();
    for (let i = n - 2; i >= 0; i--) {
      let sum = x[i];
      for (let j = i + 1; j < n; j++) sum += a[i * n + j] * x[j];
      x[i] = sum;
    }
    return x;
  }

  /**
   * For each arrow i→j of the system, in its order, x_j − x_i where M x = gain − loss; gain, loss ≥ 0. The set may be closed
   * (no leak) when π(gain − loss) = 0: x is then known up to a constant, which its differences do not see.
   *
   * Differences are carried through the back substitution, never taken of finished values: taking out k gives
   * x_k = z_k + Σ_l p_kl x_l with Σ_l p_kl + leak share = 1, hence x_k − x_j = z_k + Σ_l p_kl (x_l − x_j) − leak share · x_j.
   * States that hardly differ keep their small difference although both are large. z_k is what an excursion from k among the
   * states taken out before it collects, gain less loss: short excursions when rare states go first (`potential-differences.ts`).
   */
  differences(gain: Float64Array, loss?: Float64Array): Float64Array {
    const { size: n, a, exit, leakShare, system } = this;
    const z = this.reduce(gain);
    if (loss) this.reduce(loss).forEach((l, k) => (z[k] -= l));
    if (exit[n - 1] === 0) z[n - 1] = 0;
    const x = this.substituteBack(z);
    const ahead = new Float64Array(n * n); // [k][j] = x_k − x_j
    for (let k = n - 2; k >= 0; k--) {
      const row = k * n;
      for (let j = k + 1; j < n; j++) ahead[row + j] = z[k] - leakShare[k] * x[j];
      for (let l = k + 1; l < n; l++) {
        const share = a[row + l];
        if (share !== 0) for (let j = k + 1; j < n; j++) ahead[row + j] += share * ahead[l * n + j];
      }
      for (let j = k + 1; j < n; j++) ahead[j * n + k] = -ahead[row + j];
    }
    const result = new Float64Array(system.rate.length);
    for (let i = 0; i < n; i++)
      for (let p = system.rowStart[i]; p < system.rowStart[i + 1]; p++) result[p] = ahead[system.toState[p] * n + i];
    return result;
  }

  solveTransposed(w: Float64Array): Float64Array {
    const { size: n, a } = this;
    const x = w.slice();
    for (let k = 0; k < n; k++) {
      const flow = x[k];
      if (flow !== 0) for (let j = k + 1; j < n; j++) x[j] += flow * a[k * n + j];
    }
    this.pushBack(x, n - 1);
    return x;
  }

  shares(): Float64Array {
    const { size: n, a, exit } = this;
    const x = new Float64Array(n);
    x[n - 1] = 1;
    this.pushBack(x, n - 2);
    let sum = 0;
    let smallest = Infinity;
    for (let i = 0; i < n; i++) {
      sum += x[i];
      if (x[i] < smallest) smallest = x[i];
    }
    if (!(smallest > SMALL && sum < LARGE))
      return scaledShares({ size: n, exit, each: (i, use) => {
        for (let k = 0; k < i; k++) if (a[i * n + k] > 0) use(k, a[i * n + k]);
      } });
    for (let i = 0; i < n; i++) x[i] /= sum;
    return x;
  }

  /** Balance from the last state down; rows beyond `divideFrom` are taken as they stand. */
  private pushBack(x: Float64Array, divideFrom: number): void {
    const { size: n, a, exit } = this;
    for (let i = n - 1; i >= 0; i--) {
      if (i <= divideFrom) x[i] /= exit[i];
      const flow = x[i];
      if (flow !== 0) for (let k = 0; k < i; k++) x[k] += flow * a[i * n + k];
    }
  }
}
