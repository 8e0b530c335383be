import { generatorValues } from "../cells/generator-cells";
import { ask, tableIn } from "./asking";
import { square } from "./shapes";

// Section F: building a table

/**
 * The table with its diagonal worked out: minus the exits of each row.
 * @customfunction GENERATOR
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} One row and one column for each state.
 */
export function generator(rates: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const shape = square(states, headings ?? null);
  return ask(states, () => generatorValues(states.generator), shape);
}
