/** What can be done to a workbook, as data; each is carried out here on a transaction. */
import { COLUMN_LIMIT, columnOf, contains, keyOf, overlap, ROW_LIMIT, rowOf, type Area, type Rect } from "./address";
import { readEntry } from "./entry";
import { renameInFormula } from "./formula";
import { impliedFormat } from "./implied-format";
import type { Locale } from "./locale";
import { EMPTY, isDefault, newProperties, Sheet, type Content } from "./sheet";
import type { Transaction } from "./transaction";
import type { Scalar } from "./value";

export type Edit =
  /** What a person types, in the local spelling. */
  | { readonly kind: "type"; readonly sheet: string; readonly row: number; readonly column: number; readonly text: string }
  /** What a program writes: a string with "=" is a formula in the canonical spelling, any other stays text; null clears. */
  | { readonly kind: "put"; readonly sheet: string; readonly row: number; readonly column: number; readonly value: Scalar; readonly format?: string }
  | { readonly kind: "clear"; readonly area: Area }
  | { readonly kind: "format"; readonly area: Area; readonly format?: string; readonly bold?: boolean }
  /** Width in CSS pixels; null is the ordinary width. */
  | { readonly kind: "width"; readonly sheet: string; readonly column: number; readonly columns?: number; readonly width: number | null }
  | { readonly kind: "hideRows" | "hideColumns"; readonly sheet: string; readonly from: number; readonly count: number; readonly hidden: boolean }
  | { readonly kind: "merge" | "unmerge"; readonly area: Area }
  | { readonly kind: "addSheet"; readonly name: string; readonly id?: string; readonly at?: number }
  | { readonly kind: "renameSheet"; readonly sheet: string; readonly name: string }
  | { readonly kind: "removeSheet"; readonly sheet: string }
  | { readonly kind: "moveSheet"; readonly sheet: string; readonly to: number }
  | { readonly kind: "hideSheet"; readonly sheet: string; readonly hidden: boolean };

/** An edit that cannot be made; the message says why. Nothing of its batch was changed. */
export class EditRefused extends Error {
  override readonly name = "EditRefused";
}

export interface EditGround {
  readonly transaction: Transaction;
  readonly locale: Locale;
  readonly sheets: readonly Sheet[];
  readonly nextId: () => string;
}

export function perform(edit: Edit, ground: EditGround): void {
  switch (edit.kind) {
    case "type": return typeInto(edit, ground);
    case "put": return put(edit, ground);
    case "clear": return editExisting(edit.area, ground, (content) => ({ ...content, value: null, formula: null }));
    case "format": return format(edit, ground);
    case "width": return setWidths(edit, ground);
    case "hideRows":
    case "hideColumns": return hideLines(edit, ground);
    case "merge":
    case "unmerge": return merge(edit, ground);
    default: return editSheets(edit, ground);
  }
}

function find(id: string, ground: EditGround): Sheet {
  const sheet = ground.sheets.find((entry) => entry.id === id);
  if (!sheet) throw new EditRefused("The sheet is no longer there.");
  return sheet;
}

function checkCell(row: number, column: number): void {
  if (!(Number.isInteger(row) && Number.isInteger(column) && row >= 0 && column >= 0 && row < ROW_LIMIT && column < COLUMN_LIMIT)) {
    throw new EditRefused(`That is off the sheet, which has ${ROW_LIMIT} rows and ${COLUMN_LIMIT} columns.`);
  }
}

export function setContent(sheet: Sheet, key: number, content: Content, transaction: Transaction): void {
  transaction.setContent(sheet, key, isDefault(content) ? undefined : content);
}

function typeInto({ sheet: id, row, column, text }: Extract<Edit, { kind: "type" }>, ground: EditGround): void {
  checkCell(row, column);
  const sheet = find(id, ground);
  const key = keyOf(row, column);
  const before = sheet.contents.get(key) ?? EMPTY;
  const entry = readEntry(text, ground.locale);
  const asked = entry.formula === null ? entry.format : impliedFormat(entry.formula, (name, atRow, atColumn) => formatAt(name, atRow, atColumn, sheet, ground));
  const format = asked !== null && before.format === "General" ? asked : before.format;
  setContent(sheet, key, { ...before, value: entry.value, formula: entry.formula, format }, ground.transaction);
}

