import type { Remedy } from "../audit/remedies";
import type { HostValue, RangeAddress, RangeReading, Write } from "./workbook";

type CellsRemedy = Extract<Remedy, { kind: "cells" }>;

/** One cell that a remedy would change, as shown before anything is written. */
export interface ShownChange {
  readonly row: number;
  readonly column: number;
  readonly before: string;
  readonly after: string;
  /** The formula that will show it, "" for a plain value. */
  readonly formula: string;
  readonly replacesFormula: boolean;
}

/** What a person would type to get this value: text that would read as a formula gets the apostrophe that says "text". */
export function asTyped(value: HostValue | null): HostValue | null {
  if (value === "" || value === null) return null;
  return typeof value === "string" && /^[=+\-@']/.test(value) ? `'${value}` : value;
}

/** The changes in sheet rows and columns, with what the cells show now and will show then. */
export function shownChanges(reading: RangeReading, remedy: CellsRemedy): ShownChange[] {
  return remedy.changes.map(({ row, column, after, shows }) => ({
    row: reading.address.row + row,
    column: reading.address.column + column,
    before: reading.texts[row][column] === "" ? "blank" : reading.texts[row][column],
    after: after === null || after === "" ? "blank" : typeof after === "number" ? exact(after) : shows !== undefined ? exact(shows) : after,
    formula: isFormula(after) ? after : "",
    replacesFormula: reading.formulas[row][column].startsWith("="),
  }));
}

/** Cells that show a value and hold nothing are filled by a formula elsewhere; they cannot be typed into. */
export function spilledInto(reading: RangeReading, remedy: CellsRemedy): boolean {
  return remedy.changes.some(({ row, column }) => reading.formulas[row][column] === "" && reading.values[row][column] !== "");
}

/** A "cells" remedy as one rectangle that leaves every other cell alone; cells formatted as text become general, else a number stays text. */
export function cellsWrite(reading: RangeReading, { changes }: CellsRemedy): Write {
  const top = Math.min(...changes.map((change) => change.row));
  const left = Math.min(...changes.map((change) => change.column));
  const rows = Math.max(...changes.map((change) => change.row)) - top + 1;
  const columns = Math.max(...changes.map((change) => change.column)) - left + 1;
  const cells = rectangle<HostValue | null>(rows, columns);
  const formats = rectangle<string>(rows, columns);
  for (const { row, column, after } of changes) {
    cells[row - top][column - left] = isFormula(after) ? after : asTyped(after);
    if (reading.formats[row][column] === "@" && after !== null) formats[row - top][column - left] = "General";
  }
  return { sheet: reading.address.sheet, row: reading.address.row + top, column: reading.address.column + left, cells, formats };
}

/** A new table, written where the sheet is blank. */
export function tableWrite(place: RangeAddress, table: readonly (readonly (HostValue | null)[])[]): Write {
  return { sheet: place.sheet, row: place.row, column: place.column, cells: table.map((row) => row.map((value) => (isFormula(value) ? value : asTyped(value)))) };
}

/** The write that puts back what the cells of `write` held, from a reading of exactly its rectangle made before it. */
export function putBack(before: RangeReading, write: Write): Write {
  const original = (r: number, c: number): HostValue | null => {
    const formula = before.formulas[r][c];
    return formula.startsWith("=") ? formula : asTyped(before.values[r][c]);
  };
  return {
    sheet: write.sheet,
    row: write.row,
    column: write.column,
    cells: write.cells.map((row, r) => row.map((entry, c) => (entry === undefined ? undefined : original(r, c)))),
    formats: before.formats.map((row, r) => row.map((format, c) => (write.formats?.[r]?.[c] === undefined ? undefined : format))),
  };
}

/** The rectangle of a write as an address. */
export function rangeOf(write: Write): RangeAddress {
  return { sheet: write.sheet, row: write.row, column: write.column, rows: write.cells.length, columns: write.cells[0].length };
}

function isFormula(value: HostValue | null): value is string {
  return typeof value === "string" && value.startsWith("=");
}

/** All digits, a true minus sign: what is written is shown as it is. */
function exact(value: number): string {
  return String(value).replace(/^-/, "−");
}

function rectangle<T>(rows: number, columns: number): (T | undefined)[][] {
  return Array.from({ length: rows }, () => Array.from({ length: columns }, () => undefined));
}
