import type { Problem } from "../../chain/problem";
import { fit, type Words } from "./wording";

type Sentence = (words: Words) => string;

/** Every problem code and its sentence: where, what was found, what is needed. */
export const PROBLEM_SENTENCES: Readonly<Record<string, Sentence>> = {
  // the table as a whole
  rangeEmpty: () => "The range holds no rates. Select a from-rows by to-columns table, or a list of from, to, rate.",
  notSquare: (w) =>
    w.has("index")
      ? `${capital(w.text("side"))} ${w.state("index", "name")} has no ${w.text("side") === "row" ? "column" : "row"}: ${w.number("rows")} from-rows, ${w.number("columns")} to-columns. Select as many of both.`
      : `The table has ${w.number("rows")} from-rows and ${w.number("columns")} to-columns. Select as many rows as columns.`,
  cornerBlank: () => "First row and column hold the same numbers. If these are headings, put a word into the corner; else enter the diagonal.",
  headingMissing: (w) => `${capital(w.text("side"))} ${w.ordinal("index")} has no heading (blank, 0 or a dash). Enter a state name.`,
  headingNotName: (w) => `Heading of ${w.text("side")} ${w.ordinal("index")}: ${w.text("found")} is not a name. Enter a state name.`,
  headingsDiffer: (w) =>
    `Row ${w.ordinal("index")} is headed ${w.quoted("rowName")}, column ${w.ordinal("index")} ${w.quoted("columnName")}. Use the same names in the same order.`,
  nameRepeated: (w) => `States ${w.ordinal("first")} and ${w.ordinal("second")} are both named "${w.text("name")}". Give each state its own name.`,

  // a rate and its place
  cellFault: (w) => `${w.place()}: the cell holds the error ${w.text("fault")}. Correct it first.`,
  rateNotNumber: (w) => `${w.place()}: "${w.text("found")}" is not a ${w.quantity()}. Enter a number, 0 or more.`,
  rateIsText: (w) => `${w.place()}: "${w.text("found")}" is text. Enter it as a number, such as ${w.number("reading")}.`,
  rateNegative: (w) => `${w.place()}: ${w.number("rate")} is not a ${w.quantity()}. Enter 0 or more.`,
  rateNotFinite: (w) => `${w.place()}: the ${w.quantity()} is not a finite number. Enter a number, 0 or more.`,
  rateOutOfRange: (w) => `${w.place()}: ${w.number("rate")} is not between 1E-150 and 1E+150. Change the time unit.`,
  diagonalPositive: (w) => (w.has("total") ? probabilities(w) : `${w.place()}: the diagonal is ${w.number("given")}. Enter minus the exits, -${w.number("exits")}, or clear it.`),
  diagonalWithoutExits: (w) =>
    w.has("total") ? probabilities(w) : `${w.place()}: the diagonal is ${w.number("given")}, but the row has no exits. Clear it or enter the exits.`,
  rowSum: (w) => `Row ${w.state("row", "rowName")}: the diagonal is ${w.number("given")}, the exits sum to ${w.number("exits")}${apart(w)}. Correct one or clear the diagonal.`,
  rowSumRounded: (w) =>
    `Row ${w.state("row", "rowName")}: diagonal ${w.number("given")} and exits ${w.number("exits")} differ by rounding${apart(w)}. Clear the diagonal.`,

  // the rows of a list
  listTooWide: (w) => `Column ${w.ordinal("column")} is filled, but a list has three: from, to, rate. Select those three columns only.`,
  listTooNarrow: (w) => `The range has too few columns, ${w.number("columns")}. A list has three: from, to, rate.`,
  listEmpty: () => "The list holds no arrow. Enter rows of from-state, to-state, rate.",
  listNameMissing: (w) => `Row ${w.ordinal("listRow")}: ${w.quoted("found")} in place of a state name. Enter the names of both states as text.`,
  arrowToItself: (w) =>
    w.has("listRow")
      ? `Row ${w.ordinal("listRow")}: an arrow from ${w.quoted("fromName")} to itself. Delete the row: staying needs no rate.`
      : `State ${w.state("from", "fromName")} has an arrow to itself. Remove it: staying needs no rate.`,
  arrowRepeated: (w) =>
    w.has("listRow")
      ? `Rows ${w.ordinal("firstRow")} and ${w.ordinal("listRow")}: the arrow ${w.text("fromName")} to ${w.text("toName")} stands twice. Keep one row.`
      : `The arrow from state ${w.ordinal("from")} to state ${w.ordinal("to")} stands twice. Keep one.`,
  arrowOutside: (w) => `An arrow joins states ${w.ordinal("from")} and ${w.ordinal("to")}, but there are ${w.number("size")} states.`,

  // arguments
  argumentMissing: (w) => `${w.argument()}: nothing was given. This argument is needed.`,
  argumentFault: (w) => `${w.argument()}: the cell holds the error ${w.text("fault")}. Correct it first.`,
  oneValueNeeded: (w) => `${w.argument()}: ${w.number("rows")} × ${w.number("columns")} cells were given. Give one value.`,
  flagUnknown: (w) => `${w.argument()}: ${w.quoted("found")} is neither TRUE nor FALSE. Enter TRUE, FALSE, 1 or 0.`,
  numberNeeded: (w) => `${w.argument()}: ${w.quoted("found")} is not a number. Enter ${domain(w)}.`,
  numberOutside: (w) => `${w.argument()}: ${w.number("value")} cannot be used. Enter ${domain(w)}.`,
  oneForEachState: (w) =>
    `${w.argument()}: ${w.number("rows")} × ${w.number("columns")} cells were given. Give one row or column of ${w.number("size")}, one a state.`,
  oneStateNeeded: (w) => `${w.argument()}: ${w.number("rows")} × ${w.number("columns")} cells were given. Give one state by name or number.`,
  sameState: (w) => `${w.argument()}: this is the from-state too. Name two different states.`,
  stateMissing: (w) => `${w.argument()}: no state is given. Give at least one state by name or number.`,
  stateUnknown: (w) => `${w.argument()}: there is no state ${w.quoted("found")}. Give a state's name or a number up to ${w.number("size")}.`,
  stateNumberOutside: (w) => `${w.argument()}: there is no state ${w.number("value")}. Give a number from 1 to ${w.number("size")}, or a name.`,
  stateAmbiguous: (w) =>
    `${w.argument()}: ${w.number("number")} heads state ${w.ordinal("named")}, but state ${w.number("number")} is "${w.text("other")}". Give the name as text.`,
  startShape: (w) => `start: ${w.number("rows")} × ${w.number("columns")} cells were given. Give one state, or ${w.number("size")} probabilities in one row or column.`,
  startProbability: (w) => `${w.argument()}: ${w.quoted("found")} is not a probability. Enter 0 to 1.`,
  startSum: (w) => `start: the probabilities sum to ${w.number("sum")}. Make them sum to 1.`,
  matrixShape: (w) => `${w.argument()}: ${w.number("rows")} × ${w.number("columns")} cells were given. Give ${w.number("size")} × ${w.number("size")}, or with headings.`,
  headingBlank: (w) => `${w.argument()}: ${w.text("side")} ${w.ordinal("index")} has no heading. Enter a state's name.`,
  headingTwice: (w) => `${w.argument()}: ${w.text("side")}s ${w.ordinal("first")} and ${w.ordinal("second")} are both headed "${w.text("name")}". Name each state once.`,
  resetOutside: (w) => `resets, row ${w.state("row", "rowName")}, column ${w.ordinal("column")}: ${w.number("value")} is not a probability. Enter 0 to 1.`,
  resetSum: (w) => `resets, row ${w.state("row", "rowName")}: the probabilities sum to ${w.number("sum")}. Make them sum to 1, or leave the row blank.`,
  stackHeight: (w) => `ratesStack: ${w.number("rows")} rows cannot be shared by ${w.number("phases")} durations. Stack one table of equal height for each.`,
  stackDiffers: (w) => `ratesStack, table ${w.ordinal("index")}: its states differ from the first table's. Use the same states in the same order.`,

  // what a table is built from
  notWholeNumber: (w) => `${w.argument()}: ${w.number("value")} cannot be used. Enter a whole number, ${w.number("least")} or more.`,
  notRate: (w) => `${w.argument()}: ${w.number("value")} is not a rate. Enter 0, or a number between 1E-150 and 1E+150.`,
  notBetween: (w) => `${w.argument()}: ${w.number("value")} cannot be used. Enter a number between ${w.number("least")} and ${w.number("most")}.`,
  notWithin: (w) => `${w.argument()}: ${w.number("value")} cannot be used. Enter a number from ${w.number("least")} to ${w.number("most")}.`,
  unequalLengths: (w) => `${w.number("up")} upRates and ${w.number("down")} downRates were given. Give as many downward as upward.`,
  runningAboveUnits: (w) => `running: ${w.number("running")} cannot run when there are ${w.number("units")} units. Enter no more than the units.`,
  placesBelowServers: (w) => `places: ${w.number("places")} places do not hold ${w.number("servers")} servers' customers. Enter at least as many.`,
  stateWithoutExits: (w) => `state: no arrow leaves "${w.text("name")}", so its stay has no mean to keep. Choose a state with exits.`,
  groupsNotOnePerState: (w) => `groups: ${w.number("groups")} names were given. Give ${w.number("states")}, one for each state.`,
  groupMissing: (w) => `groups: state ${w.state("state", "name")} has no group name. Enter one for each state.`,
  notLumpable: (w) =>
    `groups: ${w.text("stateName")} and ${w.text("otherName")} go to ${w.text("group")} at ${w.number("rate")} and ${w.number("otherRate")}. Split them, or set approximate.`,

  // counts and logs
  countOnDiagonal: (w) => `${w.place()}: a jump from a state to itself is no jump. Clear the diagonal of the counts.`,
  countNotWhole: (w) => `${w.place()}: ${w.number("count")} is not a count. Enter a whole number.`,
  timesNotOnePerState: (w) => `timeInState: ${w.number("times")} times were given. Give ${w.number("states")}, one for each state.`,
  timeInStateNegative: (w) => `timeInState, state ${w.state("state", "name")}: ${w.number("time")} cannot be used. Enter 0 or more.`,
  countsWithoutTime: (w) => `timeInState, state ${w.state("state", "name")}: 0, but ${w.number("count")} jumps left it. Enter the time observed.`,
  logEmpty: () => "log: it has no rows. Give rows of unit, time, state entered.",
  logShape: (w) => `log: ${w.number("columns")} columns are filled. Give three: unit, time, state entered.`,
  logTime: (w) => `log, row ${w.ordinal("row")}: ${w.quoted("found")} is not a time. Enter a number or a date.`,
  logNameMissing: (w) => `log, row ${w.ordinal("row")}: the ${w.text("what")} is blank. Enter its name.`,
  logAfterEnd: (w) => `log, row ${w.ordinal("row")}: time ${w.number("time")} is after the end, ${w.number("end")}. Correct the row or the end.`,
  logTwoStates: (w) =>
    `log, rows ${w.ordinal("firstRow")} and ${w.ordinal("row")}: ${w.text("unit")} enters two states at time ${w.number("time")}. Correct one.`,
  exposureNotPositive: (w) => `exposure: ${w.number("exposure")} cannot be used. Enter a time above 0.`,
  noEventToEndAt: () => "count: 0 events, but the observation is said to end at the last one. Enter FALSE for failureTruncated.",
  arrowIsNew: (w) => `${w.text("fromName")} to ${w.text("toName")} is new, so there is no ratio to a rate before.`,
  pathTooLong: (w) => `The history has more than ${w.number("longest")} rows. Shorten the horizon, ${w.number("horizon")}.`,

  // tables of probabilities
  probabilityNotNumber: (w) => `${w.place()}: ${w.quoted("found")} is not a probability. Enter a number from 0 to 1.`,
  probabilityOutside: (w) => `${w.place()}: ${w.number("value")} is not a probability. Enter 0 to 1.`,
  probabilityPercent: (w) => `Row ${w.state("row", "rowName")}: the entries sum to ${w.number("sum")}, so they are percent. Divide the table by 100.`,
  probabilitySum: (w) => `Row ${w.state("row", "rowName")}: the probabilities sum to ${w.number("sum")}. Make each row sum to 1.`,
  noRealLogarithm: () => "No rates lie near this table: it has no real principal logarithm. Try a table of a shorter period.",

  // times
  timeNegative: (w) => `A time of ${w.number("time")} is negative. Enter 0 or more.`,
  timeNotFinite: () => "A time is not a finite number. Enter 0 or more.",
  horizonTooLong: (w) => `Time ${w.number("time")} × largest exit rate ${w.number("rate")} is over ${w.number("limit")}. Shorten it, or ask for the long run.`,
  fractionOutside: (w) => `fractions: ${w.number("fraction")} cannot be used. Enter 0 or more and below 1.`,
  toleranceOutside: (w) => `tolerance: ${w.number("tolerance")} cannot be used. Enter a number between 0 and 1.`,
  intervalNotPositive: (w) => `interval: ${w.number("interval")} cannot be used. Enter a time above 0.`,
  periodNotPositive: (w) => `period: ${w.number("period")} cannot be used. Enter a time above 0.`,
  goalOutside: (w) => `goal: ${w.number("goal")} is not a share. Enter 0 to 1.`,
  discountNegative: (w) => `discount: ${w.number("discount")} is negative. Enter 0 or more.`,

  // questions without an answer
  noTargets: () => "targets: none are given and no state is absorbing. Name the states that end the wait.",
  severalClosedClasses: (w) => `The long run depends on the start: ${w.groups("classes")} are never left. Give a start.`,
  severalEnds: (w) => `The long run depends on the start: ${w.groups("classes")} are never left. Only one may be.`,
  meanInfinite: (w) => `From ${w.stateOf("state")} a target is not met with certainty: the mean time is infinite.`,
  targetNotCertain: () => "From this start a target is not met with certainty, so the mean is infinite. Add a discount, or change the targets.",
  costWithoutEnd: () => "No state is absorbing and no targets are given: the cost grows without end. Give targets, or a discount above 0.",
  meanIsZero: () => "The start is a target: the mean time is 0 and no rate changes it by a percentage.",
  shareIsZero: () => "The share in these states is 0, so no rate changes it by a percentage.",
  costIsZero: () => "The long-run cost is 0, so no rate changes it by a percentage.",
  percentileNeverMet: (w) => `Only ${w.number("everReached")} ever meet a target, so the fraction ${w.number("fraction")} is never reached.`,
  onlyTargets: () => "targets: every state is one. Leave at least one state that is no target.",
  limitDependsOnStart: (w) => `They depend on the start: ${w.groups("classes")} last longest, but not every state leads there.`,
  goalNotReached: (w) => `No rate of this arrow gives ${w.number("goal")}: the share stays between ${w.number("lowest")} and ${w.number("highest")}.`,
  noFailures: () => "In the long run no failure occurs, so this time does not exist.",
  failureNotCertain: () => "From this start a failure is not certain, so the mean time to the first one is infinite.",
  stayWithoutEnd: (w) => `No arrow leaves ${w.stateOf("state")}: the stay has no end.`,
  tooMuchWork: (w) => `The answer for ${w.number("states")} states takes too long at these times. Use fewer states or a shorter time.`,
  survivalGone: (w) => `At time ${w.number("time")} a target has been met with certainty, or as good as: there is no hazard.`,
  timeInfinite: (w) => `The time in ${w.stateOf("state")} before a target is infinite: it can be entered and no target met from it.`,
  ratesTooFarApart: () => "The rates are so far apart that products leave the number range. Use a time unit nearer to the rates.",
  tooManyStates: (w) => `The answer needs ${w.number("states")} states worked out at once, more than memory holds. Use fewer states.`,
  valueLost: () => "This value cannot be computed within the number range.",
  cancelled: () => "The calculation was cancelled. Recalculate to start it again.",
  beyondMemory: () => "The question is too large for the memory at hand. Use fewer states or times.",
  unexpected: (w) => `The calculation failed (${w.text("found")}). Run CTMC.CHECK on the table.`,
  spillTooLarge: (w) =>
    `The result has ${w.number("rows")} × ${w.number("columns")} cells, over the limit of ${w.number("most")} ${w.has("wide") ? "columns" : "cells"}. Ask for less at once.`,
};

