import { Problem } from "../chain/problem";
import { cellAt, isDiagonalMark, isEmpty, isFault, isText, isVoid, nameKey, numberInText } from "./cell";
import type { Cells, CellValue, Layout } from "./rate-table";

export interface LayoutReading {
  readonly layout: Layout | null;
  readonly problems: readonly Problem[];
}

/** Extent of a range: all of it, and up to its last cell that holds a name or a number other than 0. */
interface Extent {
  readonly rows: number;
  readonly columns: number;
  readonly filledRows: number;
  readonly filledColumns: number;
}

type Headings = Layout["headings"];

/**
 * What a from-rows by to-columns range is: where its headings are, its states, where its body begins.
 *
 * Headings are told by text; numbers are headings only under a word in the corner. Blank margins of a generous selection
 * are left out, except with `exact`, where every line of the range counts (blocks of a stack, cost tables).
 * Problems come in the order in which a formula refuses: shape, missing or differing headings, repeated names.
 */
export function squareLayout(cells: Cells, options: { readonly exact?: boolean } = {}): LayoutReading {
  const extent = extentOf(cells, options.exact ?? false);
  if (extent.rows === 0 || everyCell(cells, isEmpty)) return refused(new Problem("rangeEmpty"));
  const headings = headingsOf(cells, extent);
  if (headings === null) return refused(new Problem("cornerBlank", { span: [0, 0, extent.rows, extent.columns] }));

  const row = headings === "both" || headings === "top" ? 1 : 0;
  const column = headings === "both" || headings === "left" ? 1 : 0;
  const [rows, columns] = headings === "none" ? unheadedShape(cells, extent, options.exact ?? false) : headedShape(extent, headings);
  if (rows !== columns || rows === 0) {
    if (row + column > 0 && rows === 0 && columns === 0) return refused(new Problem("rangeEmpty"));
    const span = [row, column, Math.max(rows, 1), Math.max(columns, 1)];
    return refused(new Problem("notSquare", { rows, columns, headings, span, ...(headings === "both" ? unmatched(cells, rows, columns) : {}) }));
  }
  const size = rows;
  if (size === 1 && headings === "none" && isText(cellAt(cells, 0, 0)) && extent.rows * extent.columns === 1) return refused(new Problem("rangeEmpty"));
  const names = headings === "none" ? { names: null, problems: [] } : readNames(cells, headings, size);
  const layout: Layout = {
    form: "square",
    headings,
    body: { row, column, rows: size, columns: size },
    size,
    names: names.names,
  };
  return { layout, problems: names.problems };
}

function refused(problem: Problem): LayoutReading {
  return { layout: null, problems: [problem] };
}

/** The first heading on the longer side that the other side lacks: a total, a note, a state left out. */
function unmatched(cells: Cells, rows: number, columns: number): { side: string; index: number; name: string } | null {
  const beside = Array.from({ length: rows }, (_, k) => nameOf(cellAt(cells, k + 1, 0)));
  const above = Array.from({ length: columns }, (_, k) => nameOf(cellAt(cells, 0, k + 1)));
  const [side, longer, shorter] = rows > columns ? ["row", beside, above] as const : ["column", above, beside] as const;
  const keys = new Set(shorter.map((name) => (name === null ? null : nameKey(name))));
  const index = longer.findIndex((name) => name !== null && !keys.has(nameKey(name)));
  return index < 0 ? null : { side, index, name: longer[index]! };
}

function everyCell(cells: Cells, test: (cell: CellValue) => boolean): boolean {
  return cells.every((row) => row.every(test));
}

function extentOf(cells: Cells, exact: boolean): Extent {
  const rows = cells.length;
  let columns = 0;
  let filledRows = 0;
  let filledColumns = 0;
  for (let i = 0; i < rows; i++) {
    const row = cells[i];
    if (row.length > columns) columns = row.length;
    let last = row.length;
    while (last > 0 && isVoid(row[last - 1])) last--;
    if (last > 0) filledRows = i + 1;
    if (last > filledColumns) filledColumns = last;
  }
  return exact ? { rows, columns, filledRows: rows, filledColumns: columns } : { rows, columns, filledRows, filledColumns };
}

