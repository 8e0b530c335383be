import { eliminationOrder } from "./elimination-order";
import type { Elimination, LeakSystem, Pausable } from "./leak-system";
import { scaledShares } from "./scaled-flow";

/** Multiply-adds between two pauses, some 10 ms. */
const SLICE = 2e6;
/** States planned between two pauses, some 5 ms. */
const STATES_A_SLICE = 2000;
const SMALL = 1e-280;
const LARGE = 1e280;

/** Which entries the elimination fills, before any number is computed. */
export interface EliminationPlan {
  readonly order: Int32Array;
  /** Later neighbours of each state at its elimination, in places of the order, ascending. */
  readonly upStart: Int32Array;
  readonly up: Int32Array;
  /** Multiply-adds that the elimination will take. */
  readonly work: number;
}

/**
 * The fill of an elimination in the order of `eliminationOrder`: the later neighbours of a state are its own and those of
 * the states whose first later neighbour it is (Gilbert, Ng & Peyton, SIAM J. Matrix Anal. Appl. 15 (1994) 1075–1091, § 2).
 * `null` as soon as the work passes `limit`.
 */
export function* planElimination(system: LeakSystem, limit: number): Pausable<EliminationPlan | null> {
  const { size: n, rowStart, toState } = system;
  const order = yield* eliminationOrder(n, rowStart, toState);
  const place = new Int32Array(n);
  for (let k = 0; k < n; k++) place[order[k]] = k;
  const later: number[][] = Array.from({ length: n }, () => []);
  for (let i = 0; i < n; i++)
    for (let p = rowStart[i]; p < rowStart[i + 1]; p++) {
      const a = place[i];
      const b = place[toState[p]];
      if (a < b) later[a].push(b);
      else later[b].push(a);
    }
  const patterns: Int32Array[] = new Array<Int32Array>(n);
  const children: number[][] = Array.from({ length: n }, () => []);
  const seen = new Int32Array(n).fill(-1);
  let work = 0;
  let entries = 0;
  for (let k = 0; k < n; k++) {
    const found: number[] = [];
    seen[k] = k;
    const enter = (j: number): void => {
      if (seen[j] !== k) {
        seen[j] = k;
        found.push(j);
      }
    };
    later[k].forEach(enter);
    for (const child of children[k]) patterns[child].forEach(enter);
    const pattern = Int32Array.from(found).sort();
    patterns[k] = pattern;
    if (pattern.length > 0) children[pattern[0]].push(k);
    work += pattern.length * pattern.length;
    entries += pattern.length;
    if (work > limit) return null;
    if (k % STATES_A_SLICE === 0) yield k / n;
  }
  const upStart = new Int32Array(n + 1);
  const up = new Int32Array(entries);
  for (let k = 0; k < n; k++) {
    up.set(patterns[k], upStart[k]);
    upStart[k + 1] = upStart[k] + patterns[k].length;
  }
  return { order, upStart, up, work };
}

/**
 * State reduction with a leak on a sparse table; the same sums as `eliminateDense`, over the planned entries only.
 *
 * *Method*: as `eliminateDense`, states taken out in the planned order, row by row into a full work row (the row form of
 * Gustavson's sparse elimination, 1972). *Cost*: `plan.work` multiply-adds. *Accuracy*: `test/conformance/elimination.test.ts`
 * holds both against each other.
 */
export function* eliminateSparse(system: LeakSystem, plan: EliminationPlan): Pausable<Elimination> {
  const n = system.size;
  const { order, upStart, up } = plan;
  const place = new Int32Array(n);
  for (let k = 0; k < n; k++) place[order[k]] = k;
  const { downStart, down } = transposePattern(n, upStart, up);
  const upShare = new Float64Array(up.length);
  const downRate = new Float64Array(down.length);
  const exit = new Float64Array(n);
  const leakShare = new Float64Array(n);
  const row = new Float64Array(n);
  let sound = true;
  let done = 0;
  let since = 0;

  for (let i = 0; i < n; i++) {
    const state = order[i];
    for (let p = system.rowStart[state]; p < system.rowStart[state + 1]; p++) row[place[system.toState[p]]] = system.rate[p];
    let leak = system.leak[state];
    for (let q = downStart[i]; q < downStart[i + 1]; q++) {
      const k = down[q];
      const rate = row[k];
      row[k] = 0;
      downRate[q] = rate;
      if (rate === 0) continue;
      leak += rate * leakShare[k];
      addScaled(row, rate, up, upShare, upStart[k], upStart[k + 1]);
      since += upStart[k + 1] - upStart[k] + 8;
    }
    row[i] = 0;
    let sum = leak;
    for (let p = upStart[i]; p < upStart[i + 1]; p++) sum += row[up[p]];
    exit[i] = sum;
    if (!(sum > 0 && sum < Infinity) && (i < n - 1 || sum !== 0)) sound = false;
    leakShare[i] = sum > 0 ? leak / sum : 0;
    for (let p = upStart[i]; p < upStart[i + 1]; p++) {
      upShare[p] = sum > 0 ? row[up[p]] / sum : 0;
      row[up[p]] = 0;
    }
    if (since > SLICE) {
      done += since;
      since = 0;
      yield Math.min(1, done / plan.work);
    }
  }
  return new SparseElimination(n, order, upStart, up, upShare, downStart, down, downRate, exit, sound);
}

