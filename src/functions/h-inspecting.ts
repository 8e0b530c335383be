import { auditReading } from "../audit/audit";
import { refusal, type Answer } from "../cells/answer";
import type { Argument } from "../cells/argument";
import { readNumber } from "../cells/numbers";
import { findingTexts } from "../cells/sentences/findings";
import { readStart } from "../cells/start";
import { labelsOf } from "../cells/states";
import { communicatingClasses } from "../chain/classes";
import { holdingTimes, jumpChain } from "../chain/jumps";
import { Problem } from "../chain/problem";
import { settlingTimeSteps } from "../chain/settling";
import { read } from "../table/read";
import type { RateTable } from "../table/rate-table";
import { ask, tableIn } from "./asking";
import { column, square, table } from "./shapes";

// Section H: looking into a table

/**
 * Checks a rate table: what is wrong or doubtful, where, and what to do about it.
 * @customfunction CHECK
 * @cancelable
 * @param rates The range to check, headings included, whatever is in it.
 * @param [start] Where the chain starts, if reachability is to be judged from there.
 * @returns {any[][]} One row for each finding: severity, where, finding, what to do; a single row "ok" when there is none.
 */
export function check(rates: any[][], start?: any[][]): any[][] {
  return ask(null, () => findings(rates ?? [], start ?? null), (rows) => rows);
}

function findings(rates: NonNullable<Argument>, start: Argument): Answer {
  try {
    const reading = read(rates);
    const found = auditReading(rates, reading, { start: startFor(reading.table, start) });
    const rows = found.map((finding) => {
      const texts = findingTexts(finding);
      return [texts.severity, texts.where, texts.finding, texts.remedy];
    });
    return rows.length > 0 ? rows : [["ok", "", "", ""]];
  } catch (problem) {
    const { sentence } = refusal(problem instanceof Problem ? problem : new Problem("unexpected", { found: String(problem) }));
    return [["stop", "the range", sentence, "Reduce the range to the table itself."]];
  }
}

/** The start as the audit takes it: what is wrong with it is a finding, too. */
function startFor(states: RateTable | null, start: Argument): Float64Array | Problem | null {
  if (!states || start === null) return null;
  try {
    return readStart(start, states);
  } catch (problem) {
    if (problem instanceof Problem) return problem;
    throw problem;
  }
}

/**
 * Class of each state (states that reach each other share a class) and whether the class is left for good, closed or absorbing.
 * @customfunction CLASSES
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [headings] TRUE adds the state names on the left.
 * @returns {any[][]} One row for each state: class number, and transient, closed or absorbing.
 */
export function classes(rates: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const shape = table(states.size, 2, headings ?? null, () => ({ top: null, left: labelsOf(states) }));
  return ask(
    states,
    () => communicatingClasses(states.generator),
    ({ classOf, classes: members, closed }) => {
      const cells = shape(new Float64Array(2 * states.size));
      cells.forEach((cellRow, state) => {
        const one = classOf[state];
        const kind = !closed[one] ? "transient" : members[one].length === 1 ? "absorbing" : "closed";
        cellRow.splice(cellRow.length - 2, 2, one + 1, kind);
      });
      return cells;
    },
  );
}

/**
 * Probability of each next state at a jump.
 * @customfunction JUMPCHAIN
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} From-rows by to-columns; a state without exits has 1 on the diagonal.
 */
export function nextStates(rates: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const shape = square(states, headings ?? null);
  return ask(states, () => jumpChain(states.generator), shape);
}

/**
 * Mean stay in each state.
 * @customfunction HOLDING
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [headings] TRUE adds the state names on the left.
 * @returns {any[][]} One column with a time for each state; #N/A in a state without exits.
 */
export function holding(rates: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const shape = column(states, headings ?? null);
  const names = labelsOf(states);
  return ask(states, () => holdingTimes(states.generator), (stays) => shape(stays, (state) => new Problem("stayWithoutEnd", { state, names }, "noAnswer")));
}

/**
 * Time after which every start is as good as at its long run.
 * @customfunction SETTLING
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [tolerance] How near counts as settled, between 0 and 1: the largest difference in any probability; 0.01 when left out.
 * @returns The time in the rates' time unit; 0 if already settled.
 */
export function settling(rates: any[][], tolerance?: any[][]): any {
  const states = tableIn(rates);
  const near = readNumber(tolerance ?? null, "tolerance", { above: 0, below: 1 }, 0.01);
  return ask(states, () => settlingTimeSteps(states.generator, near), (time) => time);
}
