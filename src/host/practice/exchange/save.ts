/** The workbook as an .xlsx file (ECMA-376): with the add-in its formulas calculate, without it their values show. */
import type { CellObject, WorkBook, WorkSheet } from "@e965/xlsx";
import { areaText, columnOf, DEFAULT_WIDTH, Fault, keyOf, rowOf, type Book, type Rect, type SheetRecord } from "../engine";
import { mayUseArrays } from "./array-use";
import { ExchangeRefused } from "./refused";
import { toFileSpelling } from "./spelling";
import { addStore } from "./store-part";
import { finishStrings } from "./strings-part";
import { BOLD_MARK, finishStyles } from "./styles-part";
import { unzip, zip } from "./zip";

/** Longest text of a cell in a file (common practice of all programs that read them). */
const TEXT_LIMIT = 32_767;
/** Cells, filled or not, that the library passes over in one sheet. */
const WALK_LIMIT = 50_000_000;
/** Error codes as the file library numbers them ([MS-XLS] 2.5.10). */
const ERROR_NUMBER: Readonly<Record<string, number>> = { "#NULL!": 0x00, "#DIV/0!": 0x07, "#VALUE!": 0x0f, "#REF!": 0x17, "#NAME?": 0x1d, "#NUM!": 0x24, "#N/A": 0x2a };

/** Waits for answers under way, then writes. @throws ExchangeRefused when a cell holds what no file can. */
export async function saveXlsx(book: Book): Promise<Uint8Array> {
  await book.whenIdle();
  const library = await import("@e965/xlsx");
  const file = book.toJSON();
  const workbook: WorkBook = {
    SheetNames: file.sheets.map((sheet) => sheet.name),
    Sheets: Object.fromEntries(file.sheets.map((sheet) => [sheet.name, sheetOf(book, sheet)])),
    Workbook: {
      Sheets: file.sheets.map((sheet) => ({ name: sheet.name, Hidden: sheet.hidden ? 1 : 0 })),
      Names: (file.names ?? []).map(({ name, formula, sheet }) => ({
        Name: name,
        Ref: toFileSpelling(formula),
        ...(sheet !== undefined && { Sheet: file.sheets.findIndex((entry) => entry.id === sheet) }),
      })),
    },
    Props: { Application: "Stayrate" },
  };
  const written = new Uint8Array(library.write(workbook, { type: "array", bookType: "xlsx", bookSST: true, compression: false }) as ArrayBuffer);
  const parts = await unzip(written, { fileBytes: Infinity, entries: Infinity, unpackedBytes: Infinity, ratio: Infinity });
  finishStrings(parts);
  finishStyles(parts);
  addStore(parts, file.store);
  return zip(parts, true);
}

function sheetOf(book: Book, record: SheetRecord): WorkSheet {
  const rows: CellObject[][] = [];
  const cellAt = (row: number, column: number): CellObject => ((rows[row] ??= [])[column] ??= { t: "z" });
  const formats = new Map<number, string>();
  for (const [row, column, , format, bold] of record.cells) {
    const code = (format ?? "General") + (bold ? BOLD_MARK : "");
    if (code !== "General") formats.set(keyOf(row, column), code);
  }
  for (const [row, column] of record.cells) writeCell(book, record, row, column, cellAt);
  for (const [key, code] of formats) {
    cellAt(rowOf(key), columnOf(key)).z = code;
  }
  const sheet: WorkSheet = { "!ref": refOf(rows, record.name), "!data": rows } as WorkSheet;
  sheet["!cols"] = columnsOf(record);
  const hiddenRows = record.hiddenRows ?? [];
  if (hiddenRows.length > 0) {
    sheet["!rows"] = [];
    for (const row of hiddenRows) sheet["!rows"][row] = { hidden: true };
  }
  if (record.merged) sheet["!merges"] = record.merged.map(rangeOf);
  return sheet;
}

const rangeOf = (rect: Rect) => ({ s: { r: rect.row, c: rect.column }, e: { r: rect.row + rect.rows - 1, c: rect.column + rect.columns - 1 } });

function writeCell(book: Book, record: SheetRecord, row: number, column: number, cellAt: (row: number, column: number) => CellObject): void {
  const formula = book.formula(record.id, row, column);
  const view = book.view(record.id, row, column);
  const place = () => `${record.name}!${areaText({ row, column, rows: 1, columns: 1 })}`;
  if (formula === null) {
    if (view.kind !== "blank" && view.anchor === null) setValue(cellAt(row, column), book.scalar(record.id, row, column), place);
    return;
  }
  const cell = cellAt(row, column);
  if (view.kind === "error" && view.value === "#NAME?" && view.sentence?.startsWith("The formula ")) {
    // A formula that cannot be read would make the whole file unreadable elsewhere; as text nothing of it is lost.
    setValue(cell, formula, place);
    return;
  }
  const { rows, columns } = view.extent ?? { rows: 1, columns: 1 };
  const table = rows * columns > 1 || mayUseArrays(formula);
  for (let down = 0; down < rows; down++) {
    for (let across = 0; across < columns; across++) {
      const target = cellAt(row + down, column + across);
      setValue(target, book.scalar(record.id, row + down, column + across), place);
      if (table) target.F = areaText({ row, column, rows, columns });
    }
  }
  cell.f = toFileSpelling(formula);
  if (table) cell.D = true;
}

function setValue(cell: CellObject, value: unknown, place: () => string): void {
  if (value instanceof Fault) {
    cell.t = "e";
    cell.v = ERROR_NUMBER[value.code] ?? ERROR_NUMBER["#VALUE!"]!;
  } else if (typeof value === "number") {
    cell.t = "n";
    cell.v = value;
  } else if (typeof value === "boolean") {
    cell.t = "b";
    cell.v = value;
  } else if (typeof value === "string") {
    if (value.length > TEXT_LIMIT) throw new ExchangeRefused(`The text in ${place()} has ${value.length} characters; a file keeps at most ${TEXT_LIMIT}.`);
    cell.t = "s";
    cell.v = value;
  }
}

/** Names the range that the library walks, and gives every row of it a list, as the library expects. */
function refOf(rows: CellObject[][], name: string): string {
  const height = Math.max(1, rows.length);
  const width = rows.reduce((most, row) => Math.max(most, row.length), 1);
  if (height * width > WALK_LIMIT) {
    throw new ExchangeRefused(`The sheet "${name}" reaches to ${areaText({ row: height - 1, column: width - 1, rows: 1, columns: 1 })}, too far apart to be written. Move the cells on its edge closer.`);
  }
  for (let row = 0; row < height; row++) rows[row] ??= [];
  return areaText({ row: 0, column: 0, rows: height, columns: width });
}

function columnsOf(record: SheetRecord): NonNullable<WorkSheet["!cols"]> {
  const columns: NonNullable<WorkSheet["!cols"]> = [];
  for (const [column, width] of record.widths ?? []) columns[column] = { wpx: width };
  for (const column of record.hiddenColumns ?? []) columns[column] = { wpx: DEFAULT_WIDTH, ...columns[column], hidden: true };
  return columns;
}
