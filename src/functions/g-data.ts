import { generatorValues } from "../cells/generator-cells";
import { readNumber } from "../cells/numbers";
import { readProbabilities } from "../cells/probabilities";
import { embeddingGapSteps, generatorFromProbabilitySteps } from "../chain/from-probability";
import { ask } from "./asking";
import { square } from "./shapes";

// Section G: rates from data

/**
 * Rates that give a table of one-period transition probabilities, or the nearest rates where none give it exactly.
 * @customfunction FROMPROBABILITY
 * @cancelable
 * @param probabilities From-rows by to-columns, each row summing to 1, headings allowed.
 * @param period The table's period, above 0, in the time unit that the rates shall have.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} The rate table with its diagonal worked out.
 */
export function fromProbability(probabilities: any[][], period: any[][], headings?: any[][]): any[][] {
  const given = readProbabilities(probabilities);
  const length = readNumber(period, "period", { above: 0 });
  const shape = square(given, headings ?? null);
  return ask(given, () => generatorFromProbabilitySteps(given.size, given.values, length), ({ generator }) => shape(generatorValues(generator)));
}

/**
 * How far a table of one-period transition probabilities is from what rates can give: the largest difference of an entry.
 * @customfunction EMBEDDINGGAP
 * @cancelable
 * @param probabilities From-rows by to-columns, each row summing to 1, headings allowed.
 * @param period The table's period, above 0.
 * @returns The difference; 0 to rounding where rates give the table exactly.
 */
export function embeddingGap(probabilities: any[][], period: any[][]): any {
  const given = readProbabilities(probabilities);
  const length = readNumber(period, "period", { above: 0 });
  return ask(given, () => embeddingGapSteps(given.size, given.values, length), (gap) => gap);
}
