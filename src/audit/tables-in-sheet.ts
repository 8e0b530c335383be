import { finish, type Steps } from "../chain/steps";
import { isEmpty, isText, isVoid, nameKey, numberInText } from "../table/cell";
import { read } from "../table/read";
import type { Cells, CellValue, Reading } from "../table/rate-table";
import { readBody, textOf } from "./body";
import type { Span } from "./finding";
import { kindOf, type Kind } from "./kind";
import { recognise } from "./recognise";
import { meansFrom, meansTo, meansTotal } from "./words";

/** A rate table, or what looks like one, in a sheet. */
export interface FoundTable {
  /** Its cells, headings included; titles, totals, notes and results around it left out. In the given cells, from 0. */
  readonly span: Span;
  readonly reading: Reading;
  readonly kind: Kind;
  /** Lines right beside the table that were taken for totals or notes: "column Total". */
  readonly leftOut: readonly { readonly line: "row" | "column"; readonly label: string }[];
}

/**
 * Which cells of a sheet are rate tables?
 *
 * Three looks, the surest first: names along a row that stand again down a column (the corner of a from-rows by to-columns
 * table); rows of name, name, number (a list); then any remaining block of cells that the reader takes as a table with a
 * diagonal that is blank, zero or negative. Cells found once are not looked at again.
 *
 * @param cells - values of the sheet's used range
 * @returns the tables, from top to bottom
 *
 * *Cost*: a few passes over the cells.
 */
export function findTables(cells: Cells): FoundTable[] {
  return finish(findTablesSteps(cells));
}

/** As `findTables`, in steps. */
export function* findTablesSteps(cells: Cells): Steps<FoundTable[]> {
  const grid = new Grid(cells);
  const found: FoundTable[] = [];
  const take = (span: Span, leftOut: FoundTable["leftOut"] = []): void => {
    const inside = grid.cut(span);
    const reading = read(inside);
    found.push({ span, reading, leftOut, kind: reading.layout ? kindOf(readBody(inside, reading.layout)) : "rates" });
    grid.use(span);
  };
  for (const { span, leftOut } of yield* headedTables(grid)) take(span, leftOut);
  for (const span of yield* lists(grid)) take(span);
  for (const span of yield* blocks(grid)) take(span);
  return found.sort((a, b) => a.span.row - b.span.row || a.span.column - b.span.column);
}

class Grid {
  readonly rows: number;
  readonly columns: number;
  private readonly used: Uint8Array;

  constructor(private readonly cells: Cells) {
    this.rows = cells.length;
    this.columns = cells.reduce((most, row) => Math.max(most, row.length), 0);
    this.used = new Uint8Array(this.rows * this.columns);
  }

  at(row: number, column: number): CellValue {
    return this.cells[row]?.[column] ?? null;
  }

  cut({ row, column, rows, columns }: Span): Cells {
    return Array.from({ length: rows }, (_, i) => Array.from({ length: columns }, (_, j) => this.at(row + i, column + j)));
  }

  use(span: Span): void {
    for (let i = 0; i < span.rows; i++) for (let j = 0; j < span.columns; j++) this.used[(span.row + i) * this.columns + span.column + j] = 1;
  }

  free(row: number, column: number): boolean {
    return !this.used[row * this.columns + column];
  }

  overlaps({ row, column, rows, columns }: Span): boolean {
    for (let i = 0; i < rows; i++) for (let j = 0; j < columns; j++) if (!this.free(row + i, column + j)) return true;
    return false;
  }
}

function isWord(value: CellValue): value is string {
  return isText(value) && numberInText(value) === null;
}

/** A state name in a heading: a word; a number only under a word in the corner. */
function headingAt(grid: Grid, row: number, column: number, numbers: boolean): string | null {
  const value = grid.at(row, column);
  if (isWord(value)) return nameKey(value);
  return numbers && typeof value === "number" && value !== 0 ? String(value) : null;
}

function run(length: number, heading: (k: number) => string | null): string[] {
  const names: string[] = [];
  for (let k = 0; k < length; k++) {
    const name = heading(k);
    if (name === null) break;
    names.push(name);
  }
  return names;
}

