import { Problem, type Detail } from "../chain/problem";
import type { RateTable } from "../table/rate-table";
import { sentenceOf } from "./sentences/problems";
import { labelsOf } from "./states";

/** A cell without an answer: what is said in it. "input" shows as #VALUE!, "noAnswer" as #N/A. */
export interface Refusal {
  readonly refusal: "input" | "noAnswer";
  readonly sentence: string;
}

/** What a formula shows in one cell. Plain data, so that it can cross from a worker. */
export type AnswerCell = number | string | boolean | Refusal;
export type Answer = AnswerCell[][];

/** Spills beyond these are refused: the host takes about 5 MB at once and has 16,384 columns. */
export const MOST_CELLS = 100_000;
export const MOST_COLUMNS = 16_384;

export function refusal(problem: Problem): Refusal {
  return { refusal: problem.kind, sentence: sentenceOf(problem) };
}

/** Refuses a spill that the host cannot show. Called before the work is done. @throws spillTooLarge */
export function checkSpill(rows: number, columns: number): void {
  if (rows * columns > MOST_CELLS || columns > MOST_COLUMNS)
    throw new Problem("spillTooLarge", { rows, columns, cells: rows * columns, most: columns > MOST_COLUMNS ? MOST_COLUMNS : MOST_CELLS, wide: columns > MOST_COLUMNS || null });
}

/**
 * Numbers, row-major, as cells. No NaN, infinity or minus zero leaves: the host would show the first two as 0.
 * `missing` says why a value does not exist; without it every value must.
 */
export function cellsFrom(
  values: ArrayLike<number>,
  rows: number,
  columns: number,
  missing: (row: number, column: number, value: number) => Problem = () => new Problem("valueLost", {}, "noAnswer"),
): Answer {
  const cells: Answer = [];
  for (let i = 0; i < rows; i++) {
    const row: AnswerCell[] = new Array(columns);
    for (let j = 0; j < columns; j++) {
      const value = values[i * columns + j];
      row[j] = Number.isFinite(value) ? value + 0 : refusal(missing(i, j, value));
    }
    cells.push(row);
  }
  return cells;
}

/** Adds names on top and on the left, as far as given, with an empty corner. */
export function withHeadings(cells: Answer, top: readonly string[] | null, left: readonly (string | number)[] | null): Answer {
  const body = left ? cells.map((row, i) => [left[i], ...row]) : cells;
  return top ? [left ? ["", ...top] : [...top], ...body] : body;
}

/** Shape with headings, checked; `top` and `left` say which lines are added. */
export function checkSpillWith(headings: boolean, rows: number, columns: number, lines: { top?: boolean; left?: boolean }): void {
  checkSpill(rows + (headings && lines.top ? 1 : 0), columns + (headings && lines.left ? 1 : 0));
}

/** A problem of the chain, which knows only numbers, with the names of the states for its sentence. */
export function withNames(problem: unknown, table: Pick<RateTable, "names" | "size">): unknown {
  if (!(problem instanceof Problem) || problem.details.names !== undefined) return problem;
  const names: Detail = labelsOf(table);
  return new Problem(problem.code, { ...problem.details, names }, problem.kind);
}
