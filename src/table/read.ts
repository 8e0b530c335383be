import { listLikeness, readList } from "./list";
import type { Cells, Reading, RateTable } from "./rate-table";
import { readSquare } from "./square";

/**
 * Reads a range of cells as a rate table, in either form, as far as it can be read.
 *
 * Problems come in the order in which a formula refuses: layout, then cell by cell, then diagonals; each carries the cells
 * concerned as `details.span` = [row, column, rows, columns] in the given range, from 0. A list with a few broken
 * rows is read as a list, so that the rows are named, whenever it does not read as a square.
 */
export function read(cells: Cells): Reading {
  const likeness = listLikeness(cells);
  if (likeness === "list") return readList(cells);
  const square = readSquare(cells);
  return likeness === "nearly" && square.problems.length > 0 ? readList(cells) : square;
}

/** The table in a range of cells. @throws the first of the problems of `read` */
export function readRateTable(cells: Cells): RateTable {
  const { table, problems } = read(cells);
  if (!table) throw problems[0];
  return table;
}