function formatAt(sheetName: string | null, row: number, column: number, own: Sheet, ground: EditGround): string {
  const sheet = sheetName === null ? own : ground.sheets.find((entry) => entry.properties.name.toLowerCase() === sheetName.toLowerCase());
  return sheet?.contents.get(keyOf(row, column))?.format ?? "General";
}

function put({ sheet: id, row, column, value, format }: Extract<Edit, { kind: "put" }>, ground: EditGround): void {
  checkCell(row, column);
  const sheet = find(id, ground);
  const key = keyOf(row, column);
  const before = sheet.contents.get(key) ?? EMPTY;
  const isFormula = typeof value === "string" && value.length > 1 && value.startsWith("=");
  const kept = typeof value === "number" && !Number.isFinite(value) ? String(value) : value === "" ? null : value;
  setContent(sheet, key, { ...before, value: isFormula ? null : kept, formula: isFormula ? value : null, format: format ?? before.format }, ground.transaction);
}

/** Changes the cells of an area that hold anything; cheap on whole rows and columns. */
function editExisting(area: Area, ground: EditGround, change: (content: Content) => Content): void {
  const sheet = find(area.sheet, ground);
  for (const key of keysIn(sheet, area)) setContent(sheet, key, change(sheet.contents.get(key)!), ground.transaction);
}

function keysIn(sheet: Sheet, area: Rect): number[] {
  const keys: number[] = [];
  if (area.rows * area.columns > sheet.contents.size) {
    for (const key of sheet.contents.keys()) if (contains(area, rowOf(key), columnOf(key))) keys.push(key);
    return keys;
  }
  for (let row = area.row; row < area.row + area.rows; row++) {
    for (let column = area.column; column < area.column + area.columns; column++) {
      const key = keyOf(row, column);
      if (sheet.contents.has(key)) keys.push(key);
    }
  }
  return keys;
}

/** Cells that one formatting may touch; whole rows and columns are cut to the used part first. */
const FORMAT_LIMIT = 1_000_000;

function format({ area, format: code, bold }: Extract<Edit, { kind: "format" }>, ground: EditGround): void {
  const sheet = find(area.sheet, ground);
  const used = sheet.used();
  const rows = area.rows === ROW_LIMIT ? (used ? used.row + used.rows : 0) : area.rows;
  const columns = area.columns === COLUMN_LIMIT ? (used ? used.column + used.columns : 0) : area.columns;
  if (rows * columns > FORMAT_LIMIT) throw new EditRefused(`The selection has ${rows * columns} cells; at most ${FORMAT_LIMIT} can be formatted at once.`);
  for (let row = area.row; row < area.row + rows; row++) {
    for (let column = area.column; column < area.column + columns; column++) {
      checkCell(row, column);
      const key = keyOf(row, column);
      const before = sheet.contents.get(key) ?? EMPTY;
      setContent(sheet, key, { ...before, format: code ?? before.format, bold: bold ?? before.bold }, ground.transaction);
    }
  }
}

function setWidths({ sheet: id, column, columns = 1, width }: Extract<Edit, { kind: "width" }>, ground: EditGround): void {
  checkCell(0, column);
  const sheet = find(id, ground);
  const widths = new Map(sheet.properties.widths);
  for (let at = column; at < Math.min(column + columns, COLUMN_LIMIT); at++) {
    if (width === null) widths.delete(at);
    else widths.set(at, Math.min(Math.max(Math.round(width), 12), 2000));
  }
  ground.transaction.setProperties(sheet, { widths });
}

function hideLines({ kind, sheet: id, from, count, hidden }: Extract<Edit, { kind: "hideRows" | "hideColumns" }>, ground: EditGround): void {
  const sheet = find(id, ground);
  const property = kind === "hideRows" ? "hiddenRows" : "hiddenColumns";
  const lines = new Set(sheet.properties[property]);
  for (let line = from; line < from + count; line++) {
    if (hidden) lines.add(line);
    else lines.delete(line);
  }
  ground.transaction.setProperties(sheet, { [property]: lines });
}

