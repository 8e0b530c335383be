import { readFlag } from "../cells/argument";
import { readNumbers, readTimes } from "../cells/numbers";
import { readStart } from "../cells/start";
import { labelsOf } from "../cells/states";
import { readTargets } from "../cells/targets";
import { absorptionProbabilitySteps, absorptionSdSteps, meanAbsorptionSteps, timeBeforeSteps } from "../chain/absorption";
import { hazardSteps, reachedSteps, survivalSteps } from "../chain/first-passage";
import { percentilesSteps } from "../chain/percentile";
import { Problem } from "../chain/problem";
import { quasiStationarySteps } from "../chain/quasi-stationary";
import type { RateTable } from "../table/rate-table";
import { ask, tableIn } from "./asking";
import { asGiven, column, row, table } from "./shapes";

// Section B: how long until?

/**
 * Mean time from each state until the first target is met.
 * @customfunction MEANABSORPTION
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [targets] The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param [headings] TRUE adds the state names on the left.
 * @returns {any[][]} One column with a mean time for each state; #N/A where a target is not met with certainty.
 */
export function meanAbsorption(rates: any[][], targets?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const goal = readTargets(targets ?? null, states);
  const shape = column(states, headings ?? null);
  return ask(states, () => meanAbsorptionSteps(states.generator, goal), (means) => shape(means, infiniteFrom(states)));
}

/**
 * Standard deviation of the time from each state until the first target is met.
 * @customfunction ABSORPTIONSD
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [targets] The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param [headings] TRUE adds the state names on the left.
 * @returns {any[][]} One column with a standard deviation for each state; #N/A where a target is not met with certainty.
 */
export function absorptionSd(rates: any[][], targets?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const goal = readTargets(targets ?? null, states);
  const shape = column(states, headings ?? null);
  return ask(states, () => absorptionSdSteps(states.generator, goal), (deviations) => shape(deviations, infiniteFrom(states)));
}

/**
 * Probability, from each state (rows), that this target (columns) is the first to be met.
 * @customfunction ABSORPTIONPROB
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [targets] The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param [headings] TRUE adds the targets' names on top and the state names on the left.
 * @returns {any[][]} One row for each state, one column for each target in the table's order.
 */
export function absorptionProb(rates: any[][], targets?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const goal = readTargets(targets ?? null, states);
  const count = goal.reduce((sum, one) => sum + one, 0);
  const shape = table(states.size, count, headings ?? null, () => {
    const labels = labelsOf(states);
    return { top: labels.filter((_, i) => goal[i] === 1), left: labels };
  });
  return ask(states, () => absorptionProbabilitySteps(states.generator, goal), ({ probability }) => shape(probability));
}

/**
 * Probability that no target has been met by each time.
 * @customfunction SURVIVAL
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param targets The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param times A time or a range of times, 0 or more, in the rates' time unit; blank cells count as 0.
 * @returns {any[][]} Probabilities in the shape of the times.
 */
export function survival(rates: any[][], start: any[][], targets: any[][], times: any[][]): any[][] {
  return passage(survivalSteps, rates, start, targets, times);
}

/**
 * Probability that a target has been met by each time, exact however small.
 * @customfunction REACHED
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param targets The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param times A time or a range of times, 0 or more, in the rates' time unit; blank cells count as 0.
 * @returns {any[][]} Probabilities in the shape of the times.
 */
export function reached(rates: any[][], start: any[][], targets: any[][], times: any[][]): any[][] {
  return passage(reachedSteps, rates, start, targets, times);
}

/**
 * Rate at which a target is being met at each time, given that none has been met so far.
 * @customfunction HAZARD
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param targets The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param times A time or a range of times, 0 or more, in the rates' time unit; blank cells count as 0.
 * @returns {any[][]} Rates per time unit in the shape of the times; #N/A where a target has been met for certain.
 */
export function hazard(rates: any[][], start: any[][], targets: any[][], times: any[][]): any[][] {
  return passage(hazardSteps, rates, start, targets, times, (time) => new Problem("survivalGone", { time }, "noAnswer"));
}

/**
 * Time by which a fraction of many has met a target.
 * @customfunction PERCENTILE
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param targets The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param fractions A fraction or a range of fractions, from 0 to below 1; blank cells count as 0.
 * @returns {any[][]} Times in the shape of the fractions; #N/A where so many never meet a target.
 */
export function percentile(rates: any[][], start: any[][], targets: any[][], fractions: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const goal = readTargets(targets, states);
  const asked = readNumbers(fractions, "fractions", { least: 0, below: 1 });
  const shape = asGiven(asked);
  return ask(
    states,
    () => percentilesSteps(states.generator, begin, goal, asked.values),
    ({ times, everReached }) =>
      shape(times, (i, j) => new Problem("percentileNeverMet", { fraction: asked.values[i * asked.columns + j], everReached }, "noAnswer")),
  );
}

/**
 * Expected time in each state before the first target is met.
 * @customfunction TIMEBEFORE
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param [targets] The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param [headings] TRUE adds the state names on top.
 * @returns {any[][]} One row with a time for each state, 0 in targets; #N/A where it is infinite.
 */
export function timeBefore(rates: any[][], start: any[][], targets?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const goal = readTargets(targets ?? null, states);
  const shape = row(states, headings ?? null);
  const infinite = (_: number, state: number) => new Problem("timeInfinite", { state, names: labelsOf(states) }, "noAnswer");
  return ask(states, () => timeBeforeSteps(states.generator, begin, goal), (times) => shape(times, infinite));
}

/**
 * Shares of the states given that no target has been met so far, after a long time.
 * @customfunction QUASISTATIONARY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [targets] The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param [headings] TRUE adds the state names on top and the decay rate as a last column.
 * @returns {any[][]} One row with a share for each state, 0 in targets; #N/A where the shares depend on the start.
 */
export function quasiStationary(rates: any[][], targets?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const goal = readTargets(targets ?? null, states);
  const named = readFlag(headings ?? null, "headings");
  const shape = table(1, states.size + (named ? 1 : 0), headings ?? null, () => ({ top: [...labelsOf(states), "decay rate"], left: null }));
  return ask(states, () => quasiStationarySteps(states.generator, goal), ({ shares, decayRate }) => shape(named ? [...shares, decayRate] : shares));
}

/** Why a mean from a state does not exist. */
function infiniteFrom(states: RateTable): (state: number) => Problem {
  const names = labelsOf(states);
  return (state) => new Problem("meanInfinite", { state, names }, "noAnswer");
}

/** A question about the first passage, at each of the times. */
function passage(
  question: typeof survivalSteps,
  rates: any[][],
  start: any[][],
  targets: any[][],
  times: any[][],
  missing?: (time: number) => Problem,
): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const goal = readTargets(targets, states);
  const asked = readTimes(times, "times");
  const shape = asGiven(asked);
  return ask(
    states,
    () => question(states.generator, begin, goal, asked.values),
    (values) => shape(values, missing && ((i, j) => missing(asked.values[i * asked.columns + j]))),
  );
}
