/** An .xlsx file as a workbook record. The file is judged before the library sees it; the open workbook is not touched. */
import type { CellObject, WorkBook, WorkSheet } from "@e965/xlsx";
import { DEFAULT_WIDTH, FILE_VERSION, isDateFormat, parseArea, sheetNameProblem, type BookFile, type CellRecord, type ContentRecord, type NameRecord, type Rect, type SheetRecord } from "../engine";
import { markOldReading } from "./old-formulas";
import { ExchangeRefused } from "./refused";
import { fromFileSpelling } from "./spelling";
import { boldStyles, cellsWithStyles } from "./styles-part";
import { readStore } from "./store-part";
import { LIMITS, unzip, zip, type ZipLimits } from "./zip";

export interface Opened {
  readonly file: BookFile;
  /** Sentences about what the file holds and the practice workbook does not keep. */
  readonly notes: readonly string[];
}

const CELL_LIMIT = 1_500_000;
const SHEET_LIMIT = 200;
const COLUMNS_IN_FILE = 16_384;
/** Array formulas times cells that the library compares with each other. */
const ARRAY_WORK_LIMIT = 4e9;
/** Days from the calendar that counts from 1904 to the one that counts from 1900. */
const FROM_1904 = 1462;

/** Reads a file. @throws ExchangeRefused with a sentence when it is damaged, hostile or too large. */
export async function openXlsx(bytes: Uint8Array, limits: ZipLimits = LIMITS): Promise<Opened> {
  const parts = await unzip(bytes, limits);
  checkParts(parts);
  const library = await import("@e965/xlsx");
  let workbook: WorkBook;
  try {
    // Only parts that are needed go to the library, unpacked, so that it has nothing left to inflate.
    workbook = library.read(await zip(partsForLibrary(parts), false), {
      type: "array",
      dense: true,
      cellFormula: true,
      cellNF: true,
      cellStyles: true,
      cellText: false,
      cellHTML: false,
      sheetStubs: true,
    });
  } catch {
    throw new ExchangeRefused("The file is damaged or no .xlsx workbook: its parts do not fit together.");
  }
  const bold = boldStyles(parts);
  const paths = sheetPaths(parts);
  const notes = notesOn(parts, workbook);
  const names: string[] = [];
  const sheets = workbook.SheetNames.map((name, index): SheetRecord => {
    const problem = sheetNameProblem(name, names);
    if (problem) throw new ExchangeRefused(`The file has a sheet that cannot be opened: ${problem}`);
    names.push(name);
    const xml = bold.size > 0 ? decode(parts.get(paths.get(name) ?? "")) : "";
    return sheetRecord(`s${index + 1}`, name, workbook, new Set(cellsWithStyles(xml, bold)));
  });
  if (sheets.length === 0) throw new ExchangeRefused("The file has no sheets.");
  const defined = namesOf(workbook);
  return { file: { version: FILE_VERSION, ...(defined.length > 0 && { names: defined }), sheets, store: readStore(parts) }, notes };
}

const decode = (content: Uint8Array | undefined): string => (content ? new TextDecoder().decode(content) : "");
const isSheet = (name: string): boolean => /^xl\/worksheets\/[^/]+\.xml$/i.test(name);

function checkParts(parts: ReadonlyMap<string, Uint8Array>): void {
  if (!parts.has("[Content_Types].xml")) throw new ExchangeRefused("The file is damaged or no .xlsx workbook: it has no table of contents.");
  if (parts.has("xl/workbook.bin")) throw new ExchangeRefused("The file is of the binary .xlsb kind. Save it as .xlsx.");
  if (!parts.has("xl/workbook.xml")) throw new ExchangeRefused("The file is damaged or no .xlsx workbook: it has no workbook part.");
  const sheets = [...parts].filter(([name]) => isSheet(name));
  if (sheets.length > SHEET_LIMIT) throw new ExchangeRefused(`The file has ${sheets.length} sheets; at most ${SHEET_LIMIT} are accepted.`);
  let cells = 0;
  for (const [name, content] of parts) {
    if (!/\.(xml|rels)$/i.test(name)) continue;
    const xml = decode(content);
    if (/<!DOCTYPE|<!ENTITY/i.test(xml.slice(0, 4096))) throw new ExchangeRefused(`The file is refused: "${name}" declares entities, which no workbook needs.`);
    if (!isSheet(name)) continue;
    const inSheet = count(xml, /<(?:\w+:)?c[\s>/]/g);
    cells += inSheet;
    if (cells > CELL_LIMIT) throw new ExchangeRefused(`The file has more than ${CELL_LIMIT} cells, which is the limit.`);
    if (count(xml, /\bt="array"/g) * inSheet > ARRAY_WORK_LIMIT) throw new ExchangeRefused(`"${name}" has more array formulas than can be opened.`);
    for (const column of xml.matchAll(/<(?:\w+:)?col\s([^>]*)>/g)) {
      const most = Number(/\bmax="(\d+)"/.exec(column[1]!)?.[1] ?? 0);
      if (most > COLUMNS_IN_FILE) throw new ExchangeRefused(`The file is damaged: "${name}" describes column ${most} of ${COLUMNS_IN_FILE}.`);
    }
  }
}

