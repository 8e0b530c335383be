/** What stands in the workbook: sheets, selection, and everything the audit asks about a range. */
import { type Fact, type HostValue, type RangeAddress, type RangeFacts, type RangeReading, type SheetInfo } from "../../pane/workbook";
import { COLUMNS, overlap, rangeAt, ROWS } from "./place";
import { has, HostRefusal, run } from "./run";
import { contentsOf, spilledCells } from "./spills";

/** More cells than this are not read in one step: the host's answer is limited to 5 MB on the web. */
const MOST_CELLS = 100_000;

const BOUNDS = "rowIndex, columnIndex, rowCount, columnCount";

const boundsOf = (sheet: string, range: Excel.Range): RangeAddress => ({
  sheet,
  row: range.rowIndex,
  column: range.columnIndex,
  rows: range.rowCount,
  columns: range.columnCount,
});

export function readSheets(): Promise<readonly SheetInfo[]> {
  return run(async (context) => {
    const sheets = context.workbook.worksheets.load("items/name, items/visibility");
    await context.sync();
    const used = sheets.items.map((sheet) => sheet.getUsedRangeOrNullObject(true).load(BOUNDS));
    await context.sync();
    return sheets.items.map((sheet, i) => ({
      name: sheet.name,
      hidden: sheet.visibility !== "Visible",
      used: used[i].isNullObject ? null : boundsOf(sheet.name, used[i]),
    }));
  });
}

/**
 * The selected cells: of several areas the first, of whole rows or columns the part that is filled, of a chart or
 * picture the active cell.
 */
export function readSelection(): Promise<RangeAddress> {
  return run(async (context) => {
    const range = await firstArea(context);
    const sheet = range.worksheet.load("name");
    const used = range.worksheet.getUsedRangeOrNullObject(true).load(BOUNDS);
    await context.sync();
    const at = boundsOf(sheet.name, range);
    if (at.rows < ROWS && at.columns < COLUMNS) return at;
    const filled = used.isNullObject ? null : overlap(at, boundsOf(sheet.name, used));
    return filled ?? { ...at, rows: 1, columns: 1 };
  });
}

async function firstArea(context: Excel.RequestContext): Promise<Excel.Range> {
  const areas = context.workbook.getSelectedRanges().areas.load("items/rowIndex, items/columnIndex, items/rowCount, items/columnCount");
  try {
    await context.sync();
    return areas.items[0];
  } catch {
    return context.workbook.getActiveCell().load(BOUNDS);
  }
}

export function readRange(at: RangeAddress): Promise<RangeReading> {
  refuseTooMany(at);
  return run(async (context) => {
    const range = rangeAt(context, at).load("values, formulas, numberFormat, text, hasSpill");
    const facts = queueFacts(context, at);
    await context.sync();
    const spilled = range.hasSpill === false ? null : await spilledCells(context, at, range.formulas);
    return {
      address: at,
      values: range.values as HostValue[][],
      formulas: contentsOf(range, spilled),
      formats: range.numberFormat as string[][],
      texts: range.text,
      facts: facts(),
    };
  });
}

export function scanRange(at: RangeAddress): Promise<Pick<RangeReading, "address" | "values" | "formulas">> {
  refuseTooMany(at);
  return run(async (context) => {
    const range = rangeAt(context, at).load("values, formulas, hasSpill");
    await context.sync();
    const spilled = range.hasSpill === false ? null : await spilledCells(context, at, range.formulas);
    return { address: at, values: range.values as HostValue[][], formulas: contentsOf(range, spilled) };
  });
}

function refuseTooMany({ rows, columns }: RangeAddress): void {
  if (rows * columns > MOST_CELLS) {
    throw new HostRefusal(`${rows} × ${columns} cells are too many to read in one step; at most ${MOST_CELLS.toLocaleString("en")} are. Select the table alone.`);
  }
}

/** Queues what is to be known beside the values; the function returned reads it after the synchronisation. */
function queueFacts(context: Excel.RequestContext, at: RangeAddress): () => RangeFacts {
  const range = rangeAt(context, at);
  const rows = range.getRowProperties({ rowHidden: true });
  const columns = range.getColumnProperties({ columnHidden: true });
  const application = context.workbook.application.load("calculationMode");
  const merged = has("1.13") ? range.getMergedAreasOrNullObject() : null;
  const areas = merged?.areas.load("items/rowIndex, items/columnIndex, items/rowCount, items/columnCount");
  merged?.load("isNullObject");
  const ring = ringOf(at);
  const around = rangeAt(context, ring).load("values");
  return () => ({
    hiddenRows: rows.value.flatMap((one, i) => (one.rowHidden ? [at.row + i] : [])),
    hiddenColumns: columns.value.flatMap((one, i) => (one.columnHidden ? [at.column + i] : [])),
    merged: mergedOf(at.sheet, merged, areas),
    neighbours: neighboursOf(at, ring, around.values as HostValue[][]),
    calculation: application.calculationMode === "Manual" ? "manual" : "automatic",
  });
}

function mergedOf(sheet: string, merged: Excel.RangeAreas | null, areas: Excel.RangeCollection | undefined): Fact<readonly RangeAddress[]> {
  if (merged === null || areas === undefined) return "unknown";
  return merged.isNullObject ? [] : areas.items.map((one) => boundsOf(sheet, one));
}

/** The range and the cells around it, as far as the sheet reaches. */
function ringOf(at: RangeAddress): RangeAddress {
  const row = Math.max(0, at.row - 1);
  const column = Math.max(0, at.column - 1);
  return {
    sheet: at.sheet,
    row,
    column,
    rows: Math.min(ROWS, at.row + at.rows + 1) - row,
    columns: Math.min(COLUMNS, at.column + at.columns + 1) - column,
  };
}

function neighboursOf(at: RangeAddress, ring: RangeAddress, values: HostValue[][]): Exclude<RangeFacts["neighbours"], "unknown"> {
  const value = (row: number, column: number): HostValue => values[row - ring.row]?.[column - ring.column] ?? "";
  const across = (row: number): HostValue[] => Array.from({ length: at.columns }, (_, j) => value(row, at.column + j));
  const down = (column: number): HostValue[] => Array.from({ length: at.rows }, (_, i) => value(at.row + i, column));
  return { above: across(at.row - 1), below: across(at.row + at.rows), left: down(at.column - 1), right: down(at.column + at.columns) };
}
