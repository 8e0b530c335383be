/**
 * Operators on values and on whole tables of values. Tables of unlike shape are matched as in OpenFormula 1.3, part 4,
 * 3.3 and in the spilling formulas of today: a single row or column is repeated, what then has no partner is #N/A.
 */
import type { BinaryOperator } from "./expression";
import { numberInText } from "./entry";
import type { Locale } from "./locale";
import { compare, Fault, isGrid, numberText, toNumber, type Grid, type Scalar } from "./value";

const NO_PARTNER = new Fault("#N/A", "The two tables differ in size; this cell has no partner.");
/** Cells in a computed table; beyond this the answer is refused, since a browser page has to hold it. */
export const GRID_LIMIT = 5_000_000;

export const rowsOf = (value: Scalar | Grid): number => (isGrid(value) ? value.length : 1);
export const columnsOf = (value: Scalar | Grid): number => (isGrid(value) ? value[0]!.length : 1);

/** Applies a function of single values to tables, entry by entry. */
export function lift(values: readonly (Scalar | Grid)[], apply: (...scalars: Scalar[]) => Scalar): Scalar | Grid {
  if (!values.some(isGrid)) return apply(...(values as Scalar[]));
  const rows = Math.max(...values.map(rowsOf));
  const columns = Math.max(...values.map(columnsOf));
  if (rows * columns > GRID_LIMIT) return new Fault("#NUM!", `The table would have ${rows * columns} cells; ${GRID_LIMIT} is the limit.`);
  const result: Scalar[][] = [];
  for (let row = 0; row < rows; row++) {
    const line: Scalar[] = [];
    for (let column = 0; column < columns; column++) {
      const scalars = values.map((value) => entryAt(value, row, column));
      line.push(scalars.includes(NO_PARTNER) ? NO_PARTNER : apply(...scalars));
    }
    result.push(line);
  }
  return result;
}

function entryAt(value: Scalar | Grid, row: number, column: number): Scalar {
  if (!isGrid(value)) return value;
  const line = value.length === 1 ? value[0]! : value[row];
  if (!line) return NO_PARTNER;
  const entry = line.length === 1 ? line[0] : line[column];
  return entry === undefined ? NO_PARTNER : entry;
}

const isComparison = (operator: BinaryOperator): boolean => operator === "=" || operator === "<>" || operator === "<" || operator === ">" || operator === "<=" || operator === ">=";

export function binary(operator: BinaryOperator, left: Scalar | Grid, right: Scalar | Grid, locale: Locale): Scalar | Grid {
  const single = isComparison(operator) ? comparison(operator) : operator === "&" ? join(locale) : arithmetic(operator, locale);
  return lift([left, right], (a = null, b = null) => (a instanceof Fault ? a : b instanceof Fault ? b : single(a, b)));
}

type Plain = Exclude<Scalar, Fault>;

function comparison(operator: BinaryOperator): (left: Plain, right: Plain) => Scalar {
  switch (operator) {
    case "=": return (left, right) => compare(left, right) === 0;
    case "<>": return (left, right) => compare(left, right) !== 0;
    case "<": return (left, right) => compare(left, right) < 0;
    case ">": return (left, right) => compare(left, right) > 0;
    case "<=": return (left, right) => compare(left, right) <= 0;
    default: return (left, right) => compare(left, right) >= 0;
  }
}

/** A value as text in the local spelling, as "&" and the text functions take it. */
export function textOf(value: Plain, locale: Locale): string {
  if (value === null) return "";
  if (typeof value === "boolean") return value ? "TRUE" : "FALSE";
  if (typeof value === "string") return value;
  const text = numberText(value);
  return locale.decimal === "." ? text : text.replace(".", locale.decimal);
}

const join = (locale: Locale) => (left: Plain, right: Plain): Scalar => textOf(left, locale) + textOf(right, locale);

function arithmetic(operator: BinaryOperator, locale: Locale): (left: Plain, right: Plain) => Scalar {
  const read = (text: string) => numberInText(text, locale);
  return (left, right) => {
    const a = toNumber(left, read);
    if (a instanceof Fault) return a;
    const b = toNumber(right, read);
    if (b instanceof Fault) return b;
    switch (operator) {
      case "+": return finite(a + b);
      case "-": return finite(a - b);
      case "*": return finite(a * b);
      case "/": return b === 0 ? new Fault("#DIV/0!") : finite(a / b);
      default: return power(a, b);
    }
  };
}

/** Zero to the power of zero is refused: the standards leave its value open. */
export function power(base: number, exponent: number): Scalar {
  if (base === 0 && exponent === 0) return new Fault("#NUM!", "Zero to the power of zero has no value.");
  if (base === 0 && exponent < 0) return new Fault("#DIV/0!", "Zero to a negative power divides by zero.");
  return finite(base ** exponent);
}

export const finite = (value: number): Scalar => (Number.isFinite(value) ? value : new Fault("#NUM!"));

export function unary(operator: "+" | "-" | "%", operand: Scalar | Grid, locale: Locale): Scalar | Grid {
  if (operator === "+") return operand;
  return lift([operand], (value = null) => {
    const number = toNumber(value, (text) => numberInText(text, locale));
    return number instanceof Fault ? number : operator === "-" ? 0 - number : number / 100;
  });
}
