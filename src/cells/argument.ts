import { Problem } from "../chain/problem";
import { isEmpty, isFault } from "../table/cell";
import type { Cells, CellValue } from "../table/rate-table";

/** What a formula was given in one place: a range of cells, or null where the argument was left out. */
export type Argument = Cells | null;

/** The cells of an argument in reading order, with their shape. @throws argumentMissing, argumentFault */
export function cellsOf(argument: Argument, name: string): { cells: CellValue[]; rows: number; columns: number } {
  if (argument === null || argument.length === 0 || argument[0].length === 0) throw new Problem("argumentMissing", { argument: name });
  const rows = argument.length;
  const columns = argument[0].length;
  const cells: CellValue[] = new Array(rows * columns);
  for (let i = 0; i < rows; i++)
    for (let j = 0; j < columns; j++) {
      const cell = argument[i][j] ?? "";
      if (isFault(cell)) throw new Problem("argumentFault", { ...placeIn(name, i * columns + j, rows, columns), fault: cell.fault });
      cells[i * columns + j] = cell;
    }
  return { cells, rows, columns };
}

/** Where a cell of an argument stands, for a sentence; a single cell has no row and column worth telling. */
export function placeIn(argument: string, at: number, rows: number, columns: number): { argument: string; row?: number; column?: number } {
  return rows * columns === 1 ? { argument } : { argument, row: Math.floor(at / columns), column: at % columns };
}

/** A cell as people read it in a sentence. */
export function shown(cell: CellValue): string | null {
  if (isEmpty(cell)) return null;
  return isFault(cell) ? cell.fault : typeof cell === "string" ? cell.trim() : String(cell).toUpperCase();
}

/** The one cell of an argument that takes one value. @throws oneValueNeeded */
export function singleCell(argument: Argument, name: string): CellValue {
  const { cells, rows, columns } = cellsOf(argument, name);
  if (cells.length !== 1) throw new Problem("oneValueNeeded", { argument: name, rows, columns });
  return cells[0];
}

/** TRUE or FALSE, 1 or 0, a blank is FALSE; FALSE when left out. @throws flagUnknown */
export function readFlag(argument: Argument, name: string): boolean {
  if (argument === null) return false;
  const cell = singleCell(argument, name);
  if (cell === true || cell === 1) return true;
  if (cell === false || cell === 0 || isEmpty(cell)) return false;
  throw new Problem("flagUnknown", { argument: name, found: shown(cell) });
}