function count(text: string, pattern: RegExp): number {
  let found = 0;
  while (pattern.exec(text)) found++;
  return found;
}

const NEEDED = /^(\[Content_Types\]\.xml|_rels\/|docProps\/(app|core)\.xml|xl\/(workbook|styles|sharedStrings|metadata)\.xml|xl\/_rels\/workbook|xl\/worksheets\/[^/]+\.xml|xl\/theme\/)/i;

function partsForLibrary(parts: ReadonlyMap<string, Uint8Array>): Map<string, Uint8Array> {
  return new Map([...parts].filter(([name]) => NEEDED.test(name)));
}

function sheetPaths(parts: ReadonlyMap<string, Uint8Array>): Map<string, string> {
  const targets = new Map<string, string>();
  for (const relation of decode(parts.get("xl/_rels/workbook.xml.rels")).matchAll(/<(?:\w+:)?Relationship\s([^>]*)>/g)) {
    const id = /\bId="([^"]*)"/.exec(relation[1]!)?.[1];
    const target = /\bTarget="([^"]*)"/.exec(relation[1]!)?.[1];
    if (id !== undefined && target !== undefined) targets.set(id, target.startsWith("/") ? target.slice(1) : `xl/${target}`);
  }
  const paths = new Map<string, string>();
  for (const sheet of decode(parts.get("xl/workbook.xml")).matchAll(/<(?:\w+:)?sheet\s([^>]*)>/g)) {
    const name = /\bname="([^"]*)"/.exec(sheet[1]!)?.[1];
    const id = /\br:id="([^"]*)"/.exec(sheet[1]!)?.[1];
    const path = targets.get(id ?? "");
    if (name !== undefined && path !== undefined) paths.set(name.replace(/&lt;/g, "<").replace(/&gt;/g, ">").replace(/&quot;/g, '"').replace(/&apos;/g, "'").replace(/&amp;/g, "&"), path);
  }
  return paths;
}

function sheetRecord(id: string, name: string, workbook: WorkBook, bold: ReadonlySet<string>): SheetRecord {
  const sheet = workbook.Sheets[name];
  if (!sheet) throw new ExchangeRefused(`The file is damaged: the sheet "${name}" is missing.`);
  const cells: CellRecord[] = [];
  const shiftDates = workbook.Workbook?.WBProps?.date1904 === true;
  const rows = ((sheet as { "!data"?: CellObject[][] })["!data"] ?? []) as (CellObject[] | undefined)[];
  rows.forEach((line, row) =>
    line?.forEach((cell, column) => {
      const format = typeof cell.z === "string" && cell.z !== "" ? cell.z : "General";
      const record = cellRecord(row, column, contentOf(cell, row, column, shiftDates && isDateFormat(format)), format, bold.has(`${columnName(column)}${row + 1}`));
      if (record) cells.push(record);
    }),
  );
  const properties = workbook.Workbook?.Sheets?.find((entry) => entry.name === name);
  return { id, name, cells, ...(properties?.Hidden ? { hidden: true } : {}), ...layoutOf(sheet) };
}

const columnName = (column: number): string => (column < 26 ? "" : columnName(Math.floor(column / 26) - 1)) + String.fromCharCode(65 + (column % 26));

function cellRecord(row: number, column: number, content: ContentRecord, format: string, bold: boolean): CellRecord | null {
  if (bold) return [row, column, content, format === "General" ? null : format, true];
  if (format !== "General") return [row, column, content, format];
  return content === null ? null : [row, column, content];
}

