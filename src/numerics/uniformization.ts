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
 * States are renumbered in the order in which jumps reach them, and only when they are reached: the states with a positive
 * probability are always a prefix, the active window. A large chain left from a local start costs only what it has
 * reached. States that are never reached do not appear and keep an exact 0.
 *
 * An entry is moved as v + (inflow − v·q/Λ) while q/Λ < ½, and as v·(1 − q/Λ) + inflow above: the first form has no fixed
 * rounding error in 1 − q/Λ that thousands of jumps would add up, the second cannot cancel.
 */
export class JumpWalk {
  /** Λ of the whole chain. */
  readonly largestExit: number;
  /** Number of states reached by the jumps made so far. */
  active = 0;
  jumps = 0;
  /** States by new number; valid below `active`. */
  order = new Int32Array(FIRST_ROOM);
  /** Probabilities by new number; positive only below `active`. */
  now = new Float64Array(FIRST_ROOM);
  private next = new Float64Array(FIRST_ROOM);
  private exitShare = new Float64Array(FIRST_ROOM);
  /** The arrows of the opened states with the new numbers of their ends: state i's from `arrowStart[i]` to `arrowEnd[i]`. */
  private arrowStart = new Int32Array(FIRST_ROOM);
  private arrowEnd = new Int32Array(FIRST_ROOM);
  private to = new Int32Array(FIRST_ROOM);
  private share = new Float64Array(FIRST_ROOM);
  /** New number + 1 of each state, 0 where it has not been reached. */
  private readonly number: Int32Array;
  private opened = new Int32Array(FIRST_ROOM);
  /** All states below have been opened. */
  private allOpened = 0;
  private arrows = 0;

  constructor(
    private readonly chain: SparseRates,
    start: Float64Array,
  ) {
    let largest = 0;
    for (const exit of chain.exitRate) if (exit > largest) largest = exit;
    this.largestExit = largest;
    this.number = new Int32Array(chain.size);
    for (let i = 0; i < chain.size; i++) if (start[i] > 0) this.reach(i);
    for (let j = 0; j < this.active; j++) this.now[j] = start[this.order[j]];
  }

  /** No further state can be reached. */
  get complete(): boolean {
    if (this.largestExit === 0) return true;
    this.openReached();
    return this.allOpened === this.active;
  }

  /** One more jump. */
  jump(): void {
    this.jumps++;
    if (this.largestExit === 0) return;
    this.openReached();
    const { now, next, exitShare, arrowStart, arrowEnd, to, share, active } = this;
    next.fill(0, 0, active);
    for (let i = 0; i < active; i++) {
      const held = now[i];
      if (held === 0) continue;
      for (let k = arrowStart[i], end = arrowEnd[i]; k < end; k++) next[to[k]] += held * share[k];
    }
    for (let i = 0; i < active; i++) {
      const held = now[i];
      const exit = exitShare[i];
      const moved = exit < 0.5 ? held + (next[i] - held * exit) : held * (1 - exit) + next[i];
      next[i] = moved < NEVER ? 0 : moved;
    }
    this.now = next;
    this.next = now;
    // The shares of a row sum to 1 to rounding only; what thousands of jumps add up is taken out again.
    if (this.jumps % 16 === 0) this.normalise();
  }

  /** Σ of a value for each state times its probability. */
  value(values: Float64Array): number {
    const { order, now, active } = this;
    let sum = 0;
    for (let j = 0; j < active; j++) sum += values[order[j]] * now[j];
    return sum;
  }

  /** Work of one jump, arrows and states. */
  get workPerJump(): number {
    return this.active + this.arrows;
  }

  private reach(state: number): number {
    if (this.active === this.order.length) {
      const room = 2 * this.active;
      this.order = grown(this.order, room);
      this.now = grown(this.now, room);
      this.next = grown(this.next, room);
      this.exitShare = grown(this.exitShare, room);
      this.arrowStart = grown(this.arrowStart, room);
      this.arrowEnd = grown(this.arrowEnd, room);
      this.opened = grown(this.opened, room);
    }
    this.order[this.active] = state;
    this.number[state] = ++this.active;
    return this.active;
  }

  /** Takes in the arrows of the states that the last jump gave a probability, and the states that they lead to. */
  private openReached(): void {
    const { chain, number, largestExit } = this;
    for (let i = this.allOpened, end = this.active; i < end; i++) {
      if (this.opened[i] || this.now[i] === 0) continue;
      const state = this.order[i];
      const first = chain.rowStart[state];
      const last = chain.rowStart[state + 1];
      if (this.arrows + last - first > this.to.length) {
        const room = 2 * (this.arrows + last - first);
        this.to = grown(this.to, room);
        this.share = grown(this.share, room);
      }
      this.opened[i] = 1;
      this.arrowStart[i] = this.arrows;
      for (let k = first; k < last; k++) {
        this.to[this.arrows] = (number[chain.toState[k]] || this.reach(chain.toState[k])) - 1;
        this.share[this.arrows++] = chain.rate[k] / largestExit;
      }
      this.arrowEnd[i] = this.arrows;
      this.exitShare[i] = chain.exitRate[state] / largestExit;
    }
    while (this.allOpened < this.active && this.opened[this.allOpened]) this.allOpened++;
  }

  private normalise(): void {
    let sum = 0;
    for (let j = 0; j < this.active; j++) sum += this.now[j];
    const scale = 1 / sum;
    if (scale !== 1) for (let j = 0; j < this.active; j++) this.now[j] *= scale;
  }
}

const FIRST_ROOM = 64;

/**
 * A probability below this is taken for none, and its state not looked beyond: over a million jumps less than 1e-294 is lost, which
 * an entry of 1e-280 does not notice.
 */
const NEVER = 1e-300;

function grown<T extends Int32Array | Float64Array>(values: T, room: number): T {
  const larger = new (values.constructor as new (length: number) => T)(room);
  larger.set(values);
  return larger;
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
  const sums = weightSets.map(() => new Float64Array(FIRST_ROOM));
  yield* walkThrough(walk, weightSets, (_, set, weight) => {
    const { now, active } = walk;
    if (sums[set].length < active) sums[set] = grown(sums[set], now.length);
    const sum = sums[set];
    for (let j = 0; j < active; j++) sum[j] += weight * now[j];
  }, (set) => (walk.complete ? smallestPositive(sums[set]) : 0));
  return sums.map((sum) => {
    const full = new Float64Array(size);
    for (let j = Math.min(sum.length, walk.active); j-- > 0; ) full[walk.order[j]] = sum[j];
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
  const largest = functionals.map((values) => values.reduce((a, b) => Math.max(a, b), 0));
  const result = functionals.map(() => new Float64Array(weightSets.length));
  const values = new Float64Array(functionals.length);
  let valuesAt = -1;
  yield* walkThrough(walk, weightSets, (k, set, weight) => {
    if (valuesAt !== k) {
      valuesAt = k;
      for (let f = 0; f < values.length; f++) values[f] = walk.value(functionals[f]);
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