/** Squares with names on top and on the left. A corner counts when at least half of the shorter run of names stands in both. */
function* headedTables(grid: Grid): Steps<{ span: Span; leftOut: FoundTable["leftOut"] }[]> {
  const candidates: { span: Span; leftOut: FoundTable["leftOut"]; shared: number }[] = [];
  for (let row = 0; row < grid.rows; row++) {
    if (row % 32 === 31) yield (0.4 * row) / grid.rows;
    for (let column = 0; column < grid.columns; column++) {
      const right = grid.at(row, column + 1);
      const numbers = isWord(grid.at(row, column)) && typeof right === "number";
      if (!isWord(right) && !numbers) continue;
      const top = run(grid.columns - column - 1, (k) => headingAt(grid, row, column + 1 + k, numbers));
      const skip = isEmpty(grid.at(row + 1, column)) && top.length > 1 ? 1 : 0; // a unit row under the headings
      const most = Math.min(grid.rows - row - 1 - skip, 2 * top.length + 5); // a long log below is no side of this table
      const left = run(most, (k) => headingAt(grid, row + 1 + skip + k, column, numbers));
      if (top.length < 2 || left.length < 2) continue;
      const onTop = new Set(top);
      const onLeft = new Set(left);
      const shared = [...onTop].filter((name) => onLeft.has(name)).length;
      const least = Math.min(top.length, left.length);
      if (shared < 2 && !(least === 2 && shared === 1 && top.length === left.length)) continue;
      if (shared < least / 2) continue;
      const even = top.length === left.length && shared >= least - 1 && (shared === least || holdsNumber(grid, row + 1 + skip, column + top.length, left.length));
      const width = even ? withoutTotals(top) : lastShared(top, onLeft);
      const height = even ? withoutTotals(left) : lastShared(left, onTop);
      const rows = 1 + skip + height;
      const columns = 1 + width;
      const body = grid.cut({ row: row + 1 + skip, column: column + 1, rows: height, columns: width }).flat();
      if (!body.some((value) => typeof value === "number" || (typeof value === "string" && numberInText(value) !== null))) continue;
      const leftOut: { line: "row" | "column"; label: string }[] = [];
      if (top.length > width) leftOut.push({ line: "column", label: textOf(grid.at(row, column + columns)) });
      if (left.length > height && meansTotal(left[height])) leftOut.push({ line: "row", label: textOf(grid.at(row + rows, column)) });
      candidates.push({ span: { row, column, rows, columns }, leftOut, shared });
    }
  }
  candidates.sort((a, b) => b.shared - a.shared || a.span.row - b.span.row || a.span.column - b.span.column);
  const kept: typeof candidates = [];
  for (const candidate of candidates) if (!kept.some(({ span }) => meet(span, candidate.span))) kept.push(candidate);
  return kept;
}

function holdsNumber(grid: Grid, row: number, column: number, rows: number): boolean {
  for (let k = 0; k < rows; k++) if (typeof grid.at(row + k, column) === "number") return true;
  return false;
}

function lastShared(names: readonly string[], others: ReadonlySet<string>): number {
  for (let k = names.length; k > 0; k--) if (others.has(names[k - 1]) && !meansTotal(names[k - 1])) return k;
  return names.length;
}

function withoutTotals(names: readonly string[]): number {
  return meansTotal(names[names.length - 1]) ? names.length - 1 : names.length;
}

function meet(a: Span, b: Span): boolean {
  return a.row < b.row + b.rows && b.row < a.row + a.rows && a.column < b.column + b.columns && b.column < a.column + a.columns;
}

/** Runs of at least two rows name, name, number whose names recur; with their heading row where there is one. */
function* lists(grid: Grid): Steps<Span[]> {
  const spans: Span[] = [];
  for (let column = 0; column + 2 < grid.columns; column++) {
    yield 0.4 + (0.3 * column) / grid.columns;
    for (let row = 0; row < grid.rows; row++) {
      const length = arrowRows(grid, row, column);
      if (length === 0) continue;
      const headed = row > 0 && isWord(grid.at(row - 1, column)) && isWord(grid.at(row - 1, column + 1)) && grid.free(row - 1, column);
      const said = headed && meansFrom(textOf(grid.at(row - 1, column))) && meansTo(textOf(grid.at(row - 1, column + 1)));
      const width = said ? listWidth(grid, row - 1, column) : 3;
      const numbers = (at: number): boolean => Array.from({ length }, (_, k) => grid.at(row + k, at)).some((value) => typeof value === "number");
      const names = new Set(Array.from({ length }, (_, k) => nameKey(textOf(grid.at(row + k, column)))));
      const recur = Array.from({ length }, (_, k) => nameKey(textOf(grid.at(row + k, column + 1)))).some((name) => names.has(name));
      const plain = numbers(column + 2);
      if ((said || (length >= 2 && recur && plain)) && Array.from({ length: width - 2 }, (_, k) => numbers(column + 2 + k)).some(Boolean)) {
        const top = headed && (said || isWord(grid.at(row - 1, column + 2))) ? row - 1 : row;
        const span = { row: top, column, rows: row + length - top, columns: plain ? 3 : width };
        if (!grid.overlaps(span)) {
          spans.push(span);
          grid.use(span);
        }
      }
      row += length;
    }
  }
  return spans;
}

