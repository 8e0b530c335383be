import { communicatingClasses, statesReached, statesReaching, type StateSet } from "./classes";
import type { Generator } from "./generator";
import { Problem } from "./problem";
import { finish, type Steps } from "./steps";
import { eliminated, subchain, type Subchain } from "./subchain";

/** Decay rates that agree to this relative difference count as equal. */
export const EQUAL_DECAY = 1e-12;

export interface QuasiStationary {
  /** n shares, 0 in targets. */
  readonly shares: Float64Array;
  /** Rate at which the probability of not having met a target falls in the end. */
  readonly decayRate: number;
}

/**
 * If it has gone well so far, for long: in which states is it?
 *
 * lim P(X_t = j | no target met by t) as t grows: the left eigenvector of the rates among the other states for their decay
 * rate α, the smallest of −(real parts of the eigenvalues).
 *
 * @param generator - the chain, n states
 * @param targets - the states that end it
 * @returns shares (n, 0 in targets) and decay rate; where no target can be met from the slowest class, its stationary shares
 *   and 0
 * @throws `onlyTargets` where no other state is left; `limitDependsOnStart` (no answer) where the limit is not the same from
 *   every state that is no target; `tooManyStates`, `ratesTooFarApart`
 *
 * *Method*: the limit is that of the slowest class that can be reached, the last of equally slow ones (van Doorn & Pollett,
 * Linear Algebra Appl. 429 (2008) 776–791, where the geometric multiplicity of α is one); it is the same from everywhere
 * when every state reaches that class. In each class the decay rate by Noda's inverse iteration (Numer. Math. 17 (1971)
 * 382–386), every step an elimination with leak: with v > 0 from (M − σI)v = u, the scaled matrix V⁻¹(M − σI)V has the row
 * sums u/v ≥ 0, which is what the elimination needs instead of a diagonal (Alfa, Xue & Ye 2002). Bounds min u/v and
 * max u/v (Collatz & Wielandt) end it. Later classes by one solve at the shift α, in Perron scaling.
 * *Cost*: some 5 to 10 eliminations a class. *Accuracy*: `test/unit/chain/quasi-stationary.test.ts`.
 *
 * @example quasiStationary(Generator.fromArrows(2, [[0, 1, 0.25]]), Uint8Array.of(0, 1)) // { shares: [1, 0], decayRate: 0.25 }
 */
export function quasiStationary(generator: Generator, targets: StateSet): QuasiStationary {
  return finish(quasiStationarySteps(generator, targets));
}

export function* quasiStationarySteps(generator: Generator, targets: StateSet): Steps<QuasiStationary> {
  if (targets.every((t) => t === 1)) throw new Problem("onlyTargets");
  const { classOf, classes } = communicatingClasses(generator, targets);
  const live = classes.map((members, c) => (targets[members[0]] ? -1 : c)).filter((c) => c >= 0);
  const decays = new Map<number, Decay>();
  for (const c of live) decays.set(c, yield* decayOf(subchain(generator, classes[c])));

  const lowest = Math.min(...live.map((c) => decays.get(c)!.rate));
  const slowest = live.filter((c) => decays.get(c)!.rate <= lowest * (1 + EQUAL_DECAY));
  const reachedFrom = (c: number): StateSet => statesReached(generator, maskOf(generator.size, classes[c][0]), targets);
  const last = slowest.find((c) => {
    const ahead = reachedFrom(c);
    return slowest.every((other) => other === c || !ahead[classes[other][0]]);
  });
  const behind = statesReaching(generator, maskOf(generator.size, classes[last ?? slowest[0]][0]), targets);
  if (last === undefined || live.some((c) => !behind[classes[c][0]]))
    throw new Problem("limitDependsOnStart", { classes: slowest.map((c) => Array.from(classes[c])) }, "noAnswer");

  const slow = decays.get(last)!;
  const shares = new Float64Array(generator.size);
  classes[last].forEach((state, a) => (shares[state] = slow.left[a]));
  const ahead = reachedFrom(last);
  const later = live.filter((c) => c !== last && ahead[classes[c][0]]);
  for (const c of inFlowOrder(generator, classOf, classes, later))
    yield* follow(generator, subchain(generator, classes[c]), decays.get(c)!, slow.rate, shares);
  let sum = 0;
  for (const share of shares) sum += share;
  return { shares: shares.map((share) => share / sum), decayRate: slow.rate };
}

