import { roundingBand, type Body } from "./body";

/**
 * What the numbers of a square table look like, decided by their sums alone.
 * - `rates`: nothing speaks against rates;
 * - `columnsSum`: with the given diagonal every column sums to 0 and some row does not;
 * - `probability`, `percent`: rows sum to 1 (or 100), nothing negative, a positive diagonal;
 * - `complement`: rows sum to 1 only because the diagonal goes below 0;
 * - `empty`: no number off the diagonal.
 */
export type Kind = "rates" | "columnsSum" | "probability" | "percent" | "complement" | "empty";

/** A probability table typed by hand may miss 1 by rounding or by a small class left out, such as "not rated". */
const PROBABILITY_SLACK = 0.02;
const SAME = 1e-9;

export function kindOf(body: Body): Kind {
  const { size: n, values } = body;
  if (body.form === "list") return "rates";
  let positives = 0;
  let negativeOff = 0;
  let diagonalUp = 0;
  let diagonalDown = 0;
  let largest = 0;
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      const value = values[i * n + j];
      if (i === j) {
        if (value > 0) diagonalUp++;
        if (value < 0) diagonalDown++;
      } else if (value > 0) positives++;
      else if (value < 0) negativeOff++;
      if (value > largest) largest = value;
    }
  if (positives === 0) return "empty";
  if (negativeOff === 0 && diagonalUp > 0 && diagonalDown === 0) {
    if (rowsSumTo(body, 1, PROBABILITY_SLACK) && largest <= 1 + SAME) return "probability";
    if (rowsSumTo(body, 100, 1) && largest > 1) return "percent";
  }
  if (negativeOff === 0 && diagonalDown > 0 && rowsSumTo(body, 1, 1e-6)) return "complement";
  if (diagonalDown > 0 && columnsSumToZero(body)) return "columnsSum";
  return "rates";
}

/** Every filled row within `slack` (or its rounding band) of the total; at least two of them, or all there are. */
function rowsSumTo(body: Body, total: number, slack: number): boolean {
  let filled = 0;
  for (let i = 0; i < body.size; i++) {
    const { sum, entries } = lineSum(body, i, true);
    if (entries.length === 0) continue;
    if (!(Math.abs(sum - total) <= Math.max(slack, roundingBand(entries)) && Math.abs(sum - total) < total / 2)) return false;
    filled++;
  }
  return filled >= Math.min(2, body.size);
}

function columnsSumToZero(body: Body): boolean {
  let rowsBroken = false;
  for (let k = 0; k < body.size; k++) {
    const column = lineSum(body, k, false);
    if (!(Math.abs(column.sum) <= slackOf(column))) return false;
    const row = lineSum(body, k, true);
    if (!(Math.abs(row.sum) <= slackOf(row))) rowsBroken = true;
  }
  return rowsBroken;
}

export interface LineSum {
  readonly sum: number;
  /** Sum of the sizes of the entries. */
  readonly size: number;
  /** The entries that are not 0. */
  readonly entries: readonly number[];
}

/** A row (or column) of the body with its diagonal entry. */
export function lineSum(body: Body, line: number, isRow: boolean): LineSum {
  const entries: number[] = [];
  let sum = 0;
  let size = 0;
  for (let k = 0; k < body.size; k++) {
    const value = body.values[isRow ? line * body.size + k : k * body.size + line];
    if (value === 0) continue;
    entries.push(value);
    sum += value;
    size += Math.abs(value);
  }
  return { sum, size, entries };
}

/** How far a line may miss zero: double precision, or the rounding of its typed digits. */
export function slackOf(line: LineSum): number {
  return Math.max(SAME * line.size, roundingBand(line.entries) * (1 + SAME));
}
