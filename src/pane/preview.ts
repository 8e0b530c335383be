import type { Remedy } from "../audit/remedies";
import { contentsOf, usedPart } from "./contents";
import { cellsWrite, shownChanges, spilledInto, tableWrite } from "./remedy-write";
import type { Preview } from "./state";
import type { RangeAddress, RangeReading, Workbook } from "./workbook";

/** What a remedy would do to the sheet, worked out before anything is written. */
export async function previewOf(workbook: Workbook, remedy: Exclude<Remedy, { kind: "selection" }>, reading: RangeReading): Promise<Preview> {
  if (remedy.kind === "cells") {
    const shown = { reading, changes: shownChanges(reading, remedy), place: null, table: [] };
    return spilledInto(reading, remedy)
      ? { ...shown, obstacle: "A formula fills these cells. Change the formula or its source instead.", write: null }
      : { ...shown, obstacle: null, write: cellsWrite(reading, remedy) };
  }
  const { table } = remedy;
  const place = await freePlace(workbook, reading.address, table.length, table[0].length);
  return { reading, changes: [], place, table: table.map((row) => row.map((value) => (value === null ? "" : String(value)))), obstacle: null, write: tableWrite(place, table) };
}

/** The nearest blank place to the right of a table, one column between and one blank line around. */
async function freePlace(workbook: Workbook, beside: RangeAddress, rows: number, columns: number): Promise<RangeAddress> {
  const sheets = await workbook.sheets();
  for (let column = beside.column + beside.columns + 1; ; ) {
    const place = { sheet: beside.sheet, row: beside.row, column, rows, columns };
    const filled = usedPart(sheets, { ...place, rows: rows + 1, columns: columns + 1 });
    if (!filled) return place;
    const { values } = await contentsOf(workbook, filled);
    const last = Math.max(...values.map((row) => row.reduce<number>((found, value, at) => (value === "" ? found : at), -1)));
    if (last < 0) return place;
    column = filled.column + last + 2;
  }
}

/** Are the cells to be written as they were when the preview was made? A new table's place must still be blank. */
export function stillAsShown(now: RangeReading, shown: RangeReading, place: RangeAddress | null): boolean {
  if (place) return now.values.every((row) => row.every((value) => value === ""));
  const row = now.address.row - shown.address.row;
  const column = now.address.column - shown.address.column;
  return now.formulas.every((line, r) =>
    line.every((formula, c) => formula === shown.formulas[row + r]?.[column + c] && now.values[r][c] === shown.values[row + r][column + c]),
  );
}

/** Was the same entered into the same cells? A formula is the same whatever it shows by now. */
export function sameEntries(a: RangeReading, b: RangeReading): boolean {
  return a.formulas.every((line, r) => line.every((formula, c) => formula === b.formulas[r]?.[c] && (formula.startsWith("=") || a.values[r][c] === b.values[r][c])));
}

/** Do two readings of the same cells hold and show the same? */
export function sameContent(a: RangeReading, b: RangeReading): boolean {
  return JSON.stringify([a.values, a.formulas]) === JSON.stringify([b.values, b.formulas]);
}
