import { Problem } from "../chain/problem";
import { readRateTable } from "../table/read";
import type { Cells, RateTable } from "../table/rate-table";

/**
 * Jumps observed, in either form of a rate table: each arrow's "rate" is its count.
 * @throws countOnDiagonal, and the problems of the reader, worded for counts
 */
export function readCounts(cells: Cells): RateTable {
  try {
    return readRateTable(cells);
  } catch (problem) {
    if (!(problem instanceof Problem)) throw problem;
    const onDiagonal = /^(diagonal|rowSum)/.test(problem.code);
    throw new Problem(onDiagonal ? "countOnDiagonal" : problem.code, { ...problem.details, quantity: "count" }, problem.kind);
  }
}
