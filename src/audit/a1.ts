import type { Span } from "./finding";

/** "C4" for row 3, column 2 (from 0). */
export function cellName(row: number, column: number): string {
  let letters = "";
  for (let k = column; k >= 0; k = Math.floor(k / 26) - 1) letters = String.fromCharCode(65 + (k % 26)) + letters;
  return letters + String(row + 1);
}

/** "B3:F7", or "C4" for a single cell. */
export function rangeName({ row, column, rows, columns }: Span): string {
  const first = cellName(row, column);
  return rows === 1 && columns === 1 ? first : `${first}:${cellName(row + rows - 1, column + columns - 1)}`;
}

/** A sheet's name as a formula writes it: quoted unless it is a plain word that cannot be a cell. */
export function sheetPrefix(sheet: string): string {
  const plain = /^[\p{L}_][\p{L}\p{N}_.]*$/u.test(sheet) && !/^([a-z]{1,3}\d+|r\d*c\d*|r|c|true|false)$/iu.test(sheet);
  return plain ? `${sheet}!` : `'${sheet.replace(/'/gu, "''")}'!`;
}
