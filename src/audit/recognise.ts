import { isEmpty, isText, isVoid, nameKey, numberInText, widthOf } from "../table/cell";
import { read } from "../table/read";
import type { Cells, CellValue, Reading } from "../table/rate-table";
import { textOf } from "./body";
import type { Span } from "./finding";
import { meansCount, meansExposure, meansFigure, meansFrom, meansMeanTime, meansNote, meansProbability, meansRate, meansTime, meansTo, meansTotal, saysRate, timeUnits } from "./words";

/** A line of the range that is not part of the rates. */
export interface Aside {
  readonly line: "row" | "column";
  /** Position in the given range, from 0. */
  readonly index: number;
  readonly role: "total" | "units" | "notes" | "title" | "exposure";
  /** Its label, where it has one. */
  readonly label: string;
  /** Its words, label left out. */
  readonly texts: readonly string[];
}

/**
 * A rate table that a person keeps with more around it than a formula takes: totals, units, notes, a second heading row, further
 * columns of a list. `rows` and `columns` say which lines of the given range the inner cells are; nothing is converted.
 */
export interface Recognised {
  readonly asides: readonly Aside[];
  readonly rows: readonly number[];
  readonly columns: readonly number[];
  readonly cells: Cells;
  readonly reading: Reading;
  /** What the numbers are by the labels beside them. Only "rates" can be given to a formula as they are. */
  readonly amount: "rates" | "meanTimes" | "probabilities" | "counts";
  /** Heading of the column of amounts in a list, or of the corner. */
  readonly amountLabel: string;
  /** Where the inner lines lie side by side: the selection that a formula can take. */
  readonly selection: Span | null;
}

/** What a range that the strict reader refuses, or takes a total for a state in, is likely to be. */
export function recognise(cells: Cells): Recognised | null {
  return recogniseList(cells) ?? recogniseSquare(cells);
}

// --- square form -----------------------------------------------------------------------------------------------------

