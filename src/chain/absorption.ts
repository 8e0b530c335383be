import { communicatingClasses, statesReached, statesReaching, type StateSet } from "./classes";
import type { Generator } from "./generator";
import { finish, type Steps } from "./steps";
import { eliminated, membersOf, rateInto, subchain, type Subchain } from "./subchain";

/** How each state stands to the targets; decided on the graph, never by comparing numbers. */
export interface Certainty {
  /** Not targets, and met a target with certainty. */
  readonly certain: StateSet;
  /** Not targets, may or may not meet one. */
  readonly possible: StateSet;
  /** No target can be reached. */
  readonly never: StateSet;
}

/** Sorts the states by whether a target is met from them. */
export function certainty(generator: Generator, targets: StateSet): Certainty {
  const reaching = statesReaching(generator, targets);
  const never = reaching.map((r) => 1 - r);
  const missing = statesReaching(generator, never, targets);
  const certain = targets.map((t, i) => (t || missing[i] ? 0 : 1));
  const possible = targets.map((t, i) => (!t && missing[i] && !never[i] ? 1 : 0));
  return { certain, possible, never };
}

/**
 * How long, on average, until one of these states is met?
 *
 * m_i = E[time of the first visit to a target | start in i]: Σ_j q_ij (m_i − m_j) = 1 outside the targets, m = 0 in them.
 *
 * @param generator - the chain, n states
 * @param targets - the states waited for
 * @returns n mean times, a column beside the from-states; 0 in a target, `Infinity` where no target is met with certainty
 * @throws `tooManyStates`, `ratesTooFarApart` from the elimination
 *
 * *Method*: elimination with leak, Alfa, Xue & Ye 2002; certainty on the graph. *Cost*: one elimination of the states that
 * are certain. *Accuracy*: `test/reference/battery-chain.test.ts`.
 *
 * @example meanAbsorption(Generator.fromArrows(2, [[0, 1, 0.25]]), Uint8Array.of(0, 1)) // [4, 0]
 */
export function meanAbsorption(generator: Generator, targets: StateSet): Float64Array {
  return finish(meanAbsorptionSteps(generator, targets));
}

export function* meanAbsorptionSteps(generator: Generator, targets: StateSet): Steps<Float64Array> {
  const part = subchain(generator, membersOf(certainty(generator, targets).certain));
  if (part.members.length === 0) return spread(part, new Float64Array(0), targets);
  const means = (yield* eliminated(part)).solve(new Float64Array(part.members.length).fill(1));
  return spread(part, means, targets);
}

/**
 * How much does that time vary?
 *
 * The standard deviation of the first time at a target: V = sd² with Σ_j q_ij (V_i − V_j) = Σ_j q_ij (m_i − m_j)² outside
 * the targets, V = m = 0 in them (the variance of the next step's outcome, collected along the way).
 *
 * Parameters, result and problems as `meanAbsorption`.
 *
 * *Method*: the right-hand side above is a sum of squares; second moment minus squared mean, the textbook form, loses
 * every digit when the time is nearly constant. Same elimination as the mean, solved twice. *Cost*: as the mean.
 * *Accuracy*: `test/reference/battery-chain.test.ts`.
 *
 * @example absorptionSd(Generator.fromArrows(2, [[0, 1, 0.25]]), Uint8Array.of(0, 1)) // [4, 0]
 */
export function absorptionSd(generator: Generator, targets: StateSet): Float64Array {
  return finish(absorptionSdSteps(generator, targets));
}

export function* absorptionSdSteps(generator: Generator, targets: StateSet): Steps<Float64Array> {
  const part = subchain(generator, membersOf(certainty(generator, targets).certain));
  if (part.members.length === 0) return spread(part, new Float64Array(0), targets);
  const elimination = yield* eliminated(part);
  const mean = elimination.solve(new Float64Array(part.members.length).fill(1));
  const { rowStart, toState, rate, leak } = part.system;
  const w = mean.map((m, a) => {
    let sum = leak[a] * m * m;
    for (let p = rowStart[a]; p < rowStart[a + 1]; p++) sum += rate[p] * (m - mean[toState[p]]) ** 2;
    return sum;
  });
  return spread(part, elimination.solve(w).map(Math.sqrt), targets);
}

/**
 * Will one of these states ever be met?
 *
 * h_i = P(some target is met | start in i): Σ_j q_ij (h_i − h_j) = 0 outside the targets, h = 1 in them.
 *
 * @returns n probabilities; exactly 1 where certain and 0 where impossible, both by the graph
 * Parameters, method and problems as `meanAbsorption`.
 *
 * @example everReached(Generator.fromArrows(3, [[0, 1, 1], [0, 2, 3]]), Uint8Array.of(0, 1, 0)) // [0.25, 1, 0]
 */
