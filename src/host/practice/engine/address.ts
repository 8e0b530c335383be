/** Cell and area addresses: numbers from 0 inside, letters and numbers from 1 in text. */

export const ROW_LIMIT = 1_048_576;
export const COLUMN_LIMIT = 16_384;

export interface Rect {
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
}

/** A rectangle on the sheet with this id. */
export interface Area extends Rect {
  readonly sheet: string;
}

/** One number for a cell of a sheet; small for the columns in common use, so that maps stay fast. */
export const keyOf = (row: number, column: number): number => column * ROW_LIMIT + row;
export const rowOf = (key: number): number => key % ROW_LIMIT;
export const columnOf = (key: number): number => Math.floor(key / ROW_LIMIT);

export function columnText(column: number): string {
  let text = "";
  for (let rest = column + 1; rest > 0; rest = Math.floor((rest - 1) / 26)) {
    text = String.fromCharCode(65 + ((rest - 1) % 26)) + text;
  }
  return text;
}

export function columnFromText(letters: string): number {
  let column = 0;
  for (const letter of letters.toUpperCase()) column = column * 26 + letter.charCodeAt(0) - 64;
  return column - 1;
}

export const cellText = (row: number, column: number): string => columnText(column) + (row + 1);

/** A sheet name as a formula writes it: quoted unless it is a plain word that cannot be read as a cell or a number. */
export function quoteSheet(name: string): string {
  const plain = /^[\p{L}_][\p{L}\p{N}_.]*$/u.test(name) && !/^[A-Za-z]{1,3}\d+$/.test(name) && !/^(R\d*(C\d*)?|C\d*|TRUE|FALSE)$/i.test(name);
  return plain ? name : `'${name.replace(/'/g, "''")}'`;
}

/** The text of an area, whole rows and columns in their short form, preceded by the sheet where one is given. */
export function areaText(area: Rect, sheetName: string | null = null): string {
  const prefix = sheetName === null ? "" : `${quoteSheet(sheetName)}!`;
  const bottom = area.row + area.rows;
  const right = area.column + area.columns - 1;
  if (area.rows === ROW_LIMIT) return `${prefix}${columnText(area.column)}:${columnText(right)}`;
  if (area.columns === COLUMN_LIMIT) return `${prefix}${area.row + 1}:${bottom}`;
  const first = cellText(area.row, area.column);
  return area.rows === 1 && area.columns === 1 ? prefix + first : `${prefix}${first}:${columnText(right)}${bottom}`;
}

const CORNER = /^\$?([A-Za-z]{1,3})\$?(\d{1,7})$/;
const COLUMNS = /^\$?([A-Za-z]{1,3}):\$?([A-Za-z]{1,3})$/;
const ROWS = /^\$?(\d{1,7}):\$?(\d{1,7})$/;

function between(top: number, left: number, bottom: number, right: number): Rect | null {
  const row = Math.min(top, bottom);
  const column = Math.min(left, right);
  const rows = Math.abs(bottom - top) + 1;
  const columns = Math.abs(right - left) + 1;
  return row < 0 || column < 0 || row + rows > ROW_LIMIT || column + columns > COLUMN_LIMIT ? null : { row, column, rows, columns };
}

/** Reads "B3", "$B$3:F7", "B:D", "2:5"; null when it is no address or off the sheet. */
export function parseArea(text: string): Rect | null {
  const columns = COLUMNS.exec(text);
  if (columns) return between(0, columnFromText(columns[1]!), ROW_LIMIT - 1, columnFromText(columns[2]!));
  const rows = ROWS.exec(text);
  if (rows) return between(Number(rows[1]) - 1, 0, Number(rows[2]) - 1, COLUMN_LIMIT - 1);
  const [first, second = first, more] = text.split(":");
  const from = CORNER.exec(first ?? "");
  const to = CORNER.exec(second ?? "");
  if (!from || !to || more !== undefined) return null;
  return between(Number(from[2]) - 1, columnFromText(from[1]!), Number(to[2]) - 1, columnFromText(to[1]!));
}

/** Splits "'My sheet'!B3" into the sheet's name and the address; name null where none is written. */
export function splitSheet(text: string): { sheetName: string | null; address: string } {
  const mark = text.lastIndexOf("!");
  if (mark < 0) return { sheetName: null, address: text };
  const name = text.slice(0, mark);
  return {
    sheetName: name.startsWith("'") && name.endsWith("'") ? name.slice(1, -1).replace(/''/g, "'") : name,
    address: text.slice(mark + 1),
  };
}

export const contains = (area: Rect, row: number, column: number): boolean =>
  row >= area.row && column >= area.column && row < area.row + area.rows && column < area.column + area.columns;

/** The common part of two areas, or null. */
export function overlap(a: Rect, b: Rect): Rect | null {
  const row = Math.max(a.row, b.row);
  const column = Math.max(a.column, b.column);
  const rows = Math.min(a.row + a.rows, b.row + b.rows) - row;
  const columns = Math.min(a.column + a.columns, b.column + b.columns) - column;
  return rows > 0 && columns > 0 ? { row, column, rows, columns } : null;
}

/** The smallest area that holds both. */
export function enclosing(a: Rect, b: Rect): Rect {
  const row = Math.min(a.row, b.row);
  const column = Math.min(a.column, b.column);
  return {
    row,
    column,
    rows: Math.max(a.row + a.rows, b.row + b.rows) - row,
    columns: Math.max(a.column + a.columns, b.column + b.columns) - column,
  };
}