/** null: the first row and column hold the same numbers under a blank corner, so that nobody can tell. */
function headingsOf(cells: Cells, extent: Extent): Headings | null {
  const { rows, columns, filledRows, filledColumns } = extent;
  const top = isHeadingLine(columns, (k) => cellAt(cells, 0, k));
  const left = isHeadingLine(rows, (k) => cellAt(cells, k, 0));
  const corner = cellAt(cells, 0, 0);
  const cornerWord = isText(corner) && !isDiagonalMark(corner) && numberInText(corner) === null;
  if (top.headings && left.headings) return "both";
  const stray = rows === columns && !cornerWord; // one text in a row of rates is a slip, not a heading line
  if (top.headings) {
    if (stray && top.names === 1) return "none";
    return isOneSided(rows, columns, filledRows, filledColumns, (k) => cellAt(cells, k, 0)) ? "top" : "both";
  }
  if (left.headings) {
    if (stray && left.names === 1) return "none";
    return isOneSided(columns, rows, filledColumns, filledRows, (k) => cellAt(cells, 0, k)) ? "left" : "both";
  }
  if (cornerWord) {
    if (filledRows === filledColumns) return sameNames(cells, filledRows) ? "both" : byShape(rows, columns);
    return byShape(filledRows, filledColumns);
  }
  if (!isVoid(corner) || filledRows !== filledColumns) return "none";
  if (textsAsHeadings(cells, filledRows)) return "both";
  return numbersAsHeadings(cells, filledRows) ? null : "none";
}

function byShape(rows: number, columns: number): Headings {
  if (rows === columns + 1) return "top";
  return columns === rows + 1 ? "left" : "both";
}

/**
 * Headings along one line only: one line more than there are names. Last states without arrows may look like margin, so
 * that a longer selection serves too, unless the line beside holds nothing and may itself be a heading line left blank.
 */
function isOneSided(lines: number, names: number, filledLines: number, filledNames: number, beside: (k: number) => CellValue): boolean {
  if (filledLines === filledNames + 1) return true;
  if (filledLines > filledNames || lines <= filledNames) return false;
  if (lines === names + 1) return true;
  for (let k = 1; k < filledLines; k++) if (!isVoid(beside(k))) return true;
  return false;
}

/** Every cell after the corner is text or blank, and at least one is text that does not read as a number. */
function isHeadingLine(length: number, cell: (k: number) => CellValue): { headings: boolean; names: number } {
  let names = 0;
  let words = 0;
  for (let k = 1; k < length; k++) {
    const value = cell(k);
    if (isVoid(value) || isFault(value)) continue;
    if (!isText(value)) return { headings: false, names };
    names++;
    if (numberInText(value) === null && !isDiagonalMark(value)) words++;
  }
  return { headings: words > 0, names };
}

/** Numbers kept as text, the same above and beside: names that were numbers, as results with headings give them back. */
function textsAsHeadings(cells: Cells, length: number): boolean {
  for (let k = 1; k < length; k++) if (!isText(cellAt(cells, 0, k)) || !isText(cellAt(cells, k, 0))) return false;
  return sameNames(cells, length);
}

function sameNames(cells: Cells, length: number): boolean {
  for (let k = 1; k < length; k++) {
    const above = nameOf(cellAt(cells, 0, k));
    const beside = nameOf(cellAt(cells, k, 0));
    if (above === null || beside === null || nameKey(above) !== nameKey(beside)) return false;
  }
  return length > 1;
}

/**
 * The same two or more different numbers along the first row and down the first column: headings without a corner word, such
 * as levels 0, 1, 2, or the rates of a symmetric table. Repeated numbers cannot be headings, hence are rates.
 */