function recogniseSquare(cells: Cells): Recognised | null {
  const rows = range(cells.length);
  const columns = range(widthOf(cells));
  const asides: Aside[] = [];
  const drop = (line: Aside["line"], index: number, role: Aside["role"], label: string): void => {
    const along = line === "row" ? columns.map((column) => cell(index, column)) : rows.map((row) => cell(row, index));
    asides.push({ line, index, role, label, texts: along.filter(isWord).map(textOf).filter((text) => text !== label) });
    const lines = line === "row" ? rows : columns;
    lines.splice(lines.indexOf(index), 1);
  };
  const cell = (row: number, column: number): CellValue => cells[row]?.[column] ?? null;

  while (rows.length > 2 && columns.every((column) => isEmpty(cell(rows[0], column)))) rows.shift();
  while (columns.length > 2 && rows.every((row) => isEmpty(cell(row, columns[0])))) columns.shift();
  while (rows.length > 2 && columns.every((column) => isEmpty(cell(rows[rows.length - 1], column)))) rows.pop();
  while (columns.length > 2 && rows.every((row) => isEmpty(cell(row, columns[columns.length - 1])))) columns.pop();

  // Title and first heading row: a line of text with fewer words than the heading line right below it.
  while (rows.length > 2) {
    const first = columns.map((column) => cell(rows[0], column)).filter((value) => !isEmpty(value));
    const second = columns.map((column) => cell(rows[1], column)).filter((value) => !isEmpty(value));
    if (!(first.length < second.length && first.length > 0 && first.every(isWord) && second.length > 1 && second.every((v, k) => k === 0 || isWord(v)) && second.some(isWord))) break;
    drop("row", rows[0], "title", first.map(textOf).join(" "));
  }
  // Unit row right under the headings, unit column right beside them.
  if (rows.length > 3 && columns.slice(1).every((column) => isEmpty(cell(rows[1], column)) || isUnit(cell(rows[1], column))) && columns.slice(1).some((column) => isUnit(cell(rows[1], column)))) {
    drop("row", rows[1], "units", textOf(cell(rows[1], columns.find((column, k) => k > 0 && isUnit(cell(rows[1], column)))!)));
  }
  // A column of numbers or groups before the names.
  while (columns.length > 3) {
    const top = new Set(columns.slice(1).map((column) => nameKey(textOf(cell(rows[0], column)))));
    const shared = (column: number): number => rows.slice(1).filter((row) => isWord(cell(row, column)) && top.has(nameKey(textOf(cell(row, column))))).length;
    if (!(shared(columns[1]) >= 2 && shared(columns[1]) > shared(columns[0]))) break;
    drop("column", columns[0], "notes", textOf(cell(rows[0], columns[0])));
  }
  // Columns of words: notes, sources, units. The first is the names.
  for (const column of columns.slice(1)) {
    const label = textOf(cell(rows[0], column));
    if (namedRow(cells, rows, columns[0], label)) continue;
    const filled = rows.slice(1).map((row) => cell(row, column)).filter((value) => !isVoid(value));
    const words = filled.filter(isWord).length;
    if (filled.length > 0 && words === filled.length && (meansNote(label) || words > 1 || label !== "")) {
      drop("column", column, filled.every(isUnit) ? "units" : "notes", label || textOf(filled[0]));
    } else if (meansExposure(label) || (meansTime(label) && countsOnly(cells, rows, columns))) drop("column", column, "exposure", label);
    else if (meansNote(label) || meansFigure(label)) drop("column", column, "notes", label);
  }
  // A row of words at the end: notes under the table.
  while (rows.length > 3) {
    const last = rows[rows.length - 1];
    const filled = columns.map((column) => cell(last, column)).filter((value) => !isVoid(value));
    if (!(filled.length > 0 && filled.every(isWord) && (filled.length === 1 && columns.length > 2 && !headedColumn(cells, rows, columns, filled[0] as string)))) break;
    drop("row", last, "notes", textOf(filled[0]));
  }
  dropTotals(cells, rows, columns, drop);

  if (asides.length === 0 || rows.length < 2 || columns.length < 2) return null;
  const inner = rows.map((row) => columns.map((column) => cell(row, column)));
  const reading = read(inner);
  if (!reading.layout || reading.layout.size < 2) return null;
  const amountLabel = textOf(cell(rows[0], columns[0]));
  const amount = asides.some((aside) => aside.role === "exposure")
    ? "counts"
    : meansMeanTime(amountLabel) && !meansRate(amountLabel) ? "meanTimes" : "rates";
  return { asides, rows, columns, cells: inner, reading, amount, amountLabel, selection: sideBySide(rows, columns) };
}

/** The last row and column go when a label says total, or when the numbers leave no other reading. */
function dropTotals(cells: Cells, rows: number[], columns: number[], drop: (line: "row" | "column", index: number, role: "total", label: string) => void): void {
  const number = (row: number, column: number): number => {
    const value = cells[row]?.[column] ?? null;
    return typeof value === "number" ? value : isVoid(value) ? 0 : NaN;
  };
  const label = (value: CellValue | undefined): string => (isText(value ?? null) ? textOf(value) : "");
  const headedColumns = columns.slice(1).some((column) => isWord(cells[rows[0]]?.[column] ?? null));
  const headedRows = rows.slice(1).some((row) => isWord(cells[row]?.[columns[0]] ?? null));
  const bodyRows = (): number[] => (headedColumns ? rows.slice(1) : rows);
  const bodyColumns = (): number[] => (headedRows ? columns.slice(1) : columns);

  const lastColumn = columns[columns.length - 1];
  const lastRow = rows[rows.length - 1];
  const columnLabel = headedColumns ? label(cells[rows[0]]?.[lastColumn]) : "";
  const rowLabel = headedRows ? label(cells[lastRow]?.[columns[0]]) : "";
  const byColumnLabel = meansTotal(columnLabel);
  const byRowLabel = meansTotal(rowLabel);
  const shape = bodyRows().length - bodyColumns().length;
  const columnSums = (): boolean => sums(bodyRows().filter((row) => row !== lastRow || !byRowLabel), bodyColumns(), (row, column) => number(row, column));
  const rowSums = (): boolean => sums(bodyColumns().filter((column) => column !== lastColumn || !byColumnLabel), bodyRows(), (column, row) => number(row, column));
  const unnamedColumn = !headedRows || !namedRow(cells, rows, columns[0], columnLabel);
  const unnamedRow = !headedColumns || !headedColumn(cells, rows, columns, rowLabel);
  const both = shape === 0 && unnamedColumn && unnamedRow && number(lastRow, lastColumn) > 0 && columnSums() && rowSums();
  const dropColumn = byColumnLabel || both || (shape < 0 && unnamedColumn && columnSums());
  const dropRow = byRowLabel || both || (shape > 0 && unnamedRow && rowSums());
  if (dropColumn && columns.length > 2) drop("column", lastColumn, "total", columnLabel);
  if (dropRow && rows.length > 2) drop("row", lastRow, "total", rowLabel);
}

