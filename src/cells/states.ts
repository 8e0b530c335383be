import { Problem } from "../chain/problem";
import { isEmpty, isText, nameKey } from "../table/cell";
import type { CellValue, RateTable } from "../table/rate-table";
import { cellsOf, placeIn, shown, type Argument } from "./argument";

/** Mask of n states: 1 = in the set. */
export type StateSet = Uint8Array;

/** The names that stand for the states in results; also accepted wherever a name is. */
export function labelsOf(table: { readonly names: readonly string[] | null; readonly size: number }): string[] {
  return table.names ? [...table.names] : Array.from({ length: table.size }, (_, i) => `State ${i + 1}`);
}

const keysOfTables = new WeakMap<object, ReadonlyMap<string, number>>();

function statesByKey(table: RateTable): ReadonlyMap<string, number> {
  let keys = keysOfTables.get(table);
  if (!keys) {
    keys = new Map(labelsOf(table).map((name, i) => [nameKey(name), i]));
    keysOfTables.set(table, keys);
  }
  return keys;
}

/**
 * The state that a cell names: by name, without regard to case and outer blanks, or by number, 1 the first.
 * A number that is no state number but heads a state is taken as that name; one that could be either is refused.
 * @throws stateUnknown, stateNumberOutside, stateAmbiguous
 */
export function stateIn(cell: CellValue, table: RateTable, where: Readonly<Record<string, string | number>>): number {
  const named = statesByKey(table).get(nameKey(String(cell)));
  if (isText(cell)) {
    if (named !== undefined) return named;
    throw new Problem("stateUnknown", { ...where, found: cell.trim(), size: table.size });
  }
  if (typeof cell !== "number") throw new Problem("stateUnknown", { ...where, found: shown(cell), size: table.size });
  const isNumber = Number.isInteger(cell) && cell >= 1 && cell <= table.size;
  if (isNumber && named !== undefined && named !== cell - 1)
    throw new Problem("stateAmbiguous", { ...where, number: cell, named, other: labelsOf(table)[cell - 1] });
  if (isNumber) return cell - 1;
  if (named !== undefined) return named;
  throw new Problem("stateNumberOutside", { ...where, value: cell, size: table.size });
}

/** One state where exactly one is needed. */
export function readState(argument: Argument, name: string, table: RateTable): number {
  const { cells, rows, columns } = cellsOf(argument, name);
  if (cells.length !== 1) throw new Problem("oneStateNeeded", { argument: name, rows, columns });
  if (isEmpty(cells[0])) throw new Problem("stateMissing", { argument: name });
  return stateIn(cells[0], table, { argument: name });
}

/**
 * A set of states: names and numbers in any shape, blanks skipped; or a mask of exactly n cells, TRUE, FALSE, 1, 0 or
 * blank, which wins where both readings fit.
 * @throws stateMissing where no state is in it, and what `stateIn` throws
 */
export function readStates(argument: Argument, name: string, table: RateTable): StateSet {
  const { cells, rows, columns } = cellsOf(argument, name);
  const set = new Uint8Array(table.size);
  const isMask = cells.length === table.size && cells.every((cell) => cell === 0 || cell === 1 || typeof cell === "boolean" || isEmpty(cell));
  cells.forEach((cell, at) => {
    if (isMask) set[at] = cell === 1 || cell === true ? 1 : 0;
    else if (cell !== 0 && !isEmpty(cell)) set[stateIn(cell, table, placeIn(name, at, rows, columns))] = 1;
  });
  if (!set.includes(1)) throw new Problem("stateMissing", { argument: name });
  return set;
}
