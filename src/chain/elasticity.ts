import { potentialDifferences } from "../numerics/potential-differences";
import { communicatingClasses, type StateSet } from "./classes";
import { effectiveCosts, type JumpCosts } from "./cost";
import { certainty } from "./absorption";
import type { Generator } from "./generator";
import { Problem } from "./problem";
import { classShares, classWeights, needOneClosedClass } from "./stationary";
import { finish, type Steps } from "./steps";
import { eliminated, membersOf, subchain, type Subchain } from "./subchain";

/**
 * By how many percent does the long-run share in `up` change for one percent more of each rate?
 *
 * (q_ij / A) ∂A/∂q_ij with A = Σ_{k∈up} π_k, the exit rate of i moving with q_ij.
 *
 * @param generator - the chain, n states
 * @param up - the states whose share is meant
 * @param start - distribution at time 0; not needed with a single closed class
 * @returns n × n, rows "from", columns "to"; 0 where there is no arrow
 * @throws `shareIsZero` (no answer); as `stationaryShares`
 *
 * *Method*: ∂A/∂q_ij = π_i (h_j − h_i), h the solution of Poisson's equation −Qh = 1_up − A (Schweitzer, J. Appl. Prob. 5
 * (1968) 401–413; Golub & Meyer, SIAM J. Alg. Disc. Meth. 7 (1986) 273–281). Ours: the right-hand side as sums of π over the
 * other side, the differences h_j − h_i by state reduction, rare states first (`numerics/potential-differences.ts`). Arrows of transient states move the
 * probabilities of the closed classes: their time from the start × the difference of the long-run shares.
 * *Cost*: two eliminations. *Accuracy*: `test/reference/battery-elasticity.test.ts`.
 *
 * @example shareElasticity(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), Uint8Array.of(1, 0)) // [0, -0.25, 0.25, 0]
 */
export function shareElasticity(generator: Generator, up: StateSet, start?: Float64Array): Float64Array {
  return finish(shareElasticitySteps(generator, up, start));
}

export function* shareElasticitySteps(generator: Generator, up: StateSet, start?: Float64Array): Steps<Float64Array> {
  const { value, visits, changes } = yield* rewardDerivatives(generator, Float64Array.from(up), null, start);
  if (value === 0) throw new Problem("shareIsZero", {}, "noAnswer");
  return elasticities(generator, value, visits, changes);
}

/**
 * By how many percent does the long-run cost per time unit change for one percent more of each rate?
 *
 * (q_ij / C) ∂C/∂q_ij with C = Σ_i π_i (c_i + Σ_j q_ij k_ij).
 *
 * @param stateCosts - n costs per time unit in a state
 * @param jumpCosts - n × n costs of each use of an arrow, or null
 * @returns n × n, 0 where there is no arrow; *throws* `costIsZero` (no answer); else as `shareElasticity`
 *
 * *Method*: as `shareElasticity`, with ∂C/∂q_ij = π_i (k_ij + v_j − v_i). *Accuracy*: `test/reference/sensitivity.test.ts`.
 *
 * @example costElasticity(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), Float64Array.of(0, 100), null)
 * // [0, 0.75, -0.75, 0]
 */
export function costElasticity(
  generator: Generator, stateCosts: Float64Array, jumpCosts: JumpCosts, start?: Float64Array,
): Float64Array {
  return finish(costElasticitySteps(generator, stateCosts, jumpCosts, start));
}

export function* costElasticitySteps(
  generator: Generator, stateCosts: Float64Array, jumpCosts: JumpCosts, start?: Float64Array,
): Steps<Float64Array> {
  const { value, visits, changes } = yield* rewardDerivatives(generator, stateCosts, jumpCosts, start);
  if (value === 0) throw new Problem("costIsZero", {}, "noAnswer");
  return elasticities(generator, value, visits, changes);
}