/** Whether the last of `across` is the sum of the others in every line, with at least two lines that say something. */
function sums(lines: readonly number[], across: readonly number[], number: (line: number, across: number) => number): boolean {
  let told = 0;
  for (const line of lines) {
    let sum = 0;
    let size = 0;
    for (const k of across.slice(0, -1)) {
      const value = number(line, k);
      sum += value;
      size += Math.abs(value);
    }
    const total = number(line, across[across.length - 1]);
    if (!(Math.abs(sum - total) <= 1e-9 * size)) return false;
    if (size > 0) told++;
  }
  return told >= Math.min(2, lines.length) && told > 0;
}

/** Whether everything right of the names is a whole number, 0 or more, or blank: counts. */
function countsOnly(cells: Cells, rows: readonly number[], columns: readonly number[]): boolean {
  return rows.slice(1).every((row) =>
    columns.slice(1, -1).every((column) => {
      const value = cells[row]?.[column] ?? null;
      return isVoid(value) || (typeof value === "number" && Number.isInteger(value) && value >= 0);
    }),
  );
}

function namedRow(cells: Cells, rows: readonly number[], column: number, label: string): boolean {
  return rows.slice(1).some((row) => nameKey(textOf(cells[row]?.[column])) === nameKey(label));
}

function headedColumn(cells: Cells, rows: readonly number[], columns: readonly number[], label: string): boolean {
  return columns.slice(1).some((column) => nameKey(textOf(cells[rows[0]]?.[column])) === nameKey(label));
}

// --- list form -------------------------------------------------------------------------------------------------------

