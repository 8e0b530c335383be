import { checkSpill } from "../cells/answer";
import type { Argument } from "../cells/argument";
import { readJumpCosts } from "../cells/matrix";
import { NOT_NEGATIVE, readNumber, readNumbers, readStateCosts, readTimes } from "../cells/numbers";
import { readResets } from "../cells/probabilities";
import { readStart, readStartIfGiven } from "../cells/start";
import { labelsOf, readStates } from "../cells/states";
import { readTargets } from "../cells/targets";
import { absorbingStates } from "../chain/classes";
import { costOverSteps, costRateSteps, costUntilSteps } from "../chain/cost";
import { inspectionSharesSteps } from "../chain/inspection";
import { failureCountSteps, jumpCountsSteps } from "../chain/jumps";
import { occupanciesSteps } from "../chain/occupancy";
import { phasedDistributionsSteps, phasedOccupanciesSteps } from "../chain/phased";
import { Problem } from "../chain/problem";
import type { Steps } from "../chain/steps";
import { readStack } from "../table/stack";
import { ask, tableIn } from "./asking";
import { asGiven, joined, row, square, table } from "./shapes";

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

/**
 * Expected number of times each arrow is used from now until the horizon.
 * @customfunction JUMPS
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param horizon One length of time, 0 or more, in the rates' time unit; a blank cell counts as 0.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} From-rows by to-columns; the diagonal is 0.
 */
export function jumps(rates: any[][], start: any[][], horizon: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const until = readNumber(horizon, "horizon", NOT_NEGATIVE);
  return ask(states, () => jumpCountsSteps(states.generator, begin, until), square(states, headings ?? null));
}

/**
 * Expected number of failures, jumps from an up state to one that is not, until each horizon.
 * @customfunction FAILURES
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param horizon A length of time or a range of them, 0 or more, in the rates' time unit; blank cells count as 0.
 * @returns {any[][]} Numbers in the shape of the horizons.
 */
export function failures(rates: any[][], up: any[][], start: any[][], horizon: any[][]): any[][] {
  const states = tableIn(rates);
  const working = readStates(up, "up", states);
  const begin = readStart(start, states);
  const asked = readTimes(horizon, "horizon");
  const shape = asGiven(asked);
  return ask(states, () => each(asked.values, (until) => failureCountSteps(states.generator, working, begin, until)), shape);
}

/**
 * Expected cost from now until each horizon: time in states, jumps, both if wanted discounted.
 * @customfunction COST
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param horizon A length of time or a range of them, 0 or more, in the rates' time unit; blank cells count as 0.
 * @param stateCosts One cost per time unit for each state, in a row or column; negative for income.
 * @param [jumpCosts] Cost each time an arrow is used: as many rows and columns as states, headings allowed.
 * @param [discount] Continuous discount rate per time unit, 0 or more; none when left out or blank.
 * @returns {any[][]} Costs in the shape of the horizons.
 */
export function cost(rates: any[][], start: any[][], horizon: any[][], stateCosts: any[][], jumpCosts?: any[][], discount?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const asked = readTimes(horizon, "horizon");
  const perState = readStateCosts(stateCosts, "stateCosts", states);
  const perJump = readJumpCosts(jumpCosts ?? null, states);
  const rate = readNumber(discount ?? null, "discount", NOT_NEGATIVE, 0);
  const shape = asGiven(asked);
  return ask(states, () => each(asked.values, (until) => costOverSteps(states.generator, begin, until, perState, perJump, rate)), shape);
}

/**
 * Expected cost until the first target is met, the jump that meets it included.
 * @customfunction COSTUNTIL
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param stateCosts One cost per time unit for each state, in a row or column; negative for income.
 * @param [targets] The states that end it; when left out the absorbing states, and without any it goes on for ever and needs a discount.
 * @param [jumpCosts] Cost each time an arrow is used: as many rows and columns as states, headings allowed.
 * @param [discount] Continuous discount rate per time unit, 0 or more; none when left out or blank.
 * @returns The expected cost.
 */
export function costUntil(rates: any[][], start: any[][], stateCosts: any[][], targets?: any[][], jumpCosts?: any[][], discount?: any[][]): any {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const perState = readStateCosts(stateCosts, "stateCosts", states);
  const goal = targets ? readTargets(targets, states) : absorbingStates(states.generator);
  const perJump = readJumpCosts(jumpCosts ?? null, states);
  const rate = readNumber(discount ?? null, "discount", NOT_NEGATIVE, 0);
  if (rate === 0 && !goal.includes(1)) throw new Problem("costWithoutEnd", {}, "noAnswer");
  return ask(states, () => costUntilSteps(states.generator, begin, perState, goal, perJump, rate), (value) => value);
}

