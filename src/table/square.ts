import { compensatedSum, LARGEST_RATE, SMALLEST_RATE, Generator } from "../chain/generator";
import { Problem, type Detail } from "../chain/problem";
import { isDash, isDiagonalMark, isEmpty, isFault, numberInText } from "./cell";
import { squareLayout } from "./layout";
import type { Cells, CellValue, Layout, RateTable, Reading, TableArrow } from "./rate-table";

/** A given diagonal must agree with minus the exits to this part of the exit rate. */
export const DIAGONAL_TOLERANCE = 1e-9;
/** A table can hold more wrong cells than anybody reads; beyond this many no more are listed. */
export const MOST_PROBLEMS = 500;

/** Reads the from-rows by to-columns form. Problems: layout first, then cells row by row, then given diagonals. */
export function readSquare(cells: Cells, options: { readonly exact?: boolean } = {}): Reading {
  const { layout, problems: layoutProblems } = squareLayout(cells, options);
  if (!layout) return { layout, problems: layoutProblems, table: null };
  const { size, body } = layout;
  const problems: Problem[] = [...layoutProblems];
  const diagonals: Problem[] = [];
  const givenDiagonal: (number | null)[] = [];
  const rowStart = new Int32Array(size + 1);
  const toState: number[] = [];
  const rates: number[] = [];
  for (let i = 0; i < size; i++) {
    const before = problems.length;
    const row = cells[body.row + i];
    let diagonal: number | null = null;
    for (let j = 0; j < size; j++) {
      const cell = row[body.column + j] ?? "";
      if (cell === 0 || cell === "") continue;
      if (i !== j && isPlainRate(cell)) {
        toState.push(j);
        rates.push(cell);
        continue;
      }
      if (isEmpty(cell) || isDash(cell) || (i === j && isDiagonalMark(cell))) continue;
      const where = { row: i, column: j, rowName: layout.names?.[i] ?? null, span: [body.row + i, body.column + j, 1, 1] };
      const value = rateIn(cell, where);
      if (value instanceof Problem) problems.push(value);
      else if (i === j) diagonal = value;
      else problems.push(rateProblem(value, where)!);
      if (problems.length >= MOST_PROBLEMS) return { layout, problems, table: null };
    }
    rowStart[i + 1] = rates.length;
    givenDiagonal.push(diagonal);
    if (diagonal !== null && problems.length === before && diagonals.length < MOST_PROBLEMS) {
      const problem = diagonalProblem(diagonal, rates.slice(rowStart[i]), i, layout);
      if (problem) diagonals.push(problem);
    }
  }
  problems.push(...diagonals);
  if (problems.length > 0) return { layout, problems, table: null };
  const generator = Generator.fromRows(size, rowStart, new Int32Array(toState), new Float64Array(rates));
  return { layout, problems, table: new SquareTable(layout, generator, givenDiagonal) };
}

/** A table read from a square. Its arrows with their places are made when somebody asks: formulas do not. */
class SquareTable implements RateTable {
  readonly form;
  readonly headings;
  readonly body;
  readonly size;
  readonly names;
  private placed: TableArrow[] | null = null;

  constructor(
    layout: Layout,
    readonly generator: Generator,
    readonly givenDiagonal: readonly (number | null)[],
  ) {
    ({ form: this.form, headings: this.headings, body: this.body, size: this.size, names: this.names } = layout);
  }

  get arrows(): readonly TableArrow[] {
    const { row, column } = this.body;
    this.placed ??= Array.from(this.generator.arrows(), ([from, to, rate]) => ({ from, to, rate, place: { row: row + from, column: column + to } }));
    return this.placed;
  }
}

function isPlainRate(cell: CellValue): cell is number {
  return typeof cell === "number" && cell >= SMALLEST_RATE && cell <= LARGEST_RATE;
}

type Where = Readonly<Record<string, Detail>>;

/** The number in a rate cell that is neither blank nor a dash, or why there is none. */
export function rateIn(cell: CellValue, where: Where): number | Problem {
  if (typeof cell === "number") return Number.isFinite(cell) ? cell : new Problem("rateNotFinite", where);
  if (isFault(cell)) return new Problem("cellFault", { ...where, fault: cell.fault });
  if (typeof cell === "string") {
    const reading = numberInText(cell);
    return reading === null ? new Problem("rateNotNumber", { ...where, found: cell.trim() }) : new Problem("rateIsText", { ...where, found: cell.trim(), reading });
  }
  return new Problem("rateNotNumber", { ...where, found: String(cell).toUpperCase() });
}

export function rateProblem(rate: number, where: Where): Problem | null {
  if (rate < 0) return new Problem("rateNegative", { ...where, rate });
  if (rate > LARGEST_RATE || rate < SMALLEST_RATE) return new Problem("rateOutOfRange", { ...where, rate });
  return null;
}

/** Why a given diagonal is refused; `total` is 1 or 100 where the row looks like probabilities or percent. */
function diagonalProblem(given: number, rates: readonly number[], row: number, layout: Layout): Problem | null {
  const sum = compensatedSum(rates, 0, rates.length);
  if (Math.abs(given + sum) <= DIAGONAL_TOLERANCE * sum) return null;
  const span = [layout.body.row + row, layout.body.column + row, 1, 1];
  const total = given > 0 ? [1, 100].find((whole) => Math.abs(given + sum - whole) <= 1e-6 * whole) : undefined;
  const details = { row, column: row, rowName: layout.names?.[row] ?? null, given, exits: sum, gap: given + sum, total: total ?? null, span };
  if (rates.length === 0) return new Problem("diagonalWithoutExits", details);
  if (given > 0) return new Problem("diagonalPositive", details);
  return new Problem(isRounding(given, rates) ? "rowSumRounded" : "rowSum", details);
}

/**
 * Whether typed digits alone explain the gap: at most half a unit of the last typed digit for each number of the row.
 * A gap of a twentieth of the exits and more is no rounding, however few digits were typed.
 */
function isRounding(given: number, rates: readonly number[]): boolean {
  const typed = [given, ...rates];
  const digits = Math.max(...typed.map(decimals));
  const gap = Math.abs(rates.reduce((sum, rate) => sum + rate, given));
  return digits < 15 && gap < -given / 20 && gap <= typed.length * 0.5 * 10 ** -digits * (1 + 1e-9);
}

/** Decimals in the shortest decimal form of a number; negative for 1e21 and the like. */
function decimals(value: number): number {
  const [mantissa, exponent] = value.toExponential().split("e");
  return (mantissa.split(".")[1]?.length ?? 0) - Number(exponent);
}
