import { eliminationOrder } from "./elimination-order";
import type { Elimination, LeakSystem, Pausable } from "./leak-system";
import { scaledShares } from "./scaled-flow";

/** Multiply-adds between two pauses, some 10 ms. */
const SLICE = 2e6;
/** Entries planned between two pauses, some 10 ms. */
const ENTRIES_A_SLICE = 5e4;
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
  const order = yield* eliminationOrder(n, rowStart, toState, limit);
  if (!order) return null;
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
  let pause = ENTRIES_A_SLICE;
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
    if (entries > pause) {
      pause = entries + ENTRIES_A_SLICE;
      yield k / n;
    }
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
 * Gustavson's sparse elimination, 1972 [from memory]); four states at a time where they have the same later neighbours. *Cost*: `plan.work` multiply-adds. *Accuracy*: `test/conformance/elimination.test.ts`
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
  const alike = runsOfAlike(n, upStart, up);
  let sound = true;
  let done = 0;
  let since = 0;

  for (let i = 0; i < n; i++) {
    const state = order[i];
    for (let p = system.rowStart[state]; p < system.rowStart[state + 1]; p++) row[place[system.toState[p]]] = system.rate[p];
    let leak = system.leak[state];
    const end = downStart[i + 1];
    for (let q = downStart[i]; q < end; ) {
      const k = down[q];
      const width = upStart[k + 1] - upStart[k];
      if (q + 3 < end && alike[k] >= 3) {
        addFour(row, k, upStart, up, upShare);
        for (let m = 0; m < 4; m++) {
          downRate[q + m] = row[k + m];
          leak += row[k + m] * leakShare[k + m];
          row[k + m] = 0;
        }
        q += 4;
        since += 2 * width + 20;
        continue;
      }
      const rate = row[k];
      row[k] = 0;
      downRate[q++] = rate;
      since += width + 8;
      if (rate === 0) continue;
      leak += rate * leakShare[k];
      for (let p = upStart[k]; p < upStart[k + 1]; p++) row[up[p]] += rate * upShare[p];
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

/**
 * Passes on the rates into k … k + 3, whose later neighbours are the same but for themselves: each first gets what those before
 * it pass on, then one walk over the common neighbours serves all four.
 */
function addFour(row: Float64Array, k: number, upStart: Int32Array, up: Int32Array, share: Float64Array): void {
  const p0 = upStart[k];
  const p1 = upStart[k + 1];
  const p2 = upStart[k + 2];
  const begin = upStart[k + 3];
  const end = upStart[k + 4];
  const c0 = row[k];
  const c1 = row[k + 1] + c0 * share[p0];
  const c2 = row[k + 2] + c0 * share[p0 + 1] + c1 * share[p1];
  const c3 = row[k + 3] + c0 * share[p0 + 2] + c1 * share[p1 + 1] + c2 * share[p2];
  row[k + 1] = c1;
  row[k + 2] = c2;
  row[k + 3] = c3;
  const [to0, to1, to2] = [p0 + 3 - begin, p1 + 2 - begin, p2 + 1 - begin];
  for (let p = begin; p < end; p++)
    row[up[p]] += c0 * share[to0 + p] + c1 * share[to1 + p] + (c2 * share[to2 + p] + c3 * share[p]);
}

/** How many states straight after each have the same later neighbours, but for themselves. */
function runsOfAlike(n: number, upStart: Int32Array, up: Int32Array): Int32Array {
  const alike = new Int32Array(n);
  for (let k = n - 2; k >= 0; k--) {
    const width = upStart[k + 1] - upStart[k];
    if (width > 0 && up[upStart[k]] === k + 1 && width === upStart[k + 2] - upStart[k + 1] + 1) alike[k] = alike[k + 1] + 1;
  }
  return alike;
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
