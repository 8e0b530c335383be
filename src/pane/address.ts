import { rangeName } from "../audit/a1";
import type { RangeAddress } from "./workbook";

/** "B2:F6", or "D4" for one cell; the sheet is left out. */
export function cellText(range: RangeAddress): string {
  return rangeName(range);
}

/** "Chiller rates B2:F6", for reading (not a formula reference). */
export function placeText(range: RangeAddress): string {
  return `${range.sheet} ${cellText(range)}`;
}

/** A part of a range, given from the range's own corner; may lie outside it, but never off the sheet. */
export function within(range: RangeAddress, part: { row: number; column: number; rows: number; columns: number }): RangeAddress {
  const row = Math.max(0, range.row + part.row);
  const column = Math.max(0, range.column + part.column);
  return { sheet: range.sheet, row, column, rows: part.rows, columns: part.columns };
}

export function sameRange(a: RangeAddress | null, b: RangeAddress | null): boolean {
  return a === b || (!!a && !!b && contains(a, b) && contains(b, a));
}

/** Is `inner` wholly inside `outer`? */
export function contains(outer: RangeAddress, inner: RangeAddress): boolean {
  return (
    outer.sheet === inner.sheet &&
    inner.row >= outer.row &&
    inner.column >= outer.column &&
    inner.row + inner.rows <= outer.row + outer.rows &&
    inner.column + inner.columns <= outer.column + outer.columns
  );
}

/** The cells that both ranges hold; null when they do not meet. */
export function overlap(a: RangeAddress, b: RangeAddress): RangeAddress | null {
  if (a.sheet !== b.sheet) return null;
  const row = Math.max(a.row, b.row);
  const column = Math.max(a.column, b.column);
  const rows = Math.min(a.row + a.rows, b.row + b.rows) - row;
  const columns = Math.min(a.column + a.columns, b.column + b.columns) - column;
  return rows > 0 && columns > 0 ? { sheet: a.sheet, row, column, rows, columns } : null;
}
