import { communicatingClasses, type StateSet } from "./classes";
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
 * @returns shares (n, 0 in targets) and decay rate; where no target can be met from the class reached last, its stationary shares and 0
 * @throws `onlyTargets` where no other state is left; `limitDependsOnStart` (no answer) where the limit is not the same from
 *   every state that is no target; `tooManyStates`, `ratesTooFarApart`
 *
 * *Method*: from a state the limit is that of the slowest class it can reach, the last of equally slow ones (van Doorn & Pollett,
 * Linear Algebra Appl. 429 (2008) 776–791, where the geometric multiplicity of α is one). So it is the same from everywhere
 * exactly when one class is reached from all states and none is slower. Decay rate of a class by Noda's inverse iteration (Numer.
 * Math. 17 (1971) 382–386), every step an elimination with leak: with v > 0 from (M − σI)v = u, the scaled matrix
 * V⁻¹(M − σI)V has the row sums u/v ≥ 0, which is what the elimination needs instead of a diagonal (Alfa, Xue & Ye 2002). Bounds
 * min u/v and max u/v (Collatz & Wielandt) end it.
 * *Cost*: some 5 to 10 eliminations a class. *Accuracy*: 3e-15, `test/reference/sensitivity.test.ts` and sines in
 * `test/unit/chain/quasi-stationary.test.ts`.
 *
 * @example quasiStationary(Generator.fromArrows(2, [[0, 1, 0.25]]), Uint8Array.of(0, 1)) // { shares: [1, 0], decayRate: 0.25 }
 */
export function quasiStationary(generator: Generator, targets: StateSet): QuasiStationary {
  return finish(quasiStationarySteps(generator, targets));
}

export function* quasiStationarySteps(generator: Generator, targets: StateSet): Steps<QuasiStationary> {
  if (targets.every((t) => t === 1)) throw new Problem("onlyTargets");
  const { classOf, classes } = communicatingClasses(generator, targets);
  const live = classes.filter((members) => !targets[members[0]]);
  // a class that leads to no other but targets; every state reaches one of them
  const ends = live.filter((members) => members.every((state) => {
    for (let p = generator.rowStart[state]; p < generator.rowStart[state + 1]; p++) {
      const to = generator.toState[p];
      if (!targets[to] && classOf[to] !== classOf[state]) return false;
    }
    return true;
  }));
  const none = (among: readonly Int32Array[]): Problem =>
    new Problem("limitDependsOnStart", { classes: among.map((members) => Array.from(members)) }, "noAnswer");
  if (ends.length > 1) throw none(ends);
  const last = ends[0];
  const slow = yield* decayOf(subchain(generator, last));
  for (const members of live) {
    if (members === last) continue;
    const { rate } = yield* decayOf(subchain(generator, members));
    if (rate < slow.rate * (1 - EQUAL_DECAY)) throw none([members, last]);
  }
  const shares = new Float64Array(generator.size);
  let sum = 0;
  for (const share of slow.left) sum += share;
  last.forEach((state, a) => (shares[state] = slow.left[a] / sum));
  return { shares, decayRate: slow.rate };
}

interface Decay {
  readonly rate: number;
  /** Left eigenvector, positive, up to a factor. */
  readonly left: Float64Array;
}

/**
 * Decay rate and left Perron vector of one class (rate 0 and the stationary shares without leak).
 *
 * Every round solves S s = 1 with S = V⁻¹(M − σI)V, so that v' = v·s; α − σ lies between 1/max s and 1/min s, the lower bound
 * becomes the next shift, and 1/s_i − 1/max s are the next row sums. In the end S without its vanishing row sums is the
 * chain that never meets a target; its stationary shares are left · right, which gives the left vector by one more elimination.
 */
function* decayOf(part: Subchain): Steps<Decay> {
  const n = part.members.length;
  const { leak } = part.system;
  let right: Float64Array = new Float64Array(n).fill(1);
  if (n === 1) return { rate: leak[0], left: right };
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
  return { rate: shift, left: product.map((z, i) => z / right[i]) };
}

/** V⁻¹ M V with the given row sums in place of the leak. */
function scaled(part: Subchain, v: Float64Array, rows: Float64Array): Subchain {
  const { rowStart, toState, rate, size } = part.system;
  const scaledRate = rate.slice();
  for (let i = 0; i < size; i++)
    for (let p = rowStart[i]; p < rowStart[i + 1]; p++) scaledRate[p] *= v[toState[p]] / v[i];
  return { ...part, system: { size, rowStart, toState, rate: scaledRate, leak: rows } };
}