/** How many rows from here on are name, another cell of words, and not a word in the third place, unless the third is one too. */
function arrowRows(grid: Grid, row: number, column: number): number {
  let length = 0;
  while (row + length < grid.rows) {
    const at = row + length;
    if (!grid.free(at, column) || !isWord(grid.at(at, column)) || !isWord(grid.at(at, column + 1))) break;
    if (isWord(grid.at(at, column + 2)) && !Array.from({ length: 6 }, (_, k) => grid.at(at, column + 3 + k)).some((value) => typeof value === "number")) break;
    length++;
  }
  return length;
}

function listWidth(grid: Grid, row: number, column: number): number {
  let width = 2;
  while (column + width < grid.columns && isWord(grid.at(row, column + width))) width++;
  return Math.max(width, 3);
}

/** Blocks of touching cells that read as a table by themselves, or with totals, units or notes left out. */
function* blocks(grid: Grid): Steps<Span[]> {
  const spans: Span[] = [];
  for (const box of yield* touching(grid)) {
    yield 0.9;
    if (box.rows < 2 || box.columns < 2 || box.rows * box.columns > 40_000) continue;
    const span = tableIn(grid, box) ?? tableIn(grid, squareFrom(box));
    if (span && !grid.overlaps(span)) {
      spans.push(span);
      grid.use(span);
    }
  }
  return spans;
}

function tableIn(grid: Grid, box: Span | null): Span | null {
  if (!box) return null;
  const cells = grid.cut(box);
  const reading = read(cells);
  if (reading.layout && plausible(cells, reading)) return box;
  const more = reading.table ? null : recognise(cells);
  if (!more?.reading.layout || more.asides.length === 0 || !plausible(more.cells, more.reading)) return null;
  const { selection } = more;
  return selection ? { ...selection, row: box.row + selection.row, column: box.column + selection.column } : box;
}

/** The upper left square of numbers of a block: results may stand right under a table. */
function squareFrom(box: Span): Span | null {
  const size = Math.min(box.rows, box.columns);
  return box.rows === box.columns || size < 2 ? null : { ...box, rows: size, columns: size };
}

/** Nothing on the diagonal that contradicts rates, and enough off it. */
function plausible(cells: Cells, reading: Reading): boolean {
  const { layout } = reading;
  if (!layout || layout.size < 2) return false;
  if (layout.form === "list") return layout.size < 2 * layout.body.rows;
  const body = readBody(cells, layout);
  const kind = kindOf(body);
  if (kind === "empty") return false;
  if (kind !== "rates") return true;
  let positive = 0;
  let negative = 0;
  let arrows = 0;
  let unreadable = 0;
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const value = body.values[i * body.size + j];
      if (Number.isNaN(value)) unreadable++;
      else if (i === j) {
        if (value > 0) positive++;
        if (value < 0) negative++;
      } else if (value > 0) arrows++;
    }
  return positive <= negative / 2 && arrows >= body.size - 1 && unreadable <= arrows / 4;
}

/** Bounding boxes of groups of filled cells that touch, corners included, outside what was found already. */
function* touching(grid: Grid): Steps<Span[]> {
  const seen = new Uint8Array(grid.rows * grid.columns);
  const boxes: Span[] = [];
  for (let row = 0; row < grid.rows; row++) {
    if (row % 32 === 31) yield 0.7 + (0.2 * row) / grid.rows;
    for (let column = 0; column < grid.columns; column++) {
      if (seen[row * grid.columns + column] || !filled(grid, row, column)) continue;
      let [top, left, bottom, right] = [row, column, row, column];
      const open = [row * grid.columns + column];
      seen[open[0]] = 1;
      while (open.length > 0) {
        const at = open.pop()!;
        const i = Math.floor(at / grid.columns);
        const j = at % grid.columns;
        [top, left, bottom, right] = [Math.min(top, i), Math.min(left, j), Math.max(bottom, i), Math.max(right, j)];
        for (let di = -1; di <= 1; di++)
          for (let dj = -1; dj <= 1; dj++) {
            const [r, c] = [i + di, j + dj];
            if (r < 0 || c < 0 || r >= grid.rows || c >= grid.columns) continue;
            const next = r * grid.columns + c;
            if (seen[next] || !filled(grid, r, c)) continue;
            seen[next] = 1;
            open.push(next);
          }
      }
      boxes.push({ row: top, column: left, rows: bottom - top + 1, columns: right - left + 1 });
    }
  }
  return boxes;
}

function filled(grid: Grid, row: number, column: number): boolean {
  return grid.free(row, column) && !isEmpty(grid.at(row, column)) && !(isVoid(grid.at(row, column)) && typeof grid.at(row, column) !== "number");
}
