import type { JumpWeights } from "./poisson";

/** A chain in compressed rows: state i's arrows stand at `rowStart[i] .. rowStart[i + 1]`. */
export interface SparseRates {
  readonly size: number;
  readonly rowStart: Int32Array;
  readonly toState: Int32Array;
  readonly rate: Float64Array;
  readonly exitRate: Float64Array;
}

/** Arrows and states touched between two pauses: about 20 ms. */
const WORK_BETWEEN_PAUSES = 1e7;

/** The sums may stop when all that is to come is below this share of every entry. */
const NEGLIGIBLE = 2 ** -57;

/**
 * The distribution after 0, 1, 2, … jumps of the uniformized chain, from one start.
 *
 * States are renumbered by the number of jumps that reach them (breadth first), so that the states with a positive
 * probability after k jumps are a prefix: the active window. A large chain left from a local start costs only what it
 * has reached. States that cannot be reached do not appear and keep an exact 0.
 *
 * An entry is moved as v + (inflow − v·q/Λ) while q/Λ < ½, and as v·(1 − q/Λ) + inflow above: the first form has no fixed
 * rounding error in 1 − q/Λ that thousands of jumps would add up, the second cannot cancel.
 */
export class JumpWalk {
  /** Reached states by new number. */
  readonly order: Int32Array;
  /** Λ over the reached states. */
  readonly largestExit: number;
  /** Probabilities after the jumps made so far, by new number; positive only below `active`. */
  now: Float64Array;
  active: number;
  jumps = 0;
  private next: Float64Array;
  private readonly levelEnd: readonly number[];
  private readonly inStart: Int32Array;
  private readonly inFrom: Int32Array;
  private readonly inShare: Float64Array;
  private readonly exitShare: Float64Array;

  constructor(chain: SparseRates, start: Float64Array) {
    const { order, levelEnd, number } = breadthFirst(chain, start);
    const count = order.length;
    let largest = 0;
    for (const i of order) largest = Math.max(largest, chain.exitRate[i]);
    this.order = order;
    this.levelEnd = levelEnd;
    this.largestExit = largest;
    this.inStart = new Int32Array(count + 1);
    let arrows = 0;
    for (const i of order)
      for (let k = chain.rowStart[i]; k < chain.rowStart[i + 1]; k++) {
        this.inStart[number[chain.toState[k]] + 1]++;
        arrows++;
      }
    for (let j = 0; j < count; j++) this.inStart[j + 1] += this.inStart[j];
    this.inFrom = new Int32Array(arrows);
    this.inShare = new Float64Array(arrows);
    this.exitShare = new Float64Array(count);
    const fill = this.inStart.slice(0, count);
    for (let from = 0; from < count; from++) {
      const i = order[from];
      this.exitShare[from] = largest > 0 ? chain.exitRate[i] / largest : 0;
      for (let k = chain.rowStart[i]; k < chain.rowStart[i + 1]; k++) {
        const at = fill[number[chain.toState[k]]]++;
        this.inFrom[at] = from;
        this.inShare[at] = chain.rate[k] / largest;
      }
    }
    this.now = new Float64Array(count);
    this.next = new Float64Array(count);
    this.active = levelEnd[0];
    for (let j = 0; j < this.active; j++) this.now[j] = start[order[j]];
  }

  /** All states that can be reached have been. */
  get complete(): boolean {
    return this.active === this.order.length;
  }

  /** One more jump. */
  jump(): void {
    const { inStart, inFrom, inShare, exitShare, now, next } = this;
    this.jumps++;
    const level = Math.min(this.jumps, this.levelEnd.length - 1);
    const active = this.levelEnd[level];
    for (let j = 0; j < active; j++) {
      let inflow = 0;
      for (let k = inStart[j], end = inStart[j + 1]; k < end; k++) inflow += now[inFrom[k]] * inShare[k];
      const held = now[j];
      const exit = exitShare[j];
      next[j] = exit < 0.5 ? held + (inflow - held * exit) : held * (1 - exit) + inflow;
    }
    this.active = active;
    this.now = next;
    this.next = now;
    // The shares of a row sum to 1 to rounding only; what thousands of jumps add up is taken out again.
    if (this.jumps % 16 === 0) this.normalise();
  }

  /** Work of one jump, arrows and states. */
  get workPerJump(): number {
    return this.inStart[this.active] + this.active;
  }

  private normalise(): void {
    let sum = 0;
    for (let j = 0; j < this.active; j++) sum += this.now[j];
    const scale = 1 / sum;
    if (scale !== 1) for (let j = 0; j < this.active; j++) this.now[j] *= scale;
  }
}

/**
 * Σ_k weights(k) · (distribution after k jumps), one sum a set of weights: with Poisson weights the distribution at a time,
 * with their tails the occupancy.
 *
 * *Method*: uniformization (Jensen 1953; Grassmann, Comput. Oper. Res. 4 (1977) 47–53), every weight down to 1e-300, no
 * left cut. It may end earlier when all states are reached and the weights still to come are negligible against every
 * entry of every sum.
 */