/**
 * By how many percent does the mean time to the targets change for one percent more of each rate?
 *
 * (q_ij / m) ∂m/∂q_ij with m the mean time from `start` until the first target.
 *
 * @param start - distribution at time 0
 * @param targets - the states waited for
 * @returns n × n, 0 where there is no arrow
 * @throws `targetNotCertain` (no answer) where the mean is infinite, `meanIsZero` (no answer) where the start is a target
 *
 * *Method*: ∂m/∂q_ij = b_i (m_j − m_i), b the time in i before the targets; differences by state reduction.
 * *Cost*: two eliminations. *Accuracy*: 7e-16 from elasticities of 1e-6 up, `test/reference/sensitivity.test.ts`.
 *
 * @example meanTimeElasticity(Generator.fromArrows(2, [[0, 1, 4]]), Float64Array.of(1, 0), Uint8Array.of(0, 1)) // [0, -1, 0, 0]
 */
export function meanTimeElasticity(generator: Generator, start: Float64Array, targets: StateSet): Float64Array {
  return finish(meanTimeElasticitySteps(generator, start, targets));
}

export function* meanTimeElasticitySteps(
  generator: Generator, start: Float64Array, targets: StateSet,
): Steps<Float64Array> {
  const { certain } = certainty(generator, targets);
  if (start.some((p, i) => p > 0 && !targets[i] && !certain[i])) throw new Problem("targetNotCertain", {}, "noAnswer");
  const part = subchain(generator, membersOf(certain));
  const startInside = Float64Array.from(part.members, (state) => start[state]);
  if (!startInside.some((p) => p > 0)) throw new Problem("meanIsZero", {}, "noAnswer");
  const elimination = yield* eliminated(part);
  const ones = new Float64Array(part.members.length).fill(1);
  const mean = elimination.solve(ones);
  const stay = elimination.solveTransposed(startInside);
  const ahead = yield* differencesOf(part, stay, ones, ones);
  let value = 0;
  startInside.forEach((p, a) => (value += p * mean[a]));
  const visits = new Float64Array(generator.arrowCount);
  const changes = new Float64Array(generator.arrowCount);
  eachArrow(generator, part.members, part.position, (p, from, inside) => {
    visits[p] = stay[from];
    changes[p] = inside >= 0 ? ahead[inside] : -mean[from];
  });
  return elasticities(generator, value, visits, changes);
}

