import type { LogEntry } from "../chain/log";
import { Problem } from "../chain/problem";
import { cellAt, isFault, isText, isVoid } from "../table/cell";
import type { CellValue } from "../table/rate-table";
import { shown, type Argument } from "./argument";

/**
 * A log of three columns: unit, time, state entered. A first row with text for its time is headings; blank rows are ignored.
 * @throws logEmpty, logShape, logTime, logNameMissing, cellFault; rows count in the range
 */
export function readLog(argument: Argument): LogEntry[] {
  if (argument === null) throw new Problem("argumentMissing", { argument: "log" });
  const entries: LogEntry[] = [];
  const columns = argument.reduce((most, row) => Math.max(most, usedColumns(row)), 0);
  if (columns === 0) throw new Problem("logEmpty");
  if (columns !== 3) throw new Problem("logShape", { columns });
  const first = isText(cellAt(argument, 0, 1)) ? 1 : 0;
  for (let row = first; row < argument.length; row++) {
    const [unit, time, state] = [0, 1, 2].map((column) => cellAt(argument, row, column));
    for (const [column, cell] of [unit, time, state].entries())
      if (isFault(cell)) throw new Problem("cellFault", { listRow: row, column, fault: cell.fault });
    if (isVoid(unit) && isVoid(time) && isVoid(state)) continue;
    const number = time === "" || time === null ? 0 : time;
    if (typeof number !== "number" || !Number.isFinite(number)) throw new Problem("logTime", { row, found: shown(time) });
    entries.push({ unit: named(unit, row, "unit"), time: number, state: named(state, row, "state"), row });
  }
  return entries;
}

function usedColumns(row: readonly CellValue[]): number {
  let used = row.length;
  while (used > 0 && isVoid(row[used - 1])) used--;
  return used;
}

function named(cell: CellValue, row: number, what: string): string {
  if (isVoid(cell) || isFault(cell)) throw new Problem("logNameMissing", { row, what });
  return String(cell).trim();
}