export function everReached(generator: Generator, targets: StateSet): Float64Array {
  return finish(everReachedSteps(generator, targets));
}

export function* everReachedSteps(generator: Generator, targets: StateSet): Steps<Float64Array> {
  const { certain, possible } = certainty(generator, targets);
  const sure = targets.map((t, i) => t | certain[i]);
  const result = Float64Array.from(sure);
  const part = subchain(generator, membersOf(possible));
  if (part.members.length === 0) return result;
  const met = (yield* eliminated(part)).solve(rateInto(generator, part.members, sure));
  part.members.forEach((state, at) => (result[state] = met[at]));
  return result;
}

/**
 * Which of these states is met first?
 *
 * @param generator - the chain, n states
 * @param targets - k states
 * @returns `probability[i * k + c]`: from state i, the first target met is `targets[c]` (ascending). A target's row is 1 at
 *   itself; a row sums to less than 1 where no target may be met
 * @throws as `meanAbsorption`
 *
 * *Method*: one elimination with leak of the states from which a target can be reached, k right-hand sides.
 * *Cost*: elimination + 2 k n² dense. *Accuracy*: `test/reference/battery-chain.test.ts`.
 *
 * @example absorptionProbability(Generator.fromArrows(3, [[0, 1, 1], [0, 2, 3]]), Uint8Array.of(0, 1, 1)).probability
 * // [0.25, 0.75, 1, 0, 0, 1]
 */
export function absorptionProbability(
  generator: Generator, targets: StateSet,
): { targets: Int32Array; probability: Float64Array } {
  return finish(absorptionProbabilitySteps(generator, targets));
}

export function* absorptionProbabilitySteps(
  generator: Generator, targets: StateSet,
): Steps<{ targets: Int32Array; probability: Float64Array }> {
  const columns = membersOf(targets);
  const k = columns.length;
  const probability = new Float64Array(generator.size * k);
  columns.forEach((state, c) => (probability[state * k + c] = 1));
  const { certain, possible } = certainty(generator, targets);
  const part = subchain(generator, membersOf(certain.map((c, i) => c | possible[i])));
  if (part.members.length === 0) return { targets: columns, probability };
  const elimination = yield* eliminated(part);
  for (let c = 0; c < k; c++) {
    const direct = Float64Array.from(part.members, (state) => generator.rateOf(state, columns[c]));
    const first = elimination.solve(direct);
    part.members.forEach((state, at) => (probability[state * k + c] = first[at]));
    yield c / k;
  }
  return { targets: columns, probability };
}

/**
 * How long is the chain in each state before it meets one of these?
 *
 * b_j = E[time in j before the first target | start].
 *
 * @param generator - the chain, n states
 * @param start - distribution at time 0
 * @param targets - the states that end the watch
 * @returns n times, a row under the to-states; 0 in targets; `Infinity` in a state of a closed class without target that
 *   can be entered
 * @throws as `meanAbsorption`
 *
 * *Method*: one transposed elimination with leak over the states that are left for good. *Cost*: as the mean.
 * *Accuracy*: `test/reference/battery-chain.test.ts`.
 *
 * @example timeBefore(Generator.fromArrows(2, [[0, 1, 0.25]]), Float64Array.of(1, 0), Uint8Array.of(0, 1)) // [4, 0]
 */
export function timeBefore(generator: Generator, start: Float64Array, targets: StateSet): Float64Array {
  return finish(timeBeforeSteps(generator, start, targets));
}

export function* timeBeforeSteps(generator: Generator, start: Float64Array, targets: StateSet): Steps<Float64Array> {
  const reached = statesReached(generator, Uint8Array.from(start, (p) => (p > 0 ? 1 : 0)), targets);
  const { classOf, closed } = communicatingClasses(generator, targets);
  const result = new Float64Array(generator.size);
  const left = new Uint8Array(generator.size);
  for (let i = 0; i < generator.size; i++) {
    if (targets[i] || !reached[i]) continue;
    if (closed[classOf[i]]) result[i] = Infinity;
    else left[i] = 1;
  }
  const part = subchain(generator, membersOf(left));
  if (part.members.length === 0) return result;
  const stay = (yield* eliminated(part)).solveTransposed(Float64Array.from(part.members, (state) => start[state]));
  part.members.forEach((state, at) => (result[state] = stay[at]));
  return result;
}

/** Values of the members, 0 in targets, `Infinity` elsewhere. */
function spread(part: Subchain, values: Float64Array, targets: StateSet): Float64Array {
  const result = Float64Array.from(targets, (t) => (t ? 0 : Infinity));
  part.members.forEach((state, at) => (result[state] = values[at]));
  return result;
}
