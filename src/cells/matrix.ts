import { Problem } from "../chain/problem";
import { cellAt, isDash, isDiagonalMark, isEmpty, isFault, isVoid } from "../table/cell";
import type { RateTable } from "../table/rate-table";
import { shown, type Argument } from "./argument";
import { stateIn } from "./states";

/** n × n numbers in the order of a table's states, row-major, and which rows were left blank. */
export interface StateMatrix {
  readonly values: Float64Array;
  readonly blankRows: readonly boolean[];
}

/**
 * An n × n argument that goes with a table: costs of jumps, resets. No line of it is left out. Headings on top, on the
 * left or both are allowed and then matched to the table's states, so that their order is free.
 * @throws matrixShape, headingBlank, headingTwice, numberNeeded, argumentFault, and what `stateIn` throws
 */
export function readStateMatrix(argument: Argument, name: string, table: RateTable): StateMatrix {
  if (argument === null) throw new Problem("argumentMissing", { argument: name });
  const n = table.size;
  const rows = argument.length;
  const columns = argument[0]?.length ?? 0;
  const top = rows === n + 1 ? 1 : 0;
  const left = columns === n + 1 ? 1 : 0;
  if (rows !== n + top || columns !== n + left) throw new Problem("matrixShape", { argument: name, rows, columns, size: n });
  const toState = top ? matched(argument, name, table, "column", left) : null;
  const fromState = left ? matched(argument, name, table, "row", top) : toState;
  const values = new Float64Array(n * n);
  const blankRows: boolean[] = new Array<boolean>(n).fill(true);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      const from = fromState ? fromState[i] : i;
      const to = (toState ?? fromState)?.[j] ?? j;
      const cell = cellAt(argument, i + top, j + left);
      const where = { argument: name, row: i, column: j };
      if (isFault(cell)) throw new Problem("argumentFault", { ...where, fault: cell.fault });
      if (cell === 0 || isEmpty(cell) || isDash(cell) || (from === to && isDiagonalMark(cell))) continue;
      if (typeof cell !== "number" || !Number.isFinite(cell)) throw new Problem("numberNeeded", { ...where, found: shown(cell) });
      values[from * n + to] = cell;
      blankRows[from] = false;
    }
  return { values, blankRows };
}

/** Costs of jumps, or null when left out. */
export function readJumpCosts(argument: Argument, table: RateTable): Float64Array | null {
  return argument === null ? null : readStateMatrix(argument, "jumpCosts", table).values;
}

function matched(cells: NonNullable<Argument>, argument: string, table: RateTable, side: "row" | "column", offset: number): Int32Array {
  const states = new Int32Array(table.size);
  const seen = new Map<number, number>();
  for (let k = 0; k < table.size; k++) {
    const cell = side === "row" ? cellAt(cells, k + offset, 0) : cellAt(cells, 0, k + offset);
    if (isFault(cell)) throw new Problem("argumentFault", { argument: `${argument}, heading of ${side} ${k + 1}`, fault: cell.fault });
    if (isVoid(cell)) throw new Problem("headingBlank", { argument, side, index: k });
    states[k] = stateIn(cell, table, { argument: `${argument}, heading of ${side} ${k + 1}` });
    const earlier = seen.get(states[k]);
    if (earlier !== undefined) throw new Problem("headingTwice", { argument, side, first: earlier, second: k, name: String(cell) });
    seen.set(states[k], k);
  }
  return states;
}
