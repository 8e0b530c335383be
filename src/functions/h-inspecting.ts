import { auditReading } from "../audit/audit";
import { checkSpill, refusal, type Answer } from "../cells/answer";
import { readFlag, type Argument } from "../cells/argument";
import { NOT_NEGATIVE, readNumber, SEED } from "../cells/numbers";
import { findingTexts } from "../cells/sentences/findings";
import { readStart } from "../cells/start";
import { labelsOf } from "../cells/states";
import { communicatingClasses } from "../chain/classes";
import { holdingTimes, jumpChain } from "../chain/jumps";
import { Problem } from "../chain/problem";
import { samplePath as simulate } from "../chain/sample-path";
import { settlingTimeSteps } from "../chain/settling";
import { isEmpty } from "../table/cell";
import { compareTables, type CompareRow } from "../table/compare";
import { fingerprint as fingerprintOf } from "../table/fingerprint";
import { read } from "../table/read";
import type { Cells, RateTable } from "../table/rate-table";
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

/** Rows without anything behind all that a table could need: of whole columns a million, which no rule need look at. */
function withoutTail(cells: Cells): Cells {
  let rows = cells.length;
  const least = (cells[0]?.length ?? 0) + 2;
  while (rows > least && cells[rows - 1].every(isEmpty)) rows--;
  return rows === cells.length ? cells : cells.slice(0, rows);
}

function findings(range: Cells, start: Argument): Answer {
  try {
    const rates = withoutTail(range);
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

/** Rows of a simulated history, the heading row included. */
const LONGEST_HISTORY = 50_000;

/**
 * One simulated history: when which state is entered.
 * @customfunction SAMPLEPATH
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param start A state by name or number, or one probability for each state in a row or column; the first state when left out.
 * @param horizon One length of time, 0 or more, in the rates' time unit; a blank cell counts as 0.
 * @param seed A whole number, 0 or more; the same seed gives the same history.
 * @param [headings] TRUE adds a heading row.
 * @returns {any[][]} One row for each entry: time, state.
 */
export function samplePath(rates: any[][], start: any[][], horizon: any[][], seed: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const begin = readStart(start, states);
  const until = readNumber(horizon, "horizon", NOT_NEGATIVE);
  const from = readNumber(seed, "seed", SEED);
  const top = readFlag(headings ?? null, "headings") ? [["time", "state"]] : [];
  return ask(
    states,
    () => simulate(states.generator, begin, until, from, LONGEST_HISTORY - top.length),
    ({ times, states: entered }) => {
      const labels = labelsOf(states);
      return [...top, ...times.map((time, k) => [time, labels[entered[k]]])];
    },
  );
}

/**
 * Eight characters that stay the same as long as the table's states and rates do.
 * @customfunction FINGERPRINT
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate.
 * @returns Eight characters; not a protection against forgery.
 */
export function fingerprint(rates: any[][]): any {
  const states = tableIn(rates);
  return ask(states, () => fingerprintOf(states), (characters) => characters);
}

/**
 * Arrows that differ between two rate tables, with before, after and their ratio.
 * @customfunction COMPARE
 * @param before Rate table before.
 * @param after Rate table after; states are matched by name, or by number where a table has no names.
 * @returns {any[][]} One row for each difference: from, to, before, after, ratio; states on one side only come first.
 */
export function compare(before: any[][], after: any[][]): any[][] {
  const left = tableIn(before, "before");
  const right = tableIn(after, "after");
  return ask(null, () => compareTables(left, right), (rows) => {
    checkSpill(rows.length, 5);
    return rows.length > 0 ? rows.map(differenceCells) : [["no difference", "", "", "", ""]];
  });
}

function differenceCells(row: CompareRow): Answer[number] {
  if (row.kind !== "arrow") return [row.state, "", ...(row.kind === "onlyBefore" ? ["present", "absent"] : ["absent", "present"]), ""];
  const isNew = row.before === 0;
  return [row.from, row.to, row.before, row.after, isNew ? refusal(new Problem("arrowIsNew", { fromName: row.from, toName: row.to }, "noAnswer")) : row.ratio];
}
