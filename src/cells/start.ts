import { Problem } from "../chain/problem";
import { isEmpty } from "../table/cell";
import type { RateTable } from "../table/rate-table";
import { cellsOf, placeIn, shown, type Argument } from "./argument";
import { stateIn } from "./states";

/** How far given probabilities may be from a sum of 1; within it they are normalised. */
export const SUM_TOLERANCE = 1e-9;

/**
 * Where the chain starts: a state by name or number, or n probabilities in one row or column (blanks 0).
 * Left out: the first state. With a single state a lone 1 is the state.
 * @throws stateMissing, startShape, startProbability, startSum, and what `stateIn` throws
 */
export function readStart(argument: Argument, table: RateTable): Float64Array {
  const start = new Float64Array(table.size);
  if (argument === null) {
    start[0] = 1;
    return start;
  }
  const { cells, rows, columns } = cellsOf(argument, "start");
  if (cells.length === 1) {
    if (isEmpty(cells[0])) throw new Problem("stateMissing", { argument: "start" });
    start[stateIn(cells[0], table, { argument: "start" })] = 1;
    return start;
  }
  if (cells.length !== table.size || (rows > 1 && columns > 1)) throw new Problem("startShape", { rows, columns, size: table.size });
  cells.forEach((cell, at) => {
    const probability = isEmpty(cell) ? 0 : cell;
    if (typeof probability !== "number" || !(probability >= 0 && probability <= 1))
      throw new Problem("startProbability", { ...placeIn("start", at, rows, columns), found: shown(cell) });
    start[at] = probability;
  });
  return normalised(start);
}

/** Left out stays undefined: for questions that need a start only where the answer depends on it. */
export function readStartIfGiven(argument: Argument, table: RateTable): Float64Array | undefined {
  return argument === null ? undefined : readStart(argument, table);
}

function normalised(start: Float64Array): Float64Array {
  let sum = 0;
  let lost = 0;
  for (const p of start) {
    const next = sum + p;
    lost += sum >= p ? sum - next + p : p - next + sum;
    sum = next;
  }
  const total = sum + lost;
  if (Math.abs(total - 1) > SUM_TOLERANCE) throw new Problem("startSum", { argument: "start", sum: total });
  return total === 1 ? start : start.map((p) => p / total);
}
