import { passageQuantiles, type Goal } from "../numerics/passage-quantile";
import { everReachedSteps } from "./absorption";
import type { StateSet } from "./classes";
import type { Generator } from "./generator";
import { passage } from "./passage";
import { Problem } from "./problem";
import { finish, type Steps } from "./steps";

export interface Percentiles {
  /** One time a fraction; `Infinity` where that fraction never meets a target. */
  readonly times: Float64Array;
  /** Probability of ever meeting a target from the start. */
  readonly everReached: number;
}

/**
 * By when has that fraction met a target?
 *
 * The smallest t with Pr(T ≤ t) ≥ fraction, T = time of the first visit to a target.
 *
 * @param generator - the chain, n states
 * @param start - n probabilities that sum to 1
 * @param targets - the states waited for
 * @param fractions - each at least 0 and below 1, in any order
 * @returns the times in the order given, 0 for a fraction that starts in a target, and the probability of ever
 *   meeting one
 * @throws `fractionOutside` {fraction}; `tooMuchWork` {states} where a large chain would need minutes
 *
 * *Method*: binary descent along stored squarings, then Newton (ours), see `numerics/passage-quantile.ts`; large chains jump by
 * jump. *Cost*: about log2(Λt) products of order n, once for all fractions. *Accuracy*: relative error at most 5e-14,
 * `test/reference/battery-time.test.ts`.
 *
 * @example percentiles(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), Uint8Array.of(0, 1), [0.5]).times // [Math.LN2 / 2]
 */
export function percentiles(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  fractions: ArrayLike<number>,
): Percentiles {
  return finish(percentilesSteps(generator, start, targets, fractions));
}

export function* percentilesSteps(
  generator: Generator,
  start: Float64Array,
  targets: StateSet,
  fractions: ArrayLike<number>,
): Steps<Percentiles> {
  for (let m = 0; m < fractions.length; m++)
    if (!(fractions[m] >= 0 && fractions[m] < 1)) throw new Problem("fractionOutside", { fraction: fractions[m] });
  const ever = yield* everReachedSteps(generator, targets);
  const { generator: stopped, start: begin, met, rateIn, outside } = passage(generator, start, targets);
  const yet = new Float64Array(met + 1);
  let everReached = begin[met];
  outside.forEach((state, at) => {
    yet[at] = ever[state];
    everReached += begin[at] * ever[state];
  });
  // A certain passage is certain: what rounding of the start's sum leaves is not a chance of never.
  const certain = outside.every((state, at) => begin[at] === 0 || ever[state] === 1);
  if (certain) everReached = 1;
  const times = new Float64Array(fractions.length);
  const goals: Goal[] = [];
  const places: number[] = [];
  for (let m = 0; m < fractions.length; m++) {
    const fraction = fractions[m];
    if (fraction <= begin[met]) continue;
    if (fraction >= everReached) {
      times[m] = Infinity;
      continue;
    }
    places.push(m);
    goals.push(
      fraction <= everReached / 2 ? { value: "met", level: fraction } : { value: "yet", level: everReached - fraction },
    );
  }
  if (goals.length > 0) {
    const masks = { met: new Float64Array(met + 1), yet, flow: rateIn };
    masks.met[met] = 1;
    const found = yield* passageQuantiles(stopped, begin, masks, goals);
    if (!found) throw new Problem("tooMuchWork", { states: generator.size });
    found.forEach((time, g) => (times[places[g]] = time));
  }
  return { times, everReached };
}