interface Decay {
  readonly rate: number;
  /** Positive eigenvectors of the class, each up to a factor. */
  readonly left: Float64Array;
  readonly right: Float64Array;
}

/**
 * Decay rate and Perron vectors of one class (rate 0 and the stationary shares without leak).
 *
 * Every round solves S s = 1 with S = V⁻¹(M − σI)V, so that v' = v·s; α − σ lies between 1/max s and 1/min s, the lower bound
 * becomes the next shift, and 1/s_i − 1/max s are the next row sums. In the end S without its vanishing row sums is the
 * chain that never meets a target; its stationary shares are left · right, which gives the left vector by one more elimination.
 */
function* decayOf(part: Subchain): Steps<Decay> {
  const n = part.members.length;
  const { leak } = part.system;
  let right: Float64Array = new Float64Array(n).fill(1);
  if (n === 1) return { rate: leak[0], left: right, right };
  let shift = 0;
  let rows: Float64Array = leak;
  let spread = Infinity;
  while (rows.some((r) => r > 0)) {
    const s = (yield* eliminated(scaled(part, right, rows))).solve(new Float64Array(n).fill(1));
    let least = Infinity;
    let most = 0;
    for (const value of s) {
      if (value < least) least = value;
      if (value > most) most = value;
    }
    if (!(most < Infinity)) break;
    const before = spread;
    spread = (1 / least - 1 / most) / (shift + 1 / most);
    shift += 1 / most;
    right = right.map((v, i) => (v * s[i]) / most);
    rows = s.map((value) => Math.max(0, 1 / value - 1 / most));
    if (spread <= Number.EPSILON || (spread < 1e-13 && spread > before / 2)) break;
  }
  const product = (yield* eliminated(scaled(part, right, new Float64Array(n)))).shares();
  return { rate: shift, left: product.map((z, i) => z / right[i]), right };
}

/** Shares in a class that is entered from states already settled, and that decays faster than the whole. */
function* follow(
  generator: Generator, part: Subchain, decay: Decay, rate: number, shares: Float64Array,
): Steps<void> {
  const inflow = new Float64Array(part.members.length);
  for (let i = 0; i < generator.size; i++) {
    if (shares[i] === 0) continue;
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++) {
      const to = part.position[generator.toState[p]];
      if (to >= 0) inflow[to] += shares[i] * generator.rate[p];
    }
  }
  const rows = new Float64Array(part.members.length).fill(decay.rate - rate);
  const product = (yield* eliminated(scaled(part, decay.right, rows))).solveTransposed(inflow.map((f, a) => f * decay.right[a]));
  part.members.forEach((state, a) => (shares[state] = product[a] / decay.right[a]));
}

/** V⁻¹ M V with the given row sums in place of the leak. */
function scaled(part: Subchain, v: Float64Array, rows: Float64Array): Subchain {
  const { rowStart, toState, rate, size } = part.system;
  const scaledRate = rate.slice();
  for (let i = 0; i < size; i++)
    for (let p = rowStart[i]; p < rowStart[i + 1]; p++) scaledRate[p] *= v[toState[p]] / v[i];
  return { ...part, system: { size, rowStart, toState, rate: scaledRate, leak: rows } };
}

/** The classes in an order in which no arrow leads back. */
function inFlowOrder(
  generator: Generator, classOf: Int32Array, classes: readonly Int32Array[], chosen: readonly number[],
): number[] {
  const open = new Set(chosen);
  const order: number[] = [];
  const visit = (first: number): void => {
    const path = [{ c: first, next: successors(first) }];
    open.delete(first);
    while (path.length > 0) {
      const top = path[path.length - 1];
      const c = top.next.pop();
      if (c === undefined) {
        order.push(top.c);
        path.pop();
      } else if (open.delete(c)) path.push({ c, next: successors(c) });
    }
  };
  const successors = (c: number): number[] => {
    const found = new Set<number>();
    for (const state of classes[c])
      for (let p = generator.rowStart[state]; p < generator.rowStart[state + 1]; p++) found.add(classOf[generator.toState[p]]);
    return [...found];
  };
  for (const c of chosen) if (open.has(c)) visit(c);
  return order.reverse();
}

function maskOf(size: number, state: number): StateSet {
  const mask = new Uint8Array(size);
  mask[state] = 1;
  return mask;
}
