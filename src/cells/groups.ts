import { Problem } from "../chain/problem";
import { isVoid } from "../table/cell";
import type { RateTable } from "../table/rate-table";
import { cellsOf, type Argument } from "./argument";

/** A group name for each state, in the order of the table. @throws oneForEachState; a blank comes as "" */
export function readGroups(argument: Argument, table: RateTable): string[] {
  const { cells, rows, columns } = cellsOf(argument, "groups");
  if (cells.length !== table.size) throw new Problem("oneForEachState", { argument: "groups", rows, columns, size: table.size });
  return cells.map((cell) => (isVoid(cell) ? "" : String(cell).trim()));
}
