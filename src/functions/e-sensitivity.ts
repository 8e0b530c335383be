import { cellsFrom } from "../cells/answer";
import { readJumpCosts } from "../cells/matrix";
import { NOT_NEGATIVE, readNumber, readNumbers, readStateCosts, SEED } from "../cells/numbers";
import { readStart, readStartIfGiven } from "../cells/start";
import { readState, readStates } from "../cells/states";
import { readTargets } from "../cells/targets";
import { availabilityBandSteps } from "../chain/availability-band";
import { costElasticitySteps, meanTimeElasticitySteps, shareElasticitySteps } from "../chain/elasticity";
import { Problem } from "../chain/problem";
import { rateForGoalSteps } from "../chain/rate-for-goal";
import { shareElasticityAtSteps } from "../chain/transition-derivative";
import { ask, countsIn, tableIn } from "./asking";
import { square } from "./shapes";

// Section E: which rate matters, and how sure?

/**
 * Percent change of the share in the up states for one percent more of each rate, in the long run or at a time.
 * @customfunction ELASTICITY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state.
 * @param [start] A state by name or number, or one probability for each state; at a time the first state when left out.
 * @param [time] One time, 0 or more; the long run when left out, but time 0 when it points at a blank cell.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} From-rows by to-columns; 0 where there is no arrow.
 */
export function elasticity(rates: any[][], up: any[][], start?: any[][], time?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const working = readStates(up, "up", states);
  const shape = square(states, headings ?? null);
  if (!time) {
    const begin = readStartIfGiven(start ?? null, states);
    return ask(states, () => shareElasticitySteps(states.generator, working, begin), shape);
  }
  const begin = readStart(start ?? null, states);
  const at = readNumber(time, "time", NOT_NEGATIVE);
  return ask(states, () => shareElasticityAtSteps(states.generator, working, begin, at), shape);
}

/**
 * Percent change of the mean time until a target is met for one percent more of each rate.
 * @customfunction MEANTIMEELASTICITY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param targets The states waited for: names, numbers, or one TRUE/FALSE for each state; the absorbing states when left out.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} From-rows by to-columns; 0 where there is no arrow.
 */
export function meanTimeElasticity(rates: any[][], start: any[][], targets: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const goal = readTargets(targets, states);
  return ask(states, () => meanTimeElasticitySteps(states.generator, begin, goal), square(states, headings ?? null));
}

/**
 * Percent change of the long-run cost per time unit for one percent more of each rate.
 * @customfunction COSTELASTICITY
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param stateCosts One cost per time unit for each state, in a row or column; negative for income.
 * @param [jumpCosts] Cost each time an arrow is used: as many rows and columns as states, headings allowed.
 * @param [start] Needed only where the long run depends on it: a state by name or number, or one probability for each state.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} From-rows by to-columns; 0 where there is no arrow.
 */
export function costElasticity(rates: any[][], stateCosts: any[][], jumpCosts?: any[][], start?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const perState = readStateCosts(stateCosts, "stateCosts", states);
  const perJump = readJumpCosts(jumpCosts ?? null, states);
  const begin = readStartIfGiven(start ?? null, states);
  return ask(states, () => costElasticitySteps(states.generator, perState, perJump, begin), square(states, headings ?? null));
}

/**
 * The rate of one arrow at which the share in the up states equals a goal; the arrow need not exist yet.
 * @customfunction RATEFORGOAL
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param from The arrow's from-state, by name or number.
 * @param to The arrow's to-state, by name or number.
 * @param up The states that count as up: names, numbers, or one TRUE/FALSE for each state.
 * @param goal The share to be met, 0 to 1.
 * @param [start] A state by name or number, or one probability for each state; at a time the first state when left out.
 * @param [time] One time, 0 or more; the long run when left out, but time 0 when it points at a blank cell.
 * @returns The rate; the solution nearest to the present rate where there are several.
 */
export function rateForGoal(rates: any[][], from: any[][], to: any[][], up: any[][], goal: any[][], start?: any[][], time?: any[][]): any {
  const states = tableIn(rates);
  const tail = readState(from, "from", states);
  const head = readState(to, "to", states);
  if (tail === head) throw new Problem("sameState", { argument: "to" });
  const working = readStates(up, "up", states);
  const share = readNumber(goal, "goal", { least: 0, most: 1 });
  const at = time ? readNumber(time, "time", NOT_NEGATIVE) : undefined;
  const begin = at === undefined ? readStartIfGiven(start ?? null, states) : readStart(start ?? null, states);
  return ask(states, () => rateForGoalSteps(states.generator, tail, head, working, share, begin, at), (rate) => rate);
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