/** The long-run reward rate and, in the arrows' order, its derivative by each arrow's rate as two factors: visits × changes. */
function* rewardDerivatives(
  generator: Generator, stateRewards: Float64Array, jumpRewards: JumpCosts, start?: Float64Array,
): Steps<{ value: number; visits: Float64Array; changes: Float64Array }> {
  const n = generator.size;
  const reward = effectiveCosts(generator, stateRewards, jumpRewards);
  const jumpReward = (from: number, to: number): number => (jumpRewards ? jumpRewards[from * n + to] : 0);
  const classes = communicatingClasses(generator);
  const several = classes.closed.filter(Boolean).length > 1;
  if (!start) needOneClosedClass(classes);
  const weights = yield* classWeights(generator, start ?? new Float64Array(n), classes);
  const rates = new Float64Array(weights.length);
  const visits = new Float64Array(generator.arrowCount);
  const changes = new Float64Array(generator.arrowCount);
  let value = 0;
  for (let c = 0; c < weights.length; c++) {
    if (!classes.closed[c]) continue;
    const part = subchain(generator, classes.classes[c]);
    const shares = yield* classShares(generator, part.members);
    const rewards = Float64Array.from(part.members, (state) => reward[state]);
    if (rewards.every((one) => one === rewards[0])) rates[c] = rewards[0]; // exactly: classes that earn alike cancel exactly
    else shares.forEach((share, a) => (rates[c] += share * rewards[a]));
    value += weights[c] * rates[c];
    if (weights[c] === 0 || part.members.length === 1) continue;
    const { gain, loss } = deviations(rewards, shares);
    const ahead = yield* differencesOf(part, shares, rewards, gain, loss);
    eachArrow(generator, part.members, part.position, (p, from, inside) => {
      visits[p] = weights[c] * shares[from];
      changes[p] = jumpReward(part.members[from], generator.toState[p]) + ahead[inside];
    });
  }
  if (several && start) {
    const transient = Uint8Array.from(classes.classOf, (c) => (classes.closed[c] ? 0 : 1));
    const part = subchain(generator, membersOf(transient));
    if (part.members.length > 0) {
      const elimination = yield* eliminated(part);
      const stay = elimination.solveTransposed(Float64Array.from(part.members, (state) => start[state]));
      const lowest = Math.min(...rates.filter((_, c) => classes.closed[c]));
      const toward = (sign: 1 | -1, than: number): Float64Array => Float64Array.from(part.members, (state) => {
        let sum = 0;
        for (let p = generator.rowStart[state]; p < generator.rowStart[state + 1]; p++) {
          const c = classes.classOf[generator.toState[p]];
          if (classes.closed[c]) sum += generator.rate[p] * Math.max(0, sign * (rates[c] - than));
        }
        return sum;
      });
      const surplus = toward(1, lowest);
      const ahead = yield* differencesOf(part, stay, surplus, surplus);
      const shortfall = new Map<number, Float64Array>(); // by class: its rate less the rate expected from each state
      const shortfallOf = (c: number): Float64Array => {
        let found = shortfall.get(c);
        if (!found) {
          const above = elimination.solve(toward(1, rates[c]));
          found = elimination.solve(toward(-1, rates[c])).map((below, a) => below - above[a]);
          shortfall.set(c, found);
        }
        return found;
      };
      eachArrow(generator, part.members, part.position, (p, from, inside) => {
        visits[p] = stay[from];
        changes[p] = inside >= 0 ? ahead[inside] : shortfallOf(classes.classOf[generator.toState[p]])[from];
      });
    }
  }
  return { value, visits, changes };
}

function* differencesOf(part: Subchain, weight: Float64Array, rewards: Float64Array, gain: Float64Array, loss?: Float64Array): Steps<Float64Array> {
  const { differences, sound } = yield* potentialDifferences(part.system, weight, rewards, gain, loss);
  if (!sound) throw new Problem("ratesTooFarApart", {}, "noAnswer");
  return differences;
}

/** reward_i − Σ_j π_j reward_j as Σ_j π_j (reward_i − reward_j), its positive and its negative terms apart. */
function deviations(rewards: Float64Array, shares: Float64Array): { gain: Float64Array; loss: Float64Array } {
  const shareOf = new Map<number, number>();
  rewards.forEach((reward, a) => shareOf.set(reward, (shareOf.get(reward) ?? 0) + shares[a]));
  const parts = new Map<number, [gain: number, loss: number]>();
  for (const reward of shareOf.keys()) {
    let gain = 0;
    let loss = 0;
    for (const [other, share] of shareOf)
      if (other < reward) gain += share * (reward - other);
      else loss += share * (other - reward);
    parts.set(reward, [gain, loss]);
  }
  return {
    gain: rewards.map((reward) => parts.get(reward)![0]),
    loss: rewards.map((reward) => parts.get(reward)![1]),
  };
}

/** Calls `use` with each arrow of the members: its position in the chain, in `members`, and among the arrows inside (or −1). */
function eachArrow(
  generator: Generator, members: Int32Array, position: Int32Array, use: (p: number, from: number, inside: number) => void,
): void {
  let inside = 0;
  members.forEach((state, from) => {
    for (let p = generator.rowStart[state]; p < generator.rowStart[state + 1]; p++)
      use(p, from, position[generator.toState[p]] >= 0 ? inside++ : -1);
  });
}

/** Rate × visits first: that flow is of a size with the value, while visits × changes may leave the number range. */
function elasticities(generator: Generator, value: number, visits: Float64Array, changes: Float64Array): Float64Array {
  const n = generator.size;
  const result = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++)
      result[i * n + generator.toState[p]] = ((generator.rate[p] * visits[p]) / value) * changes[p];
  return result;
}
