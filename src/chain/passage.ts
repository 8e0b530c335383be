import { statesReached, type StateSet } from "./classes";
import { Generator } from "./generator";

/**
 * The chain that stops when it meets a target: the states outside the targets, then one last state for all targets, without
 * exits. What is asked of a first passage is asked of this chain.
 */
export interface Passage {
  readonly generator: Generator;
  /** Probabilities of the stopped chain's states at time 0. */
  readonly start: Float64Array;
  /** Number of the last state, "a target has been met". */
  readonly met: number;
  /** Rate into the targets from each state of the stopped chain. */
  readonly rateIn: Float64Array;
  /** States of the original chain that stand for themselves, by new number. */
  readonly outside: Int32Array;
}

/**
 * Builds the stopped chain of the states that can be met from the start; of a long list that may be few. Rates into several
 * targets from one state are added.
 */
export function passage(generator: Generator, start: Float64Array, targets: StateSet): Passage {
  const reached = statesReached(generator, Uint8Array.from(start, (p) => (p > 0 ? 1 : 0)), targets);
  const number = new Int32Array(generator.size);
  let met = 0;
  for (let i = 0; i < generator.size; i++) if (reached[i] && !targets[i]) number[i] = met++;
  const outside = new Int32Array(met);
  const begin = new Float64Array(met + 1);
  const rateIn = new Float64Array(met + 1);
  const rowStart = new Int32Array(met + 2);
  const toState = new Int32Array(generator.arrowCount + met);
  const rate = new Float64Array(generator.arrowCount + met);
  let arrows = 0;
  for (let i = 0; i < generator.size; i++) {
    if (targets[i]) begin[met] += start[i];
    if (targets[i] || !reached[i]) continue;
    const from = number[i];
    outside[from] = i;
    begin[from] = start[i];
    for (let k = generator.rowStart[i]; k < generator.rowStart[i + 1]; k++) {
      const to = generator.toState[k];
      if (targets[to]) rateIn[from] += generator.rate[k];
      else {
        toState[arrows] = number[to];
        rate[arrows++] = generator.rate[k];
      }
    }
    if (rateIn[from] > 0) {
      toState[arrows] = met;
      rate[arrows++] = rateIn[from];
    }
    rowStart[from + 1] = arrows;
  }
  rowStart[met + 1] = arrows;
  const stopped = Generator.fromRows(met + 1, rowStart, toState.slice(0, arrows), rate.slice(0, arrows));
  return { generator: stopped, start: begin, met, rateIn, outside };
}
