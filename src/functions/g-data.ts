import { cellsFrom } from "../cells/answer";
import { readFlag, type Argument } from "../cells/argument";
import { readCounts } from "../cells/counts";
import { generatorValues } from "../cells/generator-cells";
import { readLog } from "../cells/log";
import { NOT_NEGATIVE, readNumber, readNumbers } from "../cells/numbers";
import { readProbabilities } from "../cells/probabilities";
import { readStart, readStartIfGiven } from "../cells/start";
import { readStates } from "../cells/states";
import { availabilityBandSteps } from "../chain/availability-band";
import { fromCounts as chainFromCounts } from "../chain/counts";
import { embeddingGapSteps, generatorFromProbabilitySteps } from "../chain/from-probability";
import { fromLog as chainFromLog } from "../chain/log";
import { Problem } from "../chain/problem";
import { rateInterval as intervalOfRate } from "../chain/rate-interval";
import type { RateTable } from "../table/rate-table";
import { ask, readOnce } from "./asking";
import { square } from "./shapes";

// Section G: rates from data, and how sure they are

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

/**
 * Band of the share in the up states that counted jumps leave open: lower end, median, upper end of seeded draws.
 * @customfunction AVAILABILITYBAND
 * @cancelable
 * @param counts Number of jumps: from-rows by to-columns with a blank diagonal, or a list of from, to, count.
 * @param timeInState Time observed in each state, in a row or column, in the table's order.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state.
 * @param [start] A state by name or number, or one probability for each state; at a time the first state when left out.
 * @param [time] One time, 0 or more; the long run when left out, but time 0 when it points at a blank cell.
 * @param [confidence] Between 0 and 1; 0.9 when left out.
 * @param [draws] Number of draws; 2,000 when left out.
 * @param [seed] A whole number, 0 or more; 1 when left out. The same seed gives the same figures.
 * @returns {any[][]} One row: lower end, median, upper end.
 */
export function availabilityBand(
  counts: any[][],
  timeInState: any[][],
  up: any[][],
  start?: any[][],
  time?: any[][],
  confidence?: any[][],
  draws?: any[][],
  seed?: any[][],
): any[][] {
  const states = countsIn(counts);
  const times = readNumbers(timeInState, "timeInState", NOT_NEGATIVE).values;
  const working = readStates(up, "up", states);
  const at = time ? readNumber(time, "time", NOT_NEGATIVE) : undefined;
  const options = {
    start: at === undefined ? readStartIfGiven(start ?? null, states) : readStart(start ?? null, states),
    time: at,
    confidence: readNumber(confidence ?? null, "confidence", { above: 0, below: 1 }, 0.9),
    draws: readNumber(draws ?? null, "draws", { least: 1, most: 1_000_000, whole: true }, 2000),
    seed: readNumber(seed ?? null, "seed", SEED, 1),
  };
  return ask(states, () => availabilityBandSteps(states, times, working, options), ({ lower, median, upper }) => cellsFrom([lower, median, upper], 1, 3));
}

/** Seeds that a double holds exactly. */
export const SEED = { least: 0, most: Number.MAX_SAFE_INTEGER, whole: true };

function countsIn(counts: Argument): RateTable {
  if (counts === null) throw new Problem("argumentMissing", { argument: "counts" });
  return readOnce("counts", counts, (cells) => {
    const table = readCounts(cells);
    return { value: table, bytes: 400 + 120 * table.generator.arrowCount + 64 * table.size };
  });
}
