import { Problem } from "../chain/problem";
import { cellAt, isDash, isEmpty, isFault, numberInText } from "../table/cell";
import { squareLayout } from "../table/layout";
import type { RateTable } from "../table/rate-table";
import { shown, type Argument } from "./argument";
import { readStateMatrix } from "./matrix";
import { SUM_TOLERANCE } from "./start";

/** A table of one-period transition probabilities; rows sum to 1 exactly as far as doubles can. */
export interface ProbabilityTable {
  readonly size: number;
  readonly names: readonly string[] | null;
  readonly values: Float64Array;
}

/**
 * One-period transition probabilities, from-rows by to-columns, headings as in a rate table.
 * @throws probabilityNotNumber, probabilityOutside, probabilityPercent, probabilitySum, cellFault, and layout problems
 */
export function readProbabilities(argument: Argument): ProbabilityTable {
  if (argument === null) throw new Problem("argumentMissing", { argument: "probabilities" });
  const { layout, problems } = squareLayout(argument);
  if (!layout || problems.length > 0) throw problems[0];
  const { size, names, body } = layout;
  const values = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    let sum = 0;
    let outside: Problem | null = null;
    for (let j = 0; j < size; j++) {
      const cell = cellAt(argument, body.row + i, body.column + j);
      const where = { row: i, column: j, rowName: names?.[i] ?? null, span: [body.row + i, body.column + j, 1, 1] };
      if (isEmpty(cell) || isDash(cell)) continue;
      if (isFault(cell)) throw new Problem("cellFault", { ...where, fault: cell.fault });
      if (typeof cell !== "number" || !Number.isFinite(cell)) throw notNumber(cell, where);
      values[i * size + j] = cell;
      sum += cell;
      if (!(cell >= 0 && cell <= 1)) outside ??= new Problem("probabilityOutside", { ...where, value: cell });
    }
    const row = { row: i, rowName: names?.[i] ?? null, sum };
    if (outside) throw Math.abs(sum - 100) <= 1 ? new Problem("probabilityPercent", row) : outside;
    if (!(Math.abs(sum - 1) <= SUM_TOLERANCE)) throw new Problem("probabilitySum", row);
    for (let j = 0; j < size; j++) values[i * size + j] /= sum;
  }
  return { size, names, values };
}

function notNumber(cell: string | number | boolean | null, where: Readonly<Record<string, number | string | null | number[]>>): Problem {
  const reading = typeof cell === "string" ? numberInText(cell) : null;
  return new Problem(reading === null ? "probabilityNotNumber" : "rateIsText", { ...where, found: shown(cell), reading });
}

/**
 * n × n probabilities of the state that an inspection leaves behind (column) for the one it finds (row); a blank row changes
 * nothing, headings are matched to the table.
 * @throws resetOutside, resetSum, and what `readStateMatrix` throws
 */
export function readResets(argument: Argument, table: RateTable): Float64Array {
  const { values, blankRows } = readStateMatrix(argument, "resets", table);
  const n = table.size;
  for (let i = 0; i < n; i++) {
    if (blankRows[i]) {
      values[i * n + i] = 1;
      continue;
    }
    let sum = 0;
    for (let j = 0; j < n; j++) {
      const value = values[i * n + j];
      if (!(value >= 0 && value <= 1)) throw new Problem("resetOutside", { row: i, column: j, rowName: table.names?.[i] ?? null, value });
      sum += value;
    }
    if (!(Math.abs(sum - 1) <= SUM_TOLERANCE)) throw new Problem("resetSum", { row: i, rowName: table.names?.[i] ?? null, sum });
    for (let j = 0; j < n; j++) values[i * n + j] /= sum;
  }
  return values;
}