/** A list with From and To columns and more columns than a formula takes, or other amounts than rates. */
function recogniseList(cells: Cells): Recognised | null {
  const width = widthOf(cells);
  if (cells.length < 2 || width < 3) return null;
  const first = cells.findIndex((row) => row.filter((value) => !isVoid(value)).length >= 3);
  if (first < 0 || first > 2) return null;
  const head = range(width).map((column) => textOf(cells[first][column]));
  const from = head.findIndex(meansFrom);
  const to = head.findIndex(meansTo);
  const headed = from >= 0 && to >= 0;
  const rows = range(cells.length).filter((row) => row >= first + (headed ? 1 : 0) && !range(width).every((column) => isVoid(cells[row][column] ?? null)));
  const [fromColumn, toColumn] = headed ? [from, to] : wordColumns(cells, rows, width);
  if (fromColumn === undefined || toColumn === undefined || rows.length < 2) return null;
  if (!headed && (!shareNames(cells, rows, fromColumn, toColumn) || width === 3)) return null;
  const numeric = range(width).filter((column) => column !== fromColumn && column !== toColumn && isNumeric(cells, rows, column));
  const by = (test: (text: string) => boolean): number | undefined => numeric.find((column) => headed && test(head[column]));
  const rate = by((text) => meansRate(text) && !(meansProbability(text) && !saysRate(text)) && !meansNote(text.replace(/rate|per .*/giu, "")));
  const mean = by((text) => meansMeanTime(text) && !meansRate(text));
  const count = by(meansCount);
  const exposure = by(meansExposure);
  const probability = by((text) => meansProbability(text) && !saysRate(text));
  const [amountColumn, amount]: [number | undefined, Recognised["amount"]] =
    rate !== undefined ? [rate, "rates"]
    : mean !== undefined ? [mean, "meanTimes"]
    : count !== undefined && exposure !== undefined ? [count, "counts"]
    : probability !== undefined ? [probability, "probabilities"]
    : [numeric.find((column) => column > Math.max(fromColumn, toColumn)) ?? numeric[0], "rates"];
  if (amountColumn === undefined) return null;
  const columns = [fromColumn, toColumn, amountColumn];
  if (amount === "rates" && width === 3 && columns.every((column, k) => column === k) && first === 0) return null;
  const asides = range(width)
    .filter((column) => !columns.includes(column) && cells.some((row) => !isVoid(row[column] ?? null)))
    .map((column): Aside => {
      const units = rows.every((row) => isVoid(cells[row][column] ?? null) || isUnit(cells[row][column] ?? null));
      return { line: "column", index: column, role: column === exposure ? "exposure" : units ? "units" : "notes", label: headed ? head[column] : "", texts: rows.map((row) => cells[row][column] ?? null).filter(isWord).map(textOf) };
    });
  for (let row = 0; row < first; row++) {
    const title = range(width).map((column) => textOf(cells[row][column])).filter((text) => text !== "").join(" ");
    if (title !== "") asides.push({ line: "row", index: row, role: "title", label: title, texts: [] });
  }
  const lines = headed ? [first, ...rows] : rows;
  const inner = lines.map((row) => columns.map((column) => cells[row][column] ?? null));
  const reading = read(inner);
  if (reading.layout?.form !== "list") return null;
  const straight = columns[1] === columns[0] + 1 && columns[2] === columns[1] + 1;
  const selection = straight && amount === "rates" ? { row: lines[0], column: columns[0], rows: lines[lines.length - 1] - lines[0] + 1, columns: 3 } : null;
  return { asides, rows: lines, columns, cells: inner, reading, amount, amountLabel: headed ? head[amountColumn] : "", selection };
}

function wordColumns(cells: Cells, rows: readonly number[], width: number): number[] {
  return range(width).filter((column) => rows.every((row) => isWord(cells[row][column] ?? null))).slice(0, 2);
}

/** From and To of a list speak of the same states: some name stands in both columns. */
function shareNames(cells: Cells, rows: readonly number[], from: number, to: number): boolean {
  const names = new Set(rows.map((row) => nameKey(textOf(cells[row][from]))));
  return rows.some((row) => names.has(nameKey(textOf(cells[row][to]))));
}

function isNumeric(cells: Cells, rows: readonly number[], column: number): boolean {
  let numbers = 0;
  for (const row of rows) {
    const value = cells[row][column] ?? null;
    if (typeof value === "number" || (typeof value === "string" && numberInText(value) !== null)) numbers++;
  }
  return numbers > 0 && numbers >= rows.length / 2;
}

// --- shared ----------------------------------------------------------------------------------------------------------

function isWord(value: CellValue): boolean {
  return isText(value) && numberInText(value) === null;
}

function isUnit(value: CellValue): boolean {
  return isText(value) && (timeUnits(value).length > 0 || /^(1\s*\/|per\b|\/)/iu.test(value.trim()));
}

function sideBySide(rows: readonly number[], columns: readonly number[]): Span | null {
  const rowsJoin = rows[rows.length - 1] - rows[0] === rows.length - 1;
  const columnsJoin = columns[columns.length - 1] - columns[0] === columns.length - 1;
  return rowsJoin && columnsJoin ? { row: rows[0], column: columns[0], rows: rows.length, columns: columns.length } : null;
}

function range(length: number): number[] {
  return Array.from({ length }, (_, k) => k);
}
