import { LARGEST_RATE, SMALLEST_RATE, Generator, type Arrow } from "../chain/generator";
import { Problem, type Detail } from "../chain/problem";
import { cellAt, isDash, isDiagonalMark, isEmpty, isFault, numberInText } from "./cell";
import { squareLayout } from "./layout";
import type { Cells, CellValue, Layout, Reading, TableArrow } from "./rate-table";

/** A given diagonal must agree with minus the exits to this part of the exit rate. */
export const DIAGONAL_TOLERANCE = 1e-9;
/** A table can hold more wrong cells than anybody reads; beyond this many no more are listed. */
export const MOST_PROBLEMS = 500;

/** Reads the from-rows by to-columns form. Problems: layout first, then cells row by row, then given diagonals. */
export function readSquare(cells: Cells, options: { readonly exact?: boolean } = {}): Reading {
  const { layout, problems: layoutProblems } = squareLayout(cells, options);
  if (!layout) return { layout, problems: layoutProblems, table: null };
  const problems: Problem[] = [...layoutProblems];
  const arrows: TableArrow[] = [];
  const diagonals: Problem[] = [];
  const givenDiagonal: (number | null)[] = [];
  for (let i = 0; i < layout.size; i++) {
    const before = problems.length;
    const firstArrow = arrows.length;
    let diagonal: number | null = null;
    for (let j = 0; j < layout.size; j++) {
      const place = { row: layout.body.row + i, column: layout.body.column + j };
      const cell = cellAt(cells, place.row, place.column);
      if (cell === 0 || isEmpty(cell) || isDash(cell) || (i === j && isDiagonalMark(cell))) continue;
      const where = { row: i, column: j, rowName: layout.names?.[i] ?? null, span: [place.row, place.column, 1, 1] };
      const value = rateIn(cell, where);
      if (value instanceof Problem) problems.push(value);
      else if (i === j) diagonal = value;
      else {
        const problem = rateProblem(value, where);
        if (problem) problems.push(problem);
        else arrows.push({ from: i, to: j, rate: value, place });
      }
      if (problems.length >= MOST_PROBLEMS) return { layout, problems, table: null };
    }
    givenDiagonal.push(diagonal);
    if (diagonal !== null && problems.length === before && diagonals.length < MOST_PROBLEMS) {
      const problem = diagonalProblem(diagonal, arrows.slice(firstArrow), i, layout);
      if (problem) diagonals.push(problem);
    }
  }
  problems.push(...diagonals);
  if (problems.length > 0) return { layout, problems, table: null };
  const generator = Generator.fromArrows(layout.size, arrows.map(({ from, to, rate }): Arrow => [from, to, rate]));
  return { layout, problems, table: { ...layout, generator, arrows, givenDiagonal } };
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
function diagonalProblem(given: number, exits: readonly TableArrow[], row: number, layout: Layout): Problem | null {
  const rates = exits.map((arrow) => arrow.rate);
  const sum = Generator.fromArrows(exits.length + 1, rates.map((rate, k): Arrow => [0, k + 1, rate])).exitRate[0];
  if (Math.abs(given + sum) <= DIAGONAL_TOLERANCE * sum) return null;
  const span = [layout.body.row + row, layout.body.column + row, 1, 1];
  const total = given > 0 ? [1, 100].find((whole) => Math.abs(given + sum - whole) <= 1e-6 * whole) : undefined;
  const details = { row, column: row, rowName: layout.names?.[row] ?? null, given, exits: sum, gap: given + sum, total: total ?? null, span };
  if (exits.length === 0) return new Problem("diagonalWithoutExits", details);
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
