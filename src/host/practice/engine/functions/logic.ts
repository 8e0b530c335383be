/** Conditions, tests of values, and functions written in a formula. */
import type { Evaluation } from "../evaluate";
import type { Expression } from "../expression";
import { lift } from "../operators";
import { compare, Fault, isGrid, Lambda, Reference, toLogical, type Grid, type Scalar, type Value } from "../value";
import { asGrid, define, defineLazy, defineLifted, numberFrom, type Definition } from "./define";

/** A branch of IF: references stay references when the condition is a single value. */
function chooseBranch(condition: Scalar | Grid, whenTrue: () => Value, whenFalse: () => Value, evaluation: Evaluation): Value {
  if (!isGrid(condition)) {
    const outcome = toLogical(condition);
    return outcome instanceof Fault ? outcome : outcome ? whenTrue() : whenFalse();
  }
  const outcomes = condition.flat().map(toLogical);
  const yes = outcomes.includes(true) ? evaluation.read(whenTrue()) : null;
  const no = outcomes.includes(false) ? evaluation.read(whenFalse()) : null;
  return lift([condition, yes, no], (test = null, a = null, b = null) => {
    const outcome = toLogical(test);
    return outcome instanceof Fault ? outcome : outcome ? a : b;
  });
}

const blankAsZero = (expression: Expression | null | undefined, evaluation: Evaluation): Value => (expression === null || expression === undefined ? 0 : evaluation.value(expression));

function whenFault(value: Value, caught: (fault: Fault) => boolean, otherwise: () => Value, evaluation: Evaluation): Value {
  const content = evaluation.read(value);
  if (!isGrid(content)) return content instanceof Fault && caught(content) ? otherwise() : value;
  if (!content.some((row) => row.some((entry) => entry instanceof Fault && caught(entry)))) return value;
  return lift([content, evaluation.read(otherwise())], (entry = null, other = null) => (entry instanceof Fault && caught(entry) ? other : entry));
}

function ifs(parameters: readonly (Expression | null)[], evaluation: Evaluation, from = 0): Value {
  if (parameters.length % 2 === 1) return new Fault("#VALUE!", "Each condition needs a value after it.");
  if (from >= parameters.length) return new Fault("#N/A", "None of the conditions is met.");
  return chooseBranch(evaluation.contents(parameters[from]!), () => blankAsZero(parameters[from + 1], evaluation), () => ifs(parameters, evaluation, from + 2), evaluation);
}

function logicals(values: readonly Value[], evaluation: Evaluation): boolean[] | Fault {
  const found: boolean[] = [];
  for (const value of values) {
    const listed = value instanceof Reference || isGrid(value);
    for (const entry of asGrid(evaluation.read(value)).flat()) {
      if (listed && (entry === null || typeof entry === "string")) continue;
      const logical = toLogical(entry);
      if (logical instanceof Fault) return logical;
      found.push(logical);
    }
  }
  return found.length === 0 ? new Fault("#VALUE!", "There is no logical value among the cells.") : found;
}

function ofLogicals(name: string, description: string, apply: (values: boolean[]) => boolean): Definition {
  return define(name, "condition, [more]...", description, (values, evaluation) => {
    const found = logicals(values, evaluation);
    return found instanceof Fault ? found : apply(found);
  });
}

function test(name: string, description: string, apply: (value: Scalar) => boolean): Definition {
  return defineLifted(name, "value", "e", description, ([value]: readonly Scalar[]) => apply(value!));
}

/** Calls a LAMBDA for an entry; what it gives must be one value. */
function entryOf(callee: Value, values: readonly Value[], evaluation: Evaluation): Scalar {
  const result = evaluation.read(evaluation.apply(callee, values));
  if (!isGrid(result)) return result;
  return result.length === 1 && result[0]!.length === 1 ? result[0]![0]! : new Fault("#CALC!", "The LAMBDA gives a table where one value is needed.");
}

const tables = (values: readonly Value[], evaluation: Evaluation): Grid[] => values.map((value) => asGrid(evaluation.read(value)));

const lambdas: readonly Definition[] = [
  define("MAP", "table, [more]..., lambda", "Calls a LAMBDA for every entry.", (values, evaluation) => {
    const callee = values.at(-1)!;
    return lift(tables(values.slice(0, -1), evaluation), (...entries) => entryOf(callee, entries, evaluation));
  }),
  define("REDUCE", "start, table, lambda", "Calls a LAMBDA with the result so far and every entry.", ([start, table, callee], evaluation) => {
    let total: Value = start!;
    for (const entry of asGrid(evaluation.read(table!)).flat()) total = evaluation.apply(callee!, [total, entry]);
    return total;
  }),
  define("SCAN", "start, table, lambda", "Like REDUCE, with all results on the way.", ([start, table, callee], evaluation) => {
    let total: Scalar = asGrid(evaluation.read(start!))[0]![0]!;
    return asGrid(evaluation.read(table!)).map((row) => row.map((entry) => (total = entryOf(callee!, [total, entry], evaluation))));
  }),
  define("BYROW", "table, lambda", "Calls a LAMBDA for every row.", ([table, callee], evaluation) => asGrid(evaluation.read(table!)).map((row) => [entryOf(callee!, [[row]], evaluation)])),
  define("BYCOL", "table, lambda", "Calls a LAMBDA for every column.", ([table, callee], evaluation) => {
    const grid = asGrid(evaluation.read(table!));
    return [grid[0]!.map((_, column) => entryOf(callee!, [grid.map((row) => [row[column]!])], evaluation))];
  }),
  define("MAKEARRAY", "rows, columns, lambda", "A table whose entries a LAMBDA gives.", ([rows, columns, callee], evaluation) => {
    const height = numberFrom(rows, evaluation, 1);
    const width = numberFrom(columns, evaluation, 1);
    if (height instanceof Fault) return height;
    if (width instanceof Fault) return width;
    if (!(height >= 1 && width >= 1 && height * width <= 1e6)) return new Fault("#VALUE!", "The table needs 1 to 1,000,000 entries.");
    return Array.from({ length: Math.trunc(height) }, (_, row) => Array.from({ length: Math.trunc(width) }, (__, column) => entryOf(callee!, [row + 1, column + 1], evaluation)));
  }),
];

