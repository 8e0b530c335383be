import { cellsFrom } from "../cells/answer";
import { readFlag } from "../cells/argument";
import { generatorValues } from "../cells/generator-cells";
import { readLog } from "../cells/log";
import { NOT_NEGATIVE, readNumber, readNumbers } from "../cells/numbers";
import { readProbabilities } from "../cells/probabilities";
import { fromCounts as chainFromCounts } from "../chain/counts";
import { embeddingGapSteps, generatorFromProbabilitySteps } from "../chain/from-probability";
import { fromLog as chainFromLog } from "../chain/log";
import { rateInterval as intervalOfRate } from "../chain/rate-interval";
import { ask, countsIn } from "./asking";
import { square } from "./shapes";

// Section G: rates from data

/**
 * Rates that give a table of one-period transition probabilities, or the nearest rates where none give it exactly.
 * @customfunction FROMPROBABILITY
 * @cancelable
 * @param probabilities From-rows by to-columns, each row summing to 1, headings allowed.
 * @param period The table's period, above 0, in the time unit that the rates shall have.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} The rate table, its diagonal worked out.
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

/**
 * Rates from counted jumps and observed times: jumps ÷ time in the from-state.
 * @customfunction FROMCOUNTS
 * @param counts Number of jumps: from-rows by to-columns with a blank diagonal, or a list of from, to, count.
 * @param timeInState Time observed in each state, in a row or column, in the table's order.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} The rate table, its diagonal worked out.
 */
export function fromCounts(counts: any[][], timeInState: any[][], headings?: any[][]): any[][] {
  const states = countsIn(counts);
  const times = readNumbers(timeInState, "timeInState", NOT_NEGATIVE).values;
  const shape = square(states, headings ?? null);
  return ask(states, () => chainFromCounts(states, times), ({ generator }) => shape(generatorValues(generator)));
}

/**
 * Rates from a log of which unit entered which state when.
 * @customfunction FROMLOG
 * @param log Three columns: unit, time, state entered, in any order of rows; a heading row is allowed.
 * @param end Time at which the observation of all units ends, such as today's date.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} The rate table, its diagonal worked out, states in order of first appearance.
 */
export function fromLog(log: any[][], end: any[][], headings?: any[][]): any[][] {
  const entries = readLog(log);
  const until = readNumber(end, "end", {});
  return ask(null, () => chainFromLog(entries, until), (found) => square({ size: found.names.length, names: found.names }, headings ?? null)(generatorValues(found.generator)));
}

/**
 * Exact confidence interval of a rate that was estimated from a number of events in an observed time.
 * @customfunction RATEINTERVAL
 * @param count Number of events, 0 or more.
 * @param exposure Time observed, above 0.
 * @param [confidence] Between 0 and 1; 0.9 when left out.
 * @param [failureTruncated] TRUE if the observation ended at the last event.
 * @returns {any[][]} One row: lower bound, estimate, upper bound.
 */
export function rateInterval(count: any[][], exposure: any[][], confidence?: any[][], failureTruncated?: any[][]): any[][] {
  const events = readNumber(count, "count", { least: 0, whole: true });
  const time = readNumber(exposure, "exposure", { above: 0 });
  const sure = readNumber(confidence ?? null, "confidence", { above: 0, below: 1 }, 0.9);
  const atEvent = readFlag(failureTruncated ?? null, "failureTruncated");
  return ask(null, () => intervalOfRate(events, time, sure, atEvent), ({ lower, estimate, upper }) => cellsFrom([lower, estimate, upper], 1, 3));
}
