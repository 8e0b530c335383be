import { readTimes } from "../cells/numbers";
import { readStart } from "../cells/start";
import { labelsOf } from "../cells/states";
import { occupanciesSteps } from "../chain/occupancy";
import { ask, tableIn } from "./asking";
import { joined, table } from "./shapes";

// Section C: over a period

/**
 * Expected time in each state (columns) from now until each horizon (rows).
 * @customfunction OCCUPANCY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param horizon A length of time or a range of them, 0 or more, in the rates' time unit; blank cells count as 0.
 * @param [headings] TRUE adds the state names on top.
 * @returns {any[][]} One row for each horizon, one column for each state.
 */
export function occupancy(rates: any[][], start: any[][], horizon: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const { values } = readTimes(horizon, "horizon");
  const shape = table(values.length, states.size, headings ?? null, () => ({ top: labelsOf(states), left: null }));
  return ask(states, () => occupanciesSteps(states.generator, begin, values), (rows) => shape(joined(rows)));
}