export function* uniformizedSums(
  walk: JumpWalk,
  size: number,
  weightSets: readonly JumpWeights[],
): globalThis.Generator<number, Float64Array[], void> {
  const sums = weightSets.map(() => new Float64Array(walk.order.length));
  yield* walkThrough(walk, weightSets, (_, set, weight) => {
    const sum = sums[set];
    const { now, active } = walk;
    for (let j = 0; j < active; j++) sum[j] += weight * now[j];
  }, (set) => (walk.complete ? smallestPositive(sums[set]) : 0));
  return sums.map((sum) => {
    const full = new Float64Array(size);
    for (let j = 0; j < sum.length; j++) full[walk.order[j]] = sum[j];
    return full;
  });
}

/**
 * The same for numbers instead of distributions: Σ_k weights(k) · (functional of the distribution after k jumps),
 * `result[functional][set]`. Each functional is a value ≥ 0 for each state. Costs no memory for the states at each time.
 */
export function* uniformizedValues(
  walk: JumpWalk,
  functionals: readonly Float64Array[],
  weightSets: readonly JumpWeights[],
): globalThis.Generator<number, Float64Array[], void> {
  const byNumber = functionals.map((values) => Float64Array.from(walk.order, (i) => values[i]));
  const largest = byNumber.map((values) => values.reduce((a, b) => Math.max(a, b), 0));
  const result = functionals.map(() => new Float64Array(weightSets.length));
  const values = new Float64Array(functionals.length);
  let valuesAt = -1;
  yield* walkThrough(walk, weightSets, (k, set, weight) => {
    if (valuesAt !== k) {
      valuesAt = k;
      for (let f = 0; f < values.length; f++) values[f] = dot(byNumber[f], walk.now, walk.active);
    }
    for (let f = 0; f < values.length; f++) result[f][set] += weight * values[f];
  }, (set) => {
    let smallest = Infinity;
    for (let f = 0; f < values.length; f++) if (largest[f] > 0) smallest = Math.min(smallest, result[f][set] / largest[f]);
    return smallest;
  });
  return result;
}

function* walkThrough(
  walk: JumpWalk,
  weightSets: readonly JumpWeights[],
  add: (k: number, set: number, weight: number) => void,
  smallest: (set: number) => number,
): globalThis.Generator<number, void, void> {
  const remaining = weightSets.map(({ weights }) => tailSums(weights));
  const open = weightSets.map(() => true);
  const last = weightSets.reduce((k, { first, weights }) => Math.max(k, first + weights.length - 1), 0);
  let work = 0;
  for (let k = 0; ; k++) {
    let anyOpen = false;
    for (let set = 0; set < weightSets.length; set++) {
      if (!open[set]) continue;
      const { first, weights } = weightSets[set];
      const at = k - first;
      if (at >= weights.length) open[set] = false;
      else {
        anyOpen = true;
        if (at >= 0) {
          add(k, set, weights[at]);
          work += walk.active;
          if (k % 8 === 7 && remaining[set][at] < NEGLIGIBLE * remaining[set][0] && remaining[set][at] <= NEGLIGIBLE * smallest(set))
            open[set] = false;
        }
      }
    }
    if (!anyOpen || k >= last) return;
    work += walk.workPerJump;
    walk.jump();
    if (work > WORK_BETWEEN_PAUSES) {
      work = 0;
      yield Math.min(1, k / last);
    }
  }
}

/** Sum of the weights after each place. */
function tailSums(weights: Float64Array): Float64Array {
  const tails = new Float64Array(weights.length);
  for (let k = weights.length - 2; k >= 0; k--) tails[k] = tails[k + 1] + weights[k + 1];
  return tails;
}

function smallestPositive(values: Float64Array): number {
  let smallest = Infinity;
  for (const value of values) if (value > 0 && value < smallest) smallest = value;
  return smallest;
}

function dot(a: Float64Array, b: Float64Array, count: number): number {
  let sum = 0;
  for (let k = 0; k < count; k++) sum += a[k] * b[k];
  return sum;
}

function breadthFirst(chain: SparseRates, start: Float64Array): { order: Int32Array; levelEnd: number[]; number: Int32Array } {
  const number = new Int32Array(chain.size).fill(-1);
  const order = new Int32Array(chain.size);
  let count = 0;
  for (let i = 0; i < chain.size; i++)
    if (start[i] > 0) {
      number[i] = count;
      order[count++] = i;
    }
  const levelEnd = [count];
  for (let at = 0; at < count; ) {
    for (const end = count; at < end; at++) {
      const i = order[at];
      for (let k = chain.rowStart[i]; k < chain.rowStart[i + 1]; k++) {
        const j = chain.toState[k];
        if (number[j] < 0) {
          number[j] = count;
          order[count++] = j;
        }
      }
    }
    if (count > levelEnd[levelEnd.length - 1]) levelEnd.push(count);
  }
  return { order: order.slice(0, count), levelEnd, number };
}
