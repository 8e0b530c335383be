/** The workbook as versioned JSON, for the browser's store and for the exchange with files. */
import { keyOf, COLUMN_LIMIT, ROW_LIMIT, columnOf, rowOf, type Rect } from "./address";
import { EMPTY, newProperties, Sheet, type Content } from "./sheet";
import { Fault, isFaultCode, type Scalar } from "./value";

export const FILE_VERSION = 1;

/** [row, column, value or formula, format?, bold?]; an error value is { fault }, a text that begins with "=" is { text }. */
export type CellRecord = readonly [row: number, column: number, content: ContentRecord, format?: string | null, bold?: boolean];
export type ContentRecord = number | string | boolean | null | { readonly fault: string } | { readonly text: string };

export interface SheetRecord {
  readonly id: string;
  readonly name: string;
  readonly hidden?: boolean;
  readonly cells: readonly CellRecord[];
  readonly widths?: readonly (readonly [column: number, width: number])[];
  readonly hiddenRows?: readonly number[];
  readonly hiddenColumns?: readonly number[];
  readonly merged?: readonly Rect[];
}

/** A name for cells, as workbooks from elsewhere bring it along: it stands for a formula, on one sheet or on all. */
export interface NameRecord {
  readonly name: string;
  /** Canonical spelling with its equals sign. */
  readonly formula: string;
  /** Id of the only sheet where it holds. */
  readonly sheet?: string;
}

export interface BookFile {
  readonly version: typeof FILE_VERSION;
  readonly names?: readonly NameRecord[];
  readonly sheets: readonly SheetRecord[];
  readonly store: Readonly<Record<string, unknown>>;
}

export function writeSheet(sheet: Sheet): SheetRecord {
  const { name, hidden, widths, hiddenRows, hiddenColumns, merged } = sheet.properties;
  const cells: CellRecord[] = [];
  sheet.contents.forEach((content, key) => cells.push(writeCell(rowOf(key), columnOf(key), content)));
  return {
    id: sheet.id,
    name,
    cells,
    ...(hidden && { hidden }),
    ...(widths.size > 0 && { widths: [...widths] }),
    ...(hiddenRows.size > 0 && { hiddenRows: [...hiddenRows] }),
    ...(hiddenColumns.size > 0 && { hiddenColumns: [...hiddenColumns] }),
    ...(merged.length > 0 && { merged }),
  };
}

function writeCell(row: number, column: number, { value, formula, format, bold }: Content): CellRecord {
  const content = formula ?? (value instanceof Fault ? { fault: value.code } : typeof value === "string" && value.startsWith("=") ? { text: value } : value);
  if (bold) return [row, column, content, format === "General" ? null : format, true];
  return format === "General" ? [row, column, content] : [row, column, content, format];
}

/** A saved workbook that cannot be read; the message says what is wrong. */
export class FileRefused extends Error {
  override readonly name = "FileRefused";
}

export function readFile(file: unknown): { sheets: Sheet[]; names: NameRecord[]; store: Record<string, unknown> } {
  if (!isRecord(file)) throw new FileRefused("The saved workbook is damaged: it is no workbook record.");
  if (file.version !== FILE_VERSION) throw new FileRefused(`The saved workbook is of version ${String(file.version)}; this page reads version ${FILE_VERSION}.`);
  if (!Array.isArray(file.sheets) || file.sheets.length === 0) throw new FileRefused("The saved workbook is damaged: it has no sheets.");
  const sheets = file.sheets.map(readSheet);
  if (new Set(sheets.map((sheet) => sheet.id)).size < sheets.length) throw new FileRefused("The saved workbook is damaged: two sheets share an id.");
  const names = (Array.isArray(file.names) ? (file.names as unknown[]) : []).filter(
    (entry): entry is NameRecord & Record<string, unknown> => isRecord(entry) && typeof entry.name === "string" && typeof entry.formula === "string" && entry.formula.startsWith("="),
  );
  return { sheets, names, store: isRecord(file.store) ? { ...file.store } : {} };
}

const isRecord = (value: unknown): value is Record<string, unknown> => typeof value === "object" && value !== null && !Array.isArray(value);

function readSheet(record: unknown): Sheet {
  if (!isRecord(record) || typeof record.id !== "string" || typeof record.name !== "string" || !Array.isArray(record.cells)) {
    throw new FileRefused("The saved workbook is damaged: a sheet has no name or no cells.");
  }
  const numbers = (value: unknown) => (Array.isArray(value) ? value.filter((entry): entry is number => typeof entry === "number") : []);
  const sheet = new Sheet(record.id, {
    ...newProperties(record.name),
    hidden: record.hidden === true,
    widths: new Map((Array.isArray(record.widths) ? record.widths : []) as [number, number][]),
    hiddenRows: new Set(numbers(record.hiddenRows)),
    hiddenColumns: new Set(numbers(record.hiddenColumns)),
    merged: (Array.isArray(record.merged) ? record.merged : []) as Rect[],
  });
  for (const cell of record.cells as unknown[]) {
    const [row, column, content, format, bold] = Array.isArray(cell) ? (cell as unknown[]) : [];
    if (typeof row !== "number" || typeof column !== "number" || !(row >= 0 && row < ROW_LIMIT && column >= 0 && column < COLUMN_LIMIT)) {
      throw new FileRefused(`The saved workbook is damaged: a cell of "${record.name}" has no place.`);
    }
    const formula = typeof content === "string" && content.startsWith("=") && content.length > 1 ? content : null;
    sheet.setContent(keyOf(row, column), {
      ...EMPTY,
      formula,
      value: formula === null ? readContent(content) : null,
      format: typeof format === "string" ? format : "General",
      bold: bold === true,
    });
  }
  return sheet;
}

function readContent(content: unknown): Scalar {
  if (typeof content === "number" || typeof content === "string" || typeof content === "boolean") return content;
  if (isRecord(content) && typeof content.text === "string") return content.text;
  if (isRecord(content) && typeof content.fault === "string") return new Fault(isFaultCode(content.fault) ? content.fault : "#VALUE!");
  return null;
}
