import { communicatingClasses, type Classes } from "./classes";
import type { Generator } from "./generator";
import { Problem } from "./problem";
import { finish, type Steps } from "./steps";
import { eliminated, membersOf, subchain } from "./subchain";

/**
 * What share of the time is spent in each state in the long run?
 *
 * π with πQ = 0 and Σπ = 1 in each closed class, the classes weighted by the probability of ending in them.
 *
 * @param generator - the chain, n states
 * @param start - distribution at time 0 (n, sums to 1); not needed with a single closed class
 * @returns n shares; transient states have 0
 * @throws `severalClosedClasses` (no answer; classes as state numbers) where shares depend on a start that is not given;
 *   `tooManyStates`, `ratesTooFarApart` from the elimination
 *
 * *Method*: closed classes by Tarjan 1972, in each the elimination of Grassmann, Taksar & Heyman 1985, which has the
 * entrywise bound of O'Cinneide, Numer. Math. 65 (1993) 109–120. Class weights: the flow out of the transient states, by
 * one transposed elimination with leak. *Cost*: n³/3 multiply-adds dense, the fill of the plan when sparse.
 * *Accuracy*: `test/reference/battery-chain.test.ts`.
 *
 * @example stationaryShares(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]])) // [0.75, 0.25]
 */
export function stationaryShares(generator: Generator, start?: Float64Array): Float64Array {
  return finish(stationarySharesSteps(generator, start));
}

export function* stationarySharesSteps(generator: Generator, start?: Float64Array): Steps<Float64Array> {
  const classes = communicatingClasses(generator);
  const weights = start ? yield* classWeights(generator, start, classes) : onlyClosedClass(classes);
  const shares = new Float64Array(generator.size);
  for (let c = 0; c < weights.length; c++) {
    if (weights[c] === 0) continue;
    const within = yield* classShares(generator, classes.classes[c]);
    classes.classes[c].forEach((state, at) => (shares[state] = weights[c] * within[at]));
  }
  return shares;
}

/** The long-run shares inside one closed class, in the order of `members`. */
export function* classShares(generator: Generator, members: Int32Array): Steps<Float64Array> {
  if (members.length === 1) return Float64Array.of(1);
  return (yield* eliminated(subchain(generator, members))).shares();
}

/** Probability of ending in each class from `start`; 0 for classes that are not closed. */
export function* classWeights(generator: Generator, start: Float64Array, classes: Classes): Steps<Float64Array> {
  const weights = new Float64Array(classes.classes.length);
  if (classes.closed.filter(Boolean).length === 1) {
    weights[classes.closed.indexOf(true)] = 1;
    return weights;
  }
  const transient = new Uint8Array(generator.size);
  let startsTransient = false;
  for (let i = 0; i < generator.size; i++) {
    const c = classes.classOf[i];
    if (classes.closed[c]) weights[c] += start[i];
    else {
      transient[i] = 1;
      if (start[i] > 0) startsTransient = true;
    }
  }
  if (!startsTransient) return weights;
  const part = subchain(generator, membersOf(transient));
  const stay = (yield* eliminated(part)).solveTransposed(Float64Array.from(part.members, (state) => start[state]));
  part.members.forEach((state, at) => {
    for (let p = generator.rowStart[state]; p < generator.rowStart[state + 1]; p++) {
      const c = classes.classOf[generator.toState[p]];
      if (classes.closed[c]) weights[c] += stay[at] * generator.rate[p];
    }
  });
  return weights;
}

/**
 * Refuses a long run that depends on a start which is not given, or that nobody can give (remedy "none").
 * @throws `severalClosedClasses`, `severalEnds` (no answer)
 */
export function needOneClosedClass(classes: Classes, remedy: "giveStart" | "none" = "giveStart"): void {
  const closed = classes.classes.filter((_, c) => classes.closed[c]);
  if (closed.length > 1) throw new Problem(remedy === "none" ? "severalEnds" : "severalClosedClasses", { classes: closed.map((members) => Array.from(members)) }, "noAnswer");
}

function onlyClosedClass(classes: Classes): Float64Array {
  needOneClosedClass(classes);
  return Float64Array.from(classes.closed, (isClosed) => (isClosed ? 1 : 0));
}
