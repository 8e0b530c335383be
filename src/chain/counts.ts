import { Generator, type Arrow } from "./generator";
import { nameOf, namesOf, type Built, type Named } from "./named";
import { Problem } from "./problem";

/**
 * Rates from counted jumps.
 *
 * q_ij = jumps observed from i to j ÷ time observed in i: the maximum likelihood estimate.
 *
 * @param counts - the counts as a chain: the "rate" of an arrow is its number of jumps
 * @param timeInState - n observed times, in the order of the states, ≥ 0
 * @returns the estimated chain
 * @throws `timesNotOnePerState` {times, states}; `timeInStateNegative` {state, name, time}; `countsWithoutTime` {state, name, count}
 *
 * *Method*: occurrence over exposure (Billingsley 1961, common practice). *Accuracy*: `test/reference/checks-chain.test.ts`, F06.
 *
 * @example fromCounts({ generator: Generator.fromArrows(2, [[0, 1, 6]]), names: null }, [300, 0]).generator.rateOf(0, 1) // 0.02
 */
export function fromCounts(counts: Named, timeInState: ArrayLike<number>): Built {
  const { generator, names } = counts;
  checkExposure(counts, timeInState);
  const arrows: Arrow[] = [];
  for (const [from, to, count] of generator.arrows()) arrows.push([from, to, count / timeInState[from]]);
  return { generator: Generator.fromArrows(generator.size, arrows), names: namesOf({ generator, names }) };
}

/** Refuses exposures that do not fit the counts. */
export function checkExposure({ generator, names }: Named, timeInState: ArrayLike<number>): void {
  const n = generator.size;
  if (timeInState.length !== n) throw new Problem("timesNotOnePerState", { times: timeInState.length, states: n });
  for (let state = 0; state < n; state++) {
    const time = timeInState[state];
    const name = nameOf(names, state);
    if (!(time >= 0 && time < Infinity)) throw new Problem("timeInStateNegative", { state, name, time });
    if (time === 0 && generator.exitRate[state] > 0)
      throw new Problem("countsWithoutTime", { state, name, count: generator.exitRate[state] });
  }
}
