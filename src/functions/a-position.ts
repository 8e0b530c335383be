import { NOT_NEGATIVE, readNumber, readTimes } from "../cells/numbers";
import { readStart, readStartIfGiven } from "../cells/start";
import { labelsOf } from "../cells/states";
import { distributionsSteps } from "../chain/distribution";
import { stationarySharesSteps } from "../chain/stationary";
import { transitionMatrixSteps } from "../chain/transition";
import { ask, tableIn } from "./asking";
import { joined, row, square, table } from "./shapes";

// Section A: where will it be?

/**
 * Probability of being in each state (columns) after a time, for each state at the start (rows).
 * @customfunction TRANSITION
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param time One time, 0 or more, in the rates' time unit; a blank cell counts as 0.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} One row and one column for each state.
 */
export function transition(rates: any[][], time: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const at = readNumber(time, "time", NOT_NEGATIVE);
  return ask(states, () => transitionMatrixSteps(states.generator, at), square(states, headings ?? null));
}

/**
 * Probability of being in each state (columns) at each time (rows), from a start.
 * @customfunction DISTRIBUTION
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param times A time or a range of times, 0 or more, in the rates' time unit; blank cells count as 0.
 * @param [headings] TRUE adds the state names on top and the times on the left.
 * @returns {any[][]} One row for each time, one column for each state.
 */
export function distribution(rates: any[][], start: any[][], times: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const { values } = readTimes(times, "times");
  const shape = table(values.length, states.size, headings ?? null, () => ({ top: labelsOf(states), left: [...values] }));
  return ask(states, () => distributionsSteps(states.generator, begin, values), (rows) => shape(joined(rows)));
}

/**
 * Long-run share of time in each state.
 * @customfunction STATIONARY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [start] Needed only where the long run depends on it: a state by name or number, or one probability for each state.
 * @param [headings] TRUE adds the state names on top.
 * @returns {any[][]} One row with a share for each state.
 */
export function stationary(rates: any[][], start?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStartIfGiven(start ?? null, states);
  return ask(states, () => stationarySharesSteps(states.generator, begin), row(states, headings ?? null));
}
