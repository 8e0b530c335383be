/** Functions of many numbers. Sums and counts are ours, statistics are the function library's. */
import * as library from "@formulajs/formulajs";
import type { Evaluation } from "../evaluate";
import { columnsOf, rowsOf } from "../operators";
import { Fault, isGrid, Lambda, Reference, type Scalar, type Value } from "../value";
import { asGrid, define, fromLibrary, numberFrom, numbersIn, take, type Definition } from "./define";
import { criterion } from "./criteria";

const MANY = "number, [more]...";

function ofNumbers(name: string, description: string, least: number, apply: (numbers: number[]) => unknown): Definition {
  return define(name, MANY, description, (values, evaluation) => {
    const numbers = numbersIn(values, evaluation);
    if (numbers instanceof Fault) return numbers;
    if (numbers.length < least) return least === 1 ? new Fault("#DIV/0!", "There is no number among the cells.") : new Fault("#DIV/0!", `At least ${least} numbers are needed.`);
    return fromLibrary(apply(numbers));
  });
}

const sum = (numbers: readonly number[]): number => numbers.reduce((total, entry) => total + entry, 0);

/** Two ranges of one shape, reduced to the places where both hold a number. */
function ofPairs(name: string, first: string, second: string, description: string, apply: (first: number[], second: number[]) => unknown): Definition {
  return define(name, `${first}, ${second}`, description, (values, evaluation) => pairs(values[0]!, values[1]!, evaluation, apply));
}

function pairs(first: Value, second: Value, evaluation: Evaluation, apply: (first: number[], second: number[]) => unknown): Scalar {
  const a = asGrid(evaluation.read(first)).flat();
  const b = asGrid(evaluation.read(second)).flat();
  if (a.length !== b.length) return new Fault("#N/A", `The ranges have ${a.length} and ${b.length} cells; they must be equally long.`);
  const x: number[] = [];
  const y: number[] = [];
  for (const [index, left] of a.entries()) {
    const right = b[index]!;
    if (left instanceof Fault) return left;
    if (right instanceof Fault) return right;
    if (typeof left === "number" && typeof right === "number") {
      x.push(left);
      y.push(right);
    }
  }
  return fromLibrary(apply(x, y));
}

/** A range and one more number, such as the k-th largest. */
function withNumber(name: string, description: string, second: string, apply: (numbers: number[], second: number) => unknown): Definition {
  return define(name, `range, ${second}`, description, (values, evaluation) => {
    const numbers = numbersIn(values.slice(0, 1), evaluation);
    if (numbers instanceof Fault) return numbers;
    const number = numberFrom(values[1], evaluation, 0);
    if (number instanceof Fault) return number;
    return numbers.length === 0 ? new Fault("#NUM!", "There is no number among the cells.") : fromLibrary(apply(numbers, number));
  });
}

function everyScalar(values: readonly Value[], evaluation: Evaluation): Scalar[] {
  return values.flatMap((value) => asGrid(evaluation.read(value)).flat());
}

/** The ...IF and ...IFS family: the entries of `from` at which every range meets its criterion. */
function matching(from: Value, conditions: readonly Value[], evaluation: Evaluation): Scalar[] | Fault {
  if (conditions.length % 2 === 1) return new Fault("#VALUE!", "Each range needs a criterion after it.");
  const content = evaluation.read(from);
  const cells = asGrid(content).flat();
  const keep = new Array<boolean>(cells.length).fill(true);
  for (let index = 0; index < conditions.length; index += 2) {
    const range = evaluation.read(conditions[index]!);
    if (rowsOf(range) !== rowsOf(content) || columnsOf(range) !== columnsOf(content)) return new Fault("#VALUE!", "The ranges differ in shape.");
    const wanted = evaluation.read(conditions[index + 1]!);
    const test = criterion(isGrid(wanted) ? wanted[0]![0]! : wanted, evaluation.sight.locale);
    asGrid(range).flat().forEach((entry, at) => {
      if (!test(entry)) keep[at] = false;
    });
  }
  return cells.filter((_, at) => keep[at]);
}

function overMatching(values: Scalar[] | Fault, apply: (numbers: number[]) => Scalar): Scalar {
  if (values instanceof Fault) return values;
  const fault = values.find((entry): entry is Fault => entry instanceof Fault);
  return fault ?? apply(values.filter((entry): entry is number => typeof entry === "number"));
}

const mean = (numbers: readonly number[]): Scalar => (numbers.length === 0 ? new Fault("#DIV/0!", "No cell meets the criterion.") : sum(numbers) / numbers.length);
const largest = (numbers: readonly number[]): number => numbers.reduce((a, b) => Math.max(a, b), -Infinity);
const smallest = (numbers: readonly number[]): number => numbers.reduce((a, b) => Math.min(a, b), Infinity);