export const logic: readonly Definition[] = [
  defineLazy("IF", "condition, then, [else]", "One value or another, by a condition.", ([condition, then, otherwise], evaluation) =>
    chooseBranch(evaluation.contents(condition!), () => blankAsZero(then, evaluation), () => (otherwise === undefined ? false : blankAsZero(otherwise, evaluation)), evaluation),
  ),
  defineLazy("IFS", "condition, value, [more]...", "The value after the first condition that is met.", (parameters, evaluation) => ifs(parameters, evaluation)),
  defineLazy("IFERROR", "value, otherwise", "Another value in place of an error.", ([value, otherwise], evaluation) =>
    whenFault(evaluation.value(value!), () => true, () => blankAsZero(otherwise, evaluation), evaluation),
  ),
  defineLazy("IFNA", "value, otherwise", "Another value in place of #N/A.", ([value, otherwise], evaluation) =>
    whenFault(evaluation.value(value!), (fault) => fault.code === "#N/A", () => blankAsZero(otherwise, evaluation), evaluation),
  ),
  defineLazy("CHOOSE", "number, value, [more]...", "The value at a place in the list.", ([place, ...choices], evaluation) => {
    const number = numberFrom(evaluation.value(place!), evaluation, 1);
    if (number instanceof Fault) return number;
    const index = Math.trunc(number) - 1;
    return index < 0 || index >= choices.length ? new Fault("#VALUE!", `There is no choice ${Math.trunc(number)} among ${choices.length}.`) : blankAsZero(choices[index], evaluation);
  }),
  defineLazy("SWITCH", "value, case, result, [more]...", "The result whose case equals the value.", ([subject, ...cases], evaluation) => {
    const value = asGrid(evaluation.contents(subject!))[0]![0]!;
    if (value instanceof Fault) return value;
    for (let index = 0; index + 1 < cases.length; index += 2) {
      const wanted = asGrid(evaluation.contents(cases[index]!))[0]![0]!;
      if (wanted instanceof Fault) return wanted;
      if (typeof wanted === typeof value && compare(wanted, value) === 0) return blankAsZero(cases[index + 1], evaluation);
    }
    return cases.length % 2 === 1 ? blankAsZero(cases.at(-1), evaluation) : new Fault("#N/A", "No case equals the value.");
  }),
  ofLogicals("AND", "TRUE when all conditions are met.", (values) => values.every(Boolean)),
  ofLogicals("OR", "TRUE when any condition is met.", (values) => values.some(Boolean)),
  ofLogicals("XOR", "TRUE when an odd number of conditions is met.", (values) => values.filter(Boolean).length % 2 === 1),
  defineLifted("NOT", "condition", "l", "The opposite of a condition.", ([value]: readonly boolean[]) => !value),
  define("TRUE", "", "The logical value TRUE.", () => true),
  define("FALSE", "", "The logical value FALSE.", () => false),
  define("NA", "", "The error #N/A.", () => new Fault("#N/A", "The formula says that there is no value.")),
  test("ISBLANK", "TRUE for a blank cell.", (value) => value === null),
  test("ISNUMBER", "TRUE for a number.", (value) => typeof value === "number"),
  test("ISTEXT", "TRUE for text.", (value) => typeof value === "string"),
  test("ISNONTEXT", "TRUE for anything but text.", (value) => typeof value !== "string"),
  test("ISLOGICAL", "TRUE for TRUE and FALSE.", (value) => typeof value === "boolean"),
  test("ISERROR", "TRUE for any error.", (value) => value instanceof Fault),
  test("ISERR", "TRUE for any error but #N/A.", (value) => value instanceof Fault && value.code !== "#N/A"),
  test("ISNA", "TRUE for #N/A.", (value) => value instanceof Fault && value.code === "#N/A"),
  define("ISREF", "value", "TRUE for a reference.", ([value]) => value instanceof Reference),
  define("ISOMITTED", "value", "TRUE for an argument left out.", ([value]) => value === null),
  defineLifted("ISEVEN", "number", "n", "TRUE for an even number.", ([value]: readonly number[]) => Math.trunc(value!) % 2 === 0),
  defineLifted("ISODD", "number", "n", "TRUE for an odd number.", ([value]: readonly number[]) => Math.trunc(value!) % 2 !== 0),
  defineLifted("N", "value", "v", "A value as a number; text is 0.", ([value]: readonly Scalar[]) => (typeof value === "number" ? value : value === true ? 1 : 0)),
  define("TYPE", "value", "1 number, 2 text, 4 logical, 16 error, 64 table.", ([value], evaluation) => {
    if (value instanceof Lambda) return 128;
    const content = evaluation.read(value!);
    if (isGrid(content)) return 64;
    return content instanceof Fault ? 16 : typeof content === "boolean" ? 4 : typeof content === "string" ? 2 : 1;
  }),
  ...lambdas,
];