function numbersAsHeadings(cells: Cells, length: number): boolean {
  const seen = new Set<number>();
  for (let k = 1; k < length; k++) {
    const above = cellAt(cells, 0, k);
    const beside = cellAt(cells, k, 0);
    const number = isEmpty(above) ? 0 : above;
    if (typeof number !== "number" || number !== (isEmpty(beside) ? 0 : beside) || seen.has(number)) return false;
    seen.add(number);
  }
  return seen.size >= 2;
}

function headedShape(extent: Extent, headings: Headings): [rows: number, columns: number] {
  const { rows, columns, filledRows, filledColumns } = extent;
  if (headings === "both") return [filledRows - 1, filledColumns - 1];
  if (headings === "top") {
    const size = Math.max(filledColumns, filledRows - 1);
    return [Math.min(size, rows - 1), filledColumns];
  }
  const size = Math.max(filledRows, filledColumns - 1);
  return [filledRows, Math.min(size, columns - 1)];
}

/** Without headings only trailing lines that hold nothing at all, in row and column alike, are left out: a 0 keeps its state. */
function unheadedShape(cells: Cells, extent: Extent, exact: boolean): [rows: number, columns: number] {
  if (exact) return [extent.rows, extent.columns];
  let size = 0;
  for (let i = 0; i < extent.rows; i++) {
    const row = cells[i];
    let last = row.length;
    while (last > 0 && isEmpty(row[last - 1])) last--;
    if (last > 0) size = Math.max(size, i + 1, last);
  }
  return [Math.min(size, extent.rows), Math.min(size, extent.columns)];
}

/** A heading cell as a name; null when it holds none (blank, 0, dash) or cannot (error, TRUE). */
export function nameOf(cell: CellValue): string | null {
  if (isVoid(cell)) return null;
  if (typeof cell === "string") return cell.trim();
  return typeof cell === "number" && Number.isFinite(cell) ? String(cell) : null;
}

function readNames(cells: Cells, headings: Headings, size: number): { names: string[] | null; problems: Problem[] } {
  const problems: Problem[] = [];
  const names: string[] = [];
  const first = new Map<string, number>();
  const body = { row: headings === "left" ? 0 : 1, column: headings === "top" ? 0 : 1 };
  for (let k = 0; k < size; k++) {
    const above = headings === "left" ? null : { side: "column", cell: cellAt(cells, 0, body.column + k), span: [0, body.column + k, 1, 1] };
    const beside = headings === "top" ? null : { side: "row", cell: cellAt(cells, body.row + k, 0), span: [body.row + k, 0, 1, 1] };
    let name: string | null = null;
    let broken = false;
    for (const heading of [above, beside]) {
      if (!heading || isVoid(heading.cell)) continue;
      const read = nameOf(heading.cell);
      if (read === null) {
        broken = true;
        const fault = isFault(heading.cell) ? heading.cell.fault : String(heading.cell).toUpperCase();
        problems.push(new Problem("headingNotName", { side: heading.side, index: k, found: fault, span: heading.span }));
      } else name ??= read;
    }
    if (broken) {
      names.push(name ?? `State ${k + 1}`);
      continue;
    }
    if (name === null) {
      const { side, span } = (above ?? beside)!;
      problems.push(new Problem("headingMissing", { side, index: k, span }));
      names.push(`State ${k + 1}`);
      continue;
    }
    names.push(name);
    if (above && beside) {
      const columnName = nameOf(above.cell);
      const rowName = nameOf(beside.cell);
      if (columnName === null || rowName === null || nameKey(columnName) !== nameKey(rowName)) {
        problems.push(new Problem("headingsDiffer", { index: k, rowName, columnName, span: beside.span }));
        continue;
      }
    }
    const earlier = first.get(nameKey(name));
    if (earlier !== undefined) problems.push(new Problem("nameRepeated", { first: earlier, second: k, name, span: (above ?? beside)!.span }));
    else first.set(nameKey(name), k);
  }
  return { names, problems };
}