/** A row that sums to 1 or 100 with its diagonal: probabilities or percent stand where rates are needed. */
function probabilities(w: Words): string {
  const kind = w.number("total") === "1" ? "probabilities" : "percent";
  return `${w.place()}: ${w.number("given")}, and the row sums to ${w.number("total")}: ${kind}? Convert with CTMC.FROMPROBABILITY.`;
}

/** How far a diagonal misses its exits, where the two look the same in print. */
function apart(w: Words): string {
  return w.number("given") === `-${w.number("exits")}` ? `, ${w.number("gap")} apart` : "";
}

/** What numbers an argument takes. */
function domain(w: Words): string {
  const kind = w.has("whole") ? "a whole number" : "a number";
  if (w.has("least") && w.has("most")) return `${kind} from ${w.number("least")} to ${w.number("most")}`;
  const low = w.has("least") ? `${w.number("least")} or more` : w.has("above") ? `above ${w.number("above")}` : "";
  const high = w.has("most") ? `at most ${w.number("most")}` : w.has("below") ? `below ${w.number("below")}` : "";
  return [kind, [low, high].filter(Boolean).join(" and ")].filter(Boolean).join(", ");
}

function capital(word: string): string {
  return word.charAt(0).toUpperCase() + word.slice(1);
}

/** Words before a sentence that concerns one of several stacked tables as a whole. */
function inBlock(problem: Problem, sentence: Sentence): Sentence {
  return typeof problem.details.block === "number" ? (w) => `Table ${w.ordinal("block")}: ${sentence(w)}` : sentence;
}

/** The sentence of a problem, at most 120 characters whatever its details. */
export function sentenceOf(problem: Problem): string {
  const sentence = PROBLEM_SENTENCES[problem.code];
  if (!sentence) throw new RangeError(`No sentence for problem code ${problem.code}.`);
  return fit(problem.details, inBlock(problem, sentence));
}
