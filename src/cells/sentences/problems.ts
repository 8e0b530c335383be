import type { Problem } from "../../chain/problem";
import { fit, type Words } from "./wording";

type Sentence = (words: Words) => string;

/** Every problem code and its sentence: where, what was found, what is needed. */
export const PROBLEM_SENTENCES: Readonly<Record<string, Sentence>> = {
  // the table as a whole
  rangeEmpty: () => "The range holds no rates. Select a from-rows by to-columns table, or a list of from, to, rate.",
  notSquare: (w) => `The table has ${w.number("rows")} from-rows and ${w.number("columns")} to-columns. Select as many rows as columns.`,
  cornerBlank: () => "First row and column hold the same numbers. If these are headings, put a word into the corner; else enter the diagonal.",
  headingMissing: (w) => `${capital(w.text("side"))} ${w.ordinal("index")} has no heading (blank, 0 or a dash). Enter a state name.`,
  headingNotName: (w) => `Heading of ${w.text("side")} ${w.ordinal("index")}: ${w.text("found")} is not a name. Enter a state name.`,
  headingsDiffer: (w) =>
    `Row ${w.ordinal("index")} is headed ${w.quoted("rowName")}, column ${w.ordinal("index")} ${w.quoted("columnName")}. Use the same names in the same order.`,
  nameRepeated: (w) => `States ${w.ordinal("first")} and ${w.ordinal("second")} are both named "${w.text("name")}". Give each state its own name.`,

  // a rate and its place
  cellFault: (w) => `${w.place()}: the cell holds the error ${w.text("fault")}. Correct it first.`,
  rateNotNumber: (w) => `${w.place()}: "${w.text("found")}" is not a rate. Enter a number, 0 or more.`,
  rateIsText: (w) => `${w.place()}: "${w.text("found")}" is text. Enter it as a number, such as ${w.number("reading")}.`,
  rateNegative: (w) => `${w.place()}: ${w.number("rate")} is not a rate. Enter 0 or more.`,
  rateNotFinite: (w) => `${w.place()}: the rate is not a finite number. Enter a number, 0 or more.`,
  rateOutOfRange: (w) => `${w.place()}: ${w.number("rate")} is outside the rates that are taken, 1E-150 to 1E+150. Change the time unit.`,
  diagonalPositive: (w) => `${w.place()}: the diagonal is ${w.number("given")}. Enter minus the exits, -${w.number("exits")}, or clear it.`,
  diagonalWithoutExits: (w) => `${w.place()}: the diagonal is ${w.number("given")}, but the row has no exits. Clear it or enter the exits.`,
  rowSum: (w) => `Row ${w.state("row", "rowName")}: the diagonal is ${w.number("given")}, the exits sum to ${w.number("exits")}. Correct one or clear the diagonal.`,
  rowSumRounded: (w) =>
    `Row ${w.state("row", "rowName")}: diagonal ${w.number("given")} and exits ${w.number("exits")} differ by rounding. Clear the diagonal.`,

  // the rows of a list
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
};

function capital(word: string): string {
  return word.charAt(0).toUpperCase() + word.slice(1);
}

/** The sentence of a problem, at most 120 characters whatever its details. */
export function sentenceOf(problem: Problem): string {
  const sentence = PROBLEM_SENTENCES[problem.code];
  if (!sentence) throw new RangeError(`No sentence for problem code ${problem.code}.`);
  return fit(problem.details, sentence);
}
