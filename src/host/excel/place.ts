/** Cells as the pane counts them (from 0) and as Excel writes them. */
import { type RangeAddress } from "../../pane/workbook";
import { HostRefusal } from "./run";

export const ROWS = 1_048_576;
export const COLUMNS = 16_384;

/** The letters of a column: 0 is A, 26 is AA. */
export function columnLetters(column: number): string {
  let text = "";
  for (let rest = column + 1; rest > 0; rest = Math.floor((rest - 1) / 26)) text = String.fromCharCode(65 + ((rest - 1) % 26)) + text;
  return text;
}

export const cellText = (row: number, column: number): string => columnLetters(column) + (row + 1);

/** "Plan!B3", with the sheet's name in quotation marks where a formula would need them. */
export function placeText(sheet: string, row: number, column: number): string {
  const name = /^[A-Za-z_][A-Za-z0-9_]*$/.test(sheet) ? sheet : `'${sheet.replace(/'/g, "''")}'`;
  return `${name}!${cellText(row, column)}`;
}

/** The range on its sheet. @throws a sentence where it does not fit on a sheet */
export function rangeAt(context: Excel.RequestContext, at: RangeAddress): Excel.Range {
  if (at.row < 0 || at.column < 0 || at.rows < 1 || at.columns < 1 || at.row + at.rows > ROWS || at.column + at.columns > COLUMNS) {
    throw new HostRefusal(`${placeText(at.sheet, Math.max(0, at.row), Math.max(0, at.column))}: ${at.rows} × ${at.columns} cells do not fit there on a sheet.`);
  }
  return context.workbook.worksheets.getItem(at.sheet).getRangeByIndexes(at.row, at.column, at.rows, at.columns);
}

/** The part that two ranges of one sheet share, or null. */
export function overlap(a: RangeAddress, b: RangeAddress): RangeAddress | null {
  const row = Math.max(a.row, b.row);
  const column = Math.max(a.column, b.column);
  const rows = Math.min(a.row + a.rows, b.row + b.rows) - row;
  const columns = Math.min(a.column + a.columns, b.column + b.columns) - column;
  return rows > 0 && columns > 0 ? { sheet: a.sheet, row, column, rows, columns } : null;
}
