import { cellsFrom } from "../cells/answer";
import { readTimes } from "../cells/numbers";
import { readStart, readStartIfGiven } from "../cells/start";
import { labelsOf, readStates } from "../cells/states";
import { availabilityAtSteps, intervalAvailabilitySteps, longRunAvailabilitySteps, upDownSteps } from "../chain/availability";
import { communicatingClasses } from "../chain/classes";
import { flowsSteps } from "../chain/jumps";
import { Problem } from "../chain/problem";
import { ask, tableIn } from "./asking";
import { asGiven, square } from "./shapes";

// Section D: service levels

/**
 * Probability of being in one of the up states: at each time, or in the long run when no time is given.
 * @customfunction AVAILABILITY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state. For a small unavailability name the down states instead.
 * @param [start] A state by name or number, or one probability for each state; at times the first state when left out.
 * @param [times] A time or a range of times, 0 or more; the long run when left out, but time 0 when it points at a blank cell.
 * @returns {any[][]} Probabilities in the shape of the times, or the long-run share.
 */
export function availability(rates: any[][], up: any[][], start?: any[][], times?: any[][]): any[][] {
  const states = tableIn(rates);
  const working = readStates(up, "up", states);
  if (!times) {
    const begin = readStartIfGiven(start ?? null, states);
    return ask(states, () => longRunAvailabilitySteps(states.generator, working, begin), (share) => [[share]]);
  }
  const begin = readStart(start ?? null, states);
  const asked = readTimes(times, "times");
  const shape = asGiven(asked);
  return ask(states, () => availabilityAtSteps(states.generator, working, begin, asked.values), shape);
}

/**
 * Expected share of the time from now until each horizon spent in the up states.
 * @customfunction INTERVALAVAILABILITY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param horizon A length of time or a range of them, 0 or more, in the rates' time unit; at 0 (or blank) the start's own share.
 * @returns {any[][]} Shares in the shape of the horizons.
 */
export function intervalAvailability(rates: any[][], up: any[][], start: any[][], horizon: any[][]): any[][] {
  const states = tableIn(rates);
  const working = readStates(up, "up", states);
  const begin = readStart(start, states);
  const asked = readTimes(horizon, "horizon");
  const shape = asGiven(asked);
  return ask(states, () => intervalAvailabilitySteps(states.generator, working, begin, asked.values), shape);
}

/**
 * Seven figures of something that fails and is repaired: availability, failures, mean up and down times, first failure.
 * @customfunction UPDOWN
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state.
 * @param [start] Where the wait for the first failure begins; the first up state when left out.
 * @returns {any[][]} Seven rows of label and figure; #N/A where a figure does not exist.
 */
export function upDown(rates: any[][], up: any[][], start?: any[][]): any[][] {
  const states = tableIn(rates);
  const working = readStates(up, "up", states);
  const begin = readStartIfGiven(start ?? null, states);
  return ask(
    states,
    () => upDownSteps(states.generator, working, begin),
    (found) => {
      const values = [
        found.availability,
        found.unavailability,
        found.failureRate,
        found.meanUpTime,
        found.meanDownTime,
        found.meanTimeBetweenFailures,
        found.meanTimeToFirstFailure,
      ];
      const missing = (figure: number): Problem => {
        if (figure === 6) return new Problem("failureNotCertain", {}, "noAnswer");
        if (!Number.isNaN(found.availability)) return new Problem("noFailures", {}, "noAnswer");
        const { classes, closed } = communicatingClasses(states.generator);
        return new Problem("severalClosedClasses", { classes: classes.filter((_, c) => closed[c]).map((one) => [...one]), names: labelsOf(states) }, "noAnswer");
      };
      return cellsFrom(values, 7, 1, missing).map((cells, figure) => [UP_DOWN_LABELS[figure], ...cells]);
    },
  );
}

const UP_DOWN_LABELS = [
  "availability",
  "unavailability",
  "failures per time unit",
  "mean up time",
  "mean down time",
  "mean time between failures",
  "mean time to first failure",
];

/**
 * Long-run number of jumps per time unit on each arrow.
 * @customfunction FLOWS
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [start] Needed only where the long run depends on it: a state by name or number, or one probability for each state.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} From-rows by to-columns: share of the from-state times the rate.
 */
export function flows(rates: any[][], start?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStartIfGiven(start ?? null, states);
  return ask(states, () => flowsSteps(states.generator, begin), square(states, headings ?? null));
}
