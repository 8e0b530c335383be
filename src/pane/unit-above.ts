import { timeUnits } from "../audit/words";
import { plainUnit } from "../cells/sentences/arrows";
import type { RangeAddress, Workbook } from "./workbook";

const ROWS_ABOVE = 4;

/** The time unit that the labels right above a table, or its corner, speak of; "" where they name none or several. */
export async function unitAbove(workbook: Workbook, { sheet, row, column, columns }: RangeAddress): Promise<string> {
  const first = Math.max(0, row - ROWS_ABOVE);
  const left = Math.max(0, column - 1);
  const range = { sheet, row: first, column: left, rows: row + 1 - first, columns: column + columns - left };
  const { values } = await workbook.read(range);
  const labels = values.flatMap((line, at) => (at < range.rows - 1 ? line : [line[column - left]]));
  const units = new Set(labels.flatMap((label) => (typeof label === "string" ? timeUnits(label) : [])));
  return units.size === 1 ? plainUnit([...units][0]) : "";
}