function merge({ kind, area }: Extract<Edit, { kind: "merge" | "unmerge" }>, ground: EditGround): void {
  const sheet = find(area.sheet, ground);
  const merged = sheet.properties.merged.filter((entry) => !overlap(entry, area));
  if (kind === "unmerge") return ground.transaction.setProperties(sheet, { merged });
  if (merged.length < sheet.properties.merged.length) throw new EditRefused("The selection touches merged cells. Part them first.");
  if (area.rows * area.columns === 1) throw new EditRefused("Select more than one cell to merge.");
  const filled = keysIn(sheet, area).filter((key) => key !== keyOf(area.row, area.column) && (sheet.contents.get(key)!.value !== null || sheet.contents.get(key)!.formula !== null));
  if (filled.length > 0) throw new EditRefused("Merging would lose the contents of all cells but the first. Empty them first.");
  const { row, column, rows, columns } = area;
  ground.transaction.setProperties(sheet, { merged: [...merged, { row, column, rows, columns }] });
}

/** Names that a file can carry: 31 characters, none of the marks that formulas use (ECMA-376 part 1, 18.2.19 and common practice). */
export function sheetNameProblem(name: string, taken: readonly string[]): string | null {
  if (name.trim() === "") return "A sheet needs a name.";
  if (name.length > 31) return `A sheet's name has at most 31 characters; this one has ${name.length}.`;
  const bad = /[\\/?*[\]:]/.exec(name);
  if (bad) return `The mark ${bad[0]} cannot stand in a sheet's name.`;
  if (name.startsWith("'") || name.endsWith("'")) return "A sheet's name cannot begin or end with an apostrophe.";
  if (taken.some((other) => other.toLowerCase() === name.toLowerCase())) return `There already is a sheet named "${name}".`;
  return null;
}

type SheetEdit = Extract<Edit, { kind: "addSheet" | "renameSheet" | "removeSheet" | "moveSheet" | "hideSheet" }>;

function editSheets(edit: SheetEdit, ground: EditGround): void {
  const { transaction, sheets } = ground;
  if (edit.kind === "addSheet") {
    checkName(edit.name, sheets);
    const sheet = new Sheet(edit.id ?? ground.nextId(), newProperties(edit.name));
    if (sheets.some((other) => other.id === sheet.id)) throw new EditRefused("A sheet of that id is there already.");
    const next = [...sheets];
    next.splice(edit.at ?? next.length, 0, sheet);
    return transaction.setOrder(next);
  }
  const sheet = find(edit.sheet, ground);
  switch (edit.kind) {
    case "renameSheet": {
      if (edit.name === sheet.properties.name) return;
      checkName(edit.name, sheets.filter((other) => other !== sheet));
      const from = sheet.properties.name;
      transaction.setProperties(sheet, { name: edit.name });
      for (const other of sheets) {
        for (const [key, content] of other.contents) {
          if (content.formula === null) continue;
          const formula = renameInFormula(content.formula, from, edit.name);
          if (formula !== content.formula) transaction.setContent(other, key, { ...content, formula });
        }
      }
      transaction.changeNames((formula) => renameInFormula(formula, from, edit.name));
      return;
    }
    case "removeSheet":
      if (sheets.every((other) => other === sheet || other.properties.hidden)) throw new EditRefused("A workbook needs one sheet that shows.");
      return transaction.setOrder(sheets.filter((other) => other !== sheet));
    case "moveSheet": {
      const next = sheets.filter((other) => other !== sheet);
      next.splice(edit.to, 0, sheet);
      return transaction.setOrder(next);
    }
    case "hideSheet":
      if (edit.hidden && sheets.every((other) => other === sheet || other.properties.hidden)) throw new EditRefused("A workbook needs one sheet that shows.");
      return transaction.setProperties(sheet, { hidden: edit.hidden });
  }
}

function checkName(name: string, others: readonly Sheet[]): void {
  const problem = sheetNameProblem(name, others.map((other) => other.properties.name));
  if (problem) throw new EditRefused(problem);
}
