import { Problem } from "../chain/problem";
import { isVoid, widthOf } from "./cell";
import { isNumberedList, listLikeness, readList } from "./list";
import type { Cells, Reading, RateTable } from "./rate-table";
import { readSquare } from "./square";

/**
 * Reads a range of cells as a rate table, in either form, as far as it can be read.
 *
 * Problems come in the order in which a formula refuses: layout, then cell by cell, then diagonals; each carries the cells
 * concerned as `details.span` = [row, column, rows, columns] in the given range, from 0. A list with a few broken
 * rows, with numbers for names or with columns behind it is refused as a list, whenever it does not read as a square.
 */
export function read(cells: Cells): Reading {
  const likeness = listLikeness(cells);
  if (likeness === "list") return readList(cells);
  const square = readSquare(cells);
  if (square.problems.length === 0) return square;
  if (likeness === "nearly" || isNumberedList(cells)) return readList(cells);
  return square.layout ? square : (tooWideList(cells) ?? square);
}

/** A list with more columns behind it, such as units or sources: they are not part of the form. */
function tooWideList(cells: Cells): Reading | null {
  if (listLikeness(cells.map((row) => row.slice(0, 3))) !== "list") return null;
  let column = widthOf(cells);
  for (const row of cells) {
    const filled = row.findIndex((cell, k) => k >= 3 && !isVoid(cell));
    if (filled >= 0 && filled < column) column = filled;
  }
  return { layout: null, problems: [new Problem("listTooWide", { column, span: [0, column, cells.length, 1] })], table: null };
}

/** The table in a range of cells. @throws the first of the problems of `read` */
export function readRateTable(cells: Cells): RateTable {
  const { table, problems } = read(cells);
  if (!table) throw problems[0];
  return table;
}
