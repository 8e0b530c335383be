import type { Generator } from "./generator";
import { Problem } from "./problem";
import { Random } from "./random";

export interface SamplePath {
  /** Time of each entry, the first 0, all before the horizon. */
  readonly times: number[];
  /** State entered, from 0. */
  readonly states: number[];
}

/**
 * What might a history look like?
 *
 * One simulated path: the stay in i is exponential with rate q_i, the next state j has probability q_ij / q_i.
 *
 * @param generator - the chain, n states
 * @param start - distribution at time 0
 * @param horizon - ≥ 0
 * @param seed - whole number; the same seed gives the same path, on every machine
 * @param longest - most entries allowed
 * @returns entries in the order of time, the first at 0
 * @throws `pathTooLong` {longest, horizon}
 *
 * *Method*: direct simulation (common practice) with the generator of `random.ts`: one uniform number for the start, then per
 * jump one exponential number for the stay and one uniform number for the next state, by the running sum of the row.
 *
 * @example samplePath(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 1]]), Float64Array.of(1, 0), 0, 1, 10) // { times: [0], states: [0] }
 */
export function samplePath(
  generator: Generator, start: Float64Array, horizon: number, seed: number, longest: number,
): SamplePath {
  const random = new Random(seed);
  let state = pick(random.uniform(), start, 0, start.length);
  let time = 0;
  const times = [0];
  const states = [state];
  for (;;) {
    const begin = generator.rowStart[state];
    const end = generator.rowStart[state + 1];
    if (begin === end) break;
    time += random.exponential() / generator.exitRate[state];
    const next = pick(random.uniform() * generator.exitRate[state], generator.rate, begin, end);
    if (!(time < horizon)) break;
    if (times.length >= longest) throw new Problem("pathTooLong", { longest, horizon });
    state = generator.toState[next];
    times.push(time);
    states.push(state);
  }
  return { times, states };
}

/** The position at which the running sum of positive weights passes `level`; the last positive one at the latest. */
function pick(level: number, weights: Float64Array, begin: number, end: number): number {
  let sum = 0;
  let last = begin;
  for (let p = begin; p < end; p++) {
    if (weights[p] === 0) continue;
    last = p;
    sum += weights[p];
    if (level < sum) return p;
  }
  return last;
}
