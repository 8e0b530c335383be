import { roundingBand, type Body } from "./body";

/**
 * What the numbers of a square table look like, decided by their sums alone.
 * - `rates`: nothing speaks against rates;
 * - `columnsSum`: with the given diagonal every column sums to 0 and some row does not;
 * - `probability`, `percent`: rows sum to 1 (or 100), nothing negative, a positive diagonal; or they fall short of it by less than a
 *   fifth, a class such as "not rated" left out, and every stay is its row's largest entry;
 * - `complement`: rows sum to 1 only because the diagonal goes below 0, or exits alone exceed 1 beside rows that sum to 1;
 * - `empty`: no number off the diagonal.
 */
export type Kind = "rates" | "columnsSum" | "probability" | "percent" | "complement" | "empty";

/** A probability table typed by hand may miss 1 by rounding. */
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
    if (largest <= 1 + SAME && (rowsSumTo(body, 1, PROBABILITY_SLACK) || rowsFallShortOf(body, 1))) return "probability";
    if (largest > 1 && (rowsSumTo(body, 100, 1) || (largest > 50 && rowsFallShortOf(body, 100)))) return "percent";
    if (largest <= 1 + SAME && someExitsAbove1(body)) return "complement";
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

/** Every filled row between four fifths of the total and the total, its diagonal entry the largest. */
function rowsFallShortOf(body: Body, total: number): boolean {
  let filled = 0;
  for (let i = 0; i < body.size; i++) {
    const { sum, entries } = lineSum(body, i, true);
    if (entries.length === 0) continue;
    const stay = body.values[i * body.size + i];
    if (!(sum >= 0.8 * total && sum <= 1.01 * total && entries.every((entry) => entry <= stay))) return false;
    filled++;
  }
  return filled >= Math.min(2, body.size);
}

/** Rows that sum to 1 with a stay on the diagonal, and beside them rows whose exits alone exceed 1. */
function someExitsAbove1(body: Body): boolean {
  let ones = 0;
  let above = 0;
  for (let i = 0; i < body.size; i++) {
    const { sum, entries } = lineSum(body, i, true);
    if (entries.length === 0) continue;
    if (body.exits[i] > 1 + SAME) above++;
    else if (Math.abs(sum - 1) <= Math.max(SAME, roundingBand(entries)) && body.values[i * body.size + i] > 0) ones++;
    else return false;
  }
  return ones > 0 && above > 0;
}

/** Exactly, while some row does not; or within the rounding of typed digits, while some row goes beyond it. */
function columnsSumToZero(body: Body): boolean {
  return [exactSlack, slackOf].some((slack) => {
    const sumsToZero = (line: LineSum): boolean => Math.abs(line.sum) <= slack(line);
    const lines = Array.from({ length: body.size }, (_, k) => k);
    return lines.every((k) => sumsToZero(lineSum(body, k, false))) && !lines.every((k) => sumsToZero(lineSum(body, k, true)));
  });
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

function exactSlack(line: LineSum): number {
  return SAME * line.size;
}

/** How far a line may miss zero: double precision, or the rounding of its typed digits. */
function slackOf(line: LineSum): number {
  return Math.max(exactSlack(line), roundingBand(line.entries) * (1 + SAME));
}

/** Whether some row stays more than a fiftieth below the total: a class is left out. */
export function fallShort(body: Body, total: number): boolean {
  for (let i = 0; i < body.size; i++) {
    const { sum, entries } = lineSum(body, i, true);
    if (entries.length > 0 && sum < 0.98 * total) return true;
  }
  return false;
}