/**
 * Long-run cost per time unit.
 * @customfunction COSTRATE
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param stateCosts One cost per time unit for each state, in a row or column; negative for income.
 * @param [jumpCosts] Cost each time an arrow is used: as many rows and columns as states, headings allowed.
 * @param [start] Needed only where the long run depends on it: a state by name or number, or one probability for each state.
 * @returns The expected cost per time unit.
 */
export function costRate(rates: any[][], stateCosts: any[][], jumpCosts?: any[][], start?: any[][]): any {
  const states = tableIn(rates);
  const perState = readStateCosts(stateCosts, "stateCosts", states);
  const perJump = readJumpCosts(jumpCosts ?? null, states);
  const begin = readStartIfGiven(start ?? null, states);
  return ask(states, () => costRateSteps(states.generator, perState, perJump, begin), (value) => value);
}

/**
 * Probability of being in each state (columns) at the end of each phase (rows), when every phase has rates of its own.
 * @customfunction PHASED
 * @cancelable
 * @param ratesStack One square rate table for each phase, of the same states, stacked on each other; headings in all or in none.
 * @param durations How long each phase lasts, in the rates' time unit; as many as there are tables.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param [headings] TRUE adds the state names on top and the end times on the left.
 * @returns {any[][]} One row for each phase, one column for each state.
 */
export function phased(ratesStack: any[][], durations: any[][], start: any[][], headings?: any[][]): any[][] {
  const { states, generators, lengths, begin } = phases(ratesStack, durations, start);
  let end = 0;
  const ends = () => [...lengths].map((length) => (end += length));
  const shape = table(lengths.length, states.size, headings ?? null, () => ({ top: labelsOf(states), left: ends() }));
  return ask(states, () => phasedDistributionsSteps(generators, lengths, begin), (rows) => shape(joined(rows)));
}

/**
 * Expected time in each state (columns) during each phase (rows), when every phase has rates of its own.
 * @customfunction PHASEDOCCUPANCY
 * @cancelable
 * @param ratesStack One square rate table for each phase, of the same states, stacked on each other; headings in all or in none.
 * @param durations How long each phase lasts, in the rates' time unit; as many as there are tables.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param [headings] TRUE adds the state names on top.
 * @returns {any[][]} One row for each phase, one column for each state.
 */
export function phasedOccupancy(ratesStack: any[][], durations: any[][], start: any[][], headings?: any[][]): any[][] {
  const { states, generators, lengths, begin } = phases(ratesStack, durations, start);
  const shape = table(lengths.length, states.size, headings ?? null, () => ({ top: labelsOf(states), left: null }));
  return ask(states, () => phasedOccupanciesSteps(generators, lengths, begin), (rows) => shape(joined(rows)));
}

/**
 * Long-run share of time in each state when it is inspected, and put right, at fixed intervals.
 * @customfunction INSPECTION
 * @cancelable
 * @param rates Rate table between inspections: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param resets For each state found (row) the probability of each state left behind (column); a blank row changes nothing. Headings allowed.
 * @param interval Time from one inspection to the next, above 0, in the rates' time unit.
 * @param [headings] TRUE adds the state names on top.
 * @returns {any[][]} One row with a share for each state, averaged over time.
 */
export function inspection(rates: any[][], resets: any[][], interval: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const left = readResets(resets, states);
  const every = readNumber(interval, "interval", { above: 0 });
  return ask(states, () => inspectionSharesSteps(states.generator, left, every), row(states, headings ?? null));
}

function phases(ratesStack: Argument, durations: Argument, start: Argument) {
  if (ratesStack === null) throw new Problem("argumentMissing", { argument: "ratesStack" });
  const { values: lengths } = readNumbers(durations, "durations", NOT_NEGATIVE);
  checkSpill(lengths.length, 1);
  const tables = readStack(ratesStack, lengths.length);
  return { states: tables[0], generators: tables.map((one) => one.generator), lengths, begin: readStart(start, tables[0]) };
}

/** One question for each of the horizons. */
function* each(horizons: Float64Array, question: (horizon: number) => Steps<number>): Steps<Float64Array> {
  const values = new Float64Array(horizons.length);
  for (let k = 0; k < values.length; k++) values[k] = yield* question(horizons[k]);
  return values;
}