function addScaled(row: Float64Array, rate: number, up: Int32Array, share: Float64Array, begin: number, end: number): void {
  for (let p = begin; p < end; p++) row[up[p]] += rate * share[p];
}

function transposePattern(n: number, upStart: Int32Array, up: Int32Array): { downStart: Int32Array; down: Int32Array } {
  const downStart = new Int32Array(n + 1);
  for (const j of up) downStart[j + 1]++;
  for (let i = 0; i < n; i++) downStart[i + 1] += downStart[i];
  const next = downStart.slice(0, n);
  const down = new Int32Array(up.length);
  for (let k = 0; k < n; k++) for (let p = upStart[k]; p < upStart[k + 1]; p++) down[next[up[p]]++] = k;
  return { downStart, down };
}

class SparseElimination implements Elimination {
  constructor(
    readonly size: number,
    private readonly order: Int32Array,
    private readonly upStart: Int32Array,
    private readonly up: Int32Array,
    private readonly upShare: Float64Array,
    private readonly downStart: Int32Array,
    private readonly down: Int32Array,
    private readonly downRate: Float64Array,
    private readonly exit: Float64Array,
    readonly sound: boolean,
  ) {}

  solve(w: Float64Array): Float64Array {
    const { size: n, order, upStart, up, upShare, downStart, down, downRate, exit } = this;
    const x = new Float64Array(n);
    for (let i = 0; i < n; i++) {
      let sum = w[order[i]];
      for (let q = downStart[i]; q < downStart[i + 1]; q++) sum += downRate[q] * x[down[q]];
      x[i] = sum / exit[i];
    }
    for (let i = n - 2; i >= 0; i--) {
      let sum = x[i];
      for (let p = upStart[i]; p < upStart[i + 1]; p++) sum += upShare[p] * x[up[p]];
      x[i] = sum;
    }
    return this.byState(x);
  }

  solveTransposed(w: Float64Array): Float64Array {
    const { size: n, order, upStart, up, upShare } = this;
    const x = new Float64Array(n);
    for (let i = 0; i < n; i++) x[i] = w[order[i]];
    for (let k = 0; k < n; k++) {
      const flow = x[k];
      if (flow !== 0) for (let p = upStart[k]; p < upStart[k + 1]; p++) x[up[p]] += flow * upShare[p];
    }
    this.pushBack(x, n - 1);
    return this.byState(x);
  }

  shares(): Float64Array {
    const { size: n, downStart, down, downRate, exit } = this;
    const x = new Float64Array(n);
    x[n - 1] = 1;
    this.pushBack(x, n - 2);
    let sum = 0;
    let smallest = Infinity;
    for (let i = 0; i < n; i++) {
      sum += x[i];
      if (x[i] < smallest) smallest = x[i];
    }
    if (!(smallest > SMALL && sum < LARGE)) {
      return this.byState(scaledShares({ size: n, exit, each: (i, use) => {
        for (let q = downStart[i]; q < downStart[i + 1]; q++) if (downRate[q] > 0) use(down[q], downRate[q]);
      } }));
    }
    for (let i = 0; i < n; i++) x[i] /= sum;
    return this.byState(x);
  }

  private pushBack(x: Float64Array, divideFrom: number): void {
    const { size: n, downStart, down, downRate, exit } = this;
    for (let i = n - 1; i >= 0; i--) {
      if (i <= divideFrom) x[i] /= exit[i];
      const flow = x[i];
      if (flow !== 0) for (let q = downStart[i]; q < downStart[i + 1]; q++) x[down[q]] += flow * downRate[q];
    }
  }

  private byState(x: Float64Array): Float64Array {
    const result = new Float64Array(this.size);
    for (let i = 0; i < this.size; i++) result[this.order[i]] = x[i];
    return result;
  }
}