function contentOf(cell: CellObject, row: number, column: number, fromOldCalendar: boolean): ContentRecord {
  if (typeof cell.f === "string" && cell.f !== "") {
    const formula = fromFileSpelling(cell.f);
    return cell.F === undefined ? markOldReading(formula) : formula;
  }
  if (typeof cell.F === "string" && !isHead(cell.F, row, column)) return null; // filled by another cell's formula
  switch (cell.t) {
    case "n": return typeof cell.v === "number" && Number.isFinite(cell.v) ? cell.v + (fromOldCalendar ? FROM_1904 : 0) : null;
    case "b": return cell.v === true;
    case "e": return { fault: ERROR_NAME[Number(cell.v)] ?? "#VALUE!" };
    case "s": {
      const text = String(cell.v ?? "");
      return text.startsWith("=") ? { text } : text === "" ? null : text;
    }
    default: return null;
  }
}

function isHead(range: string, row: number, column: number): boolean {
  const area = parseArea(range);
  return area === null || (area.row === row && area.column === column);
}

const ERROR_NAME: Readonly<Record<number, string>> = { 0x00: "#NULL!", 0x07: "#DIV/0!", 0x0f: "#VALUE!", 0x17: "#REF!", 0x1d: "#NAME?", 0x24: "#NUM!", 0x2a: "#N/A" };

function layoutOf(sheet: WorkSheet): Partial<SheetRecord> {
  const columns = sheet["!cols"] ?? [];
  const rows = sheet["!rows"] ?? [];
  const widths: [number, number][] = [];
  const hiddenColumns: number[] = [];
  columns.forEach((entry, column) => {
    const width = Math.round(entry?.wpx ?? 0);
    if (width > 0 && !(entry?.hidden === true && width === DEFAULT_WIDTH)) widths.push([column, width]);
    if (entry?.hidden === true) hiddenColumns.push(column);
  });
  const hiddenRows: number[] = [];
  rows.forEach((entry, row) => {
    if (entry?.hidden === true) hiddenRows.push(row);
  });
  const merged = (sheet["!merges"] ?? []).map(({ s, e }): Rect => ({ row: s.r, column: s.c, rows: e.r - s.r + 1, columns: e.c - s.c + 1 }));
  return {
    ...(widths.length > 0 && { widths }),
    ...(hiddenRows.length > 0 && { hiddenRows }),
    ...(hiddenColumns.length > 0 && { hiddenColumns }),
    ...(merged.length > 0 && { merged }),
  };
}

/** Names for cells; those that programs make for themselves (print areas, filters) begin with "_xlnm." and are left. */
function namesOf(workbook: WorkBook): NameRecord[] {
  return (workbook.Workbook?.Names ?? [])
    .filter((entry) => !/^_xl/i.test(entry.Name) && typeof entry.Ref === "string" && entry.Ref !== "")
    .map((entry) => ({ name: entry.Name, formula: fromFileSpelling(entry.Ref), ...(entry.Sheet !== undefined && { sheet: `s${entry.Sheet + 1}` }) }));
}

/** What there is in the file that the practice workbook has no place for. */
function notesOn(parts: ReadonlyMap<string, Uint8Array>, workbook: WorkBook): string[] {
  const names = [...parts.keys()];
  const some = (pattern: RegExp) => names.some((name) => pattern.test(name));
  const notes: string[] = [];
  const lost: string[] = [];
  if (some(/^xl\/charts\//i)) lost.push("charts");
  if (some(/^xl\/media\//i)) lost.push("pictures");
  if (some(/^xl\/(threadedC|c)omments/i)) lost.push("comments");
  if (some(/^xl\/pivot/i)) lost.push("pivot tables");
  if (some(/^xl\/tables\//i)) lost.push("table objects (their cells are kept)");
  if (some(/^xl\/vbaProject/i)) lost.push("macros");
  if (some(/^xl\/externalLinks\//i)) lost.push("links to other workbooks");
  if (some(/^xl\/chartsheets\//i)) lost.push("chart sheets");
  if (lost.length > 0) notes.push(`Not opened here, and not kept when you save: ${lost.join(", ")}.`);
  if (workbook.Workbook?.WBProps?.date1904 === true) notes.push("The file counts days from 1904; its dates were brought to the calendar used here.");
  return notes;
}