/** A one-condition function takes its range from the condition unless another is given. */
function ofOne(name: string, description: string, apply: (numbers: number[]) => Scalar): Definition {
  return define(name, "range, criterion, [values]", description, (values, evaluation) =>
    overMatching(matching(values[2] ?? values[0]!, values.slice(0, 2), evaluation), apply),
  );
}

function ofSeveral(name: string, description: string, apply: (numbers: number[]) => Scalar): Definition {
  return define(name, "values, range, criterion, [more]...", description, (values, evaluation) => overMatching(matching(values[0]!, values.slice(1), evaluation), apply));
}

const countMatching = (values: readonly Value[], evaluation: Evaluation): Scalar => {
  const found = matching(values[0]!, values, evaluation);
  return found instanceof Fault ? found : found.length;
};

export const aggregates: readonly Definition[] = [
  ofNumbers("SUM", "Adds numbers.", 0, sum),
  ofNumbers("PRODUCT", "Multiplies numbers.", 0, (numbers) => (numbers.length === 0 ? 0 : numbers.reduce((total, entry) => total * entry, 1))),
  ofNumbers("SUMSQ", "Adds the squares of numbers.", 0, (numbers) => sum(numbers.map((entry) => entry * entry))),
  ofNumbers("AVERAGE", "The mean of numbers.", 1, (numbers) => sum(numbers) / numbers.length),
  ofNumbers("MIN", "The smallest number.", 0, (numbers) => (numbers.length === 0 ? 0 : smallest(numbers))),
  ofNumbers("MAX", "The largest number.", 0, (numbers) => (numbers.length === 0 ? 0 : largest(numbers))),
  ofNumbers("MEDIAN", "The middle of numbers in order.", 1, (numbers) => library.MEDIAN(numbers) as unknown),
  ofNumbers("STDEV.S", "Standard deviation, from a sample.", 2, (numbers) => library.STDEV.S(numbers) as unknown),
  ofNumbers("STDEV", "Standard deviation, from a sample.", 2, (numbers) => library.STDEV.S(numbers) as unknown),
  ofNumbers("STDEV.P", "Standard deviation of the whole.", 1, (numbers) => library.STDEV.P(numbers) as unknown),
  ofNumbers("VAR.S", "Variance, from a sample.", 2, (numbers) => library.VAR.S(numbers) as unknown),
  ofNumbers("VAR", "Variance, from a sample.", 2, (numbers) => library.VAR.S(numbers) as unknown),
  ofNumbers("VAR.P", "Variance of the whole.", 1, (numbers) => library.VAR.P(numbers) as unknown),
  ofNumbers("GEOMEAN", "The geometric mean of numbers above 0.", 1, (numbers) => (numbers.some((entry) => entry <= 0) ? new Fault("#NUM!") : Math.exp(sum(numbers.map(Math.log)) / numbers.length))),
  ofNumbers("HARMEAN", "The harmonic mean of numbers above 0.", 1, (numbers) => (numbers.some((entry) => entry <= 0) ? new Fault("#NUM!") : numbers.length / sum(numbers.map((entry) => 1 / entry)))),
  ofNumbers("AVEDEV", "Mean distance from the mean.", 1, (numbers) => library.AVEDEV(numbers) as unknown),
  ofNumbers("SKEW", "Skewness of a sample.", 3, (numbers) => library.SKEW(numbers) as unknown),
  ofNumbers("KURT", "Excess kurtosis of a sample.", 4, (numbers) => library.KURT(numbers) as unknown),
  define("COUNT", "value, [more]...", "How many are numbers.", (values, evaluation) => {
    let count = 0;
    for (const value of values) {
      if (value instanceof Reference || isGrid(value)) {
        for (const row of asGrid(evaluation.read(value))) for (const entry of row) if (typeof entry === "number") count++;
      } else if (!(value instanceof Lambda) && typeof take(value, "n", evaluation) === "number") count++;
    }
    return count;
  }),
  define("COUNTA", "value, [more]...", "How many are not blank.", (values, evaluation) => everyScalar(values, evaluation).filter((entry) => entry !== null).length),
  define("COUNTBLANK", "range", "How many are blank.", (values, evaluation) => everyScalar(values, evaluation).filter((entry) => entry === null || entry === "").length),
  define("SUMPRODUCT", "table, [more]...", "Multiplies tables entry by entry and adds up.", (values, evaluation) => {
    const tables = values.map((value) => asGrid(evaluation.read(value)));
    const first = tables[0]!;
    let total = 0;
    for (const table of tables) if (table.length !== first.length || table[0]!.length !== first[0]!.length) return new Fault("#VALUE!", "The tables differ in shape.");
    for (let row = 0; row < first.length; row++) {
      for (let column = 0; column < first[0]!.length; column++) {
        let product = 1;
        for (const table of tables) {
          const entry = table[row]![column]!;
          if (entry instanceof Fault) return entry;
          product *= typeof entry === "number" ? entry : 0;
        }
        total += product;
      }
    }
    return fromLibrary(total);
  }),
  ofPairs("SUMXMY2", "first", "second", "Adds the squared differences of two tables.", (x, y) => sum(x.map((entry, index) => (entry - y[index]!) ** 2))),
  ofPairs("CORREL", "first", "second", "Correlation of two ranges.", (x, y) => library.CORREL(x, y) as unknown),
  ofPairs("SLOPE", "y", "x", "Slope of the straight line through points.", (y, x) => library.SLOPE(y, x) as unknown),
  ofPairs("INTERCEPT", "y", "x", "Height at 0 of the straight line through points.", (y, x) => library.INTERCEPT(y, x) as unknown),
  ofPairs("RSQ", "y", "x", "Square of the correlation.", (y, x) => library.RSQ(y, x) as unknown),
  withNumber("LARGE", "The k-th largest number.", "k", (numbers, k) => numbers.sort((a, b) => b - a)[Math.ceil(k) - 1] ?? new Fault("#NUM!", `There is no number ${k} among ${numbers.length}.`)),
  withNumber("SMALL", "The k-th smallest number.", "k", (numbers, k) => numbers.sort((a, b) => a - b)[Math.ceil(k) - 1] ?? new Fault("#NUM!", `There is no number ${k} among ${numbers.length}.`)),
  withNumber("PERCENTILE.INC", "The value below which the fraction of numbers lies, ends included.", "fraction", (numbers, fraction) => quantile(numbers, fraction)),
  withNumber("PERCENTILE", "The value below which the fraction of numbers lies, ends included.", "fraction", (numbers, fraction) => quantile(numbers, fraction)),
  withNumber("QUARTILE.INC", "A quarter point of numbers, 0 to 4.", "quarter", (numbers, quarter) => quantile(numbers, Math.trunc(quarter) / 4)),
  define("RANK", "number, range, [ascending]", "The place of a number among others, 1 for the largest.", rank),
  define("RANK.EQ", "number, range, [ascending]", "The place of a number among others, 1 for the largest.", rank),
  ofOne("SUMIF", "Adds the cells that meet a criterion.", sum),
  ofOne("AVERAGEIF", "The mean of the cells that meet a criterion.", mean),
  define("COUNTIF", "range, criterion", "Counts the cells that meet a criterion.", countMatching),
  define("COUNTIFS", "range, criterion, [more]...", "Counts where all criteria are met.", countMatching),
  ofSeveral("SUMIFS", "Adds the cells where all criteria are met.", sum),
  ofSeveral("AVERAGEIFS", "The mean of the cells where all criteria are met.", mean),
  ofSeveral("MAXIFS", "The largest of the cells where all criteria are met.", (numbers) => (numbers.length === 0 ? 0 : largest(numbers))),
  ofSeveral("MINIFS", "The smallest of the cells where all criteria are met.", (numbers) => (numbers.length === 0 ? 0 : smallest(numbers))),
];

function quantile(numbers: number[], fraction: number): Scalar {
  if (!(fraction >= 0 && fraction <= 1)) return new Fault("#NUM!", `${fraction} is not a fraction from 0 to 1.`);
  numbers.sort((a, b) => a - b);
  const place = fraction * (numbers.length - 1);
  const below = Math.floor(place);
  const low = numbers[below]!;
  return low + (place - below) * ((numbers[below + 1] ?? low) - low);
}

function rank(values: readonly Value[], evaluation: Evaluation): Scalar {
  const number = numberFrom(values[0], evaluation, 0);
  if (number instanceof Fault) return number;
  const numbers = numbersIn(values.slice(1, 2), evaluation);
  if (numbers instanceof Fault) return numbers;
  const ascending = numberFrom(values[2], evaluation, 0);
  if (ascending instanceof Fault) return ascending;
  if (!numbers.includes(number)) return new Fault("#N/A", `${number} is not among the numbers.`);
  return 1 + numbers.filter((entry) => (ascending !== 0 ? entry < number : entry > number)).length;
}
