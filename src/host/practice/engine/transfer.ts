/** Copying, pasting, moving and filling. Text from and for other programs is tab-separated with quotes (RFC 4180 with tabs). */
import { COLUMN_LIMIT, keyOf, overlap, ROW_LIMIT, type Area } from "./address";
import type { Book } from "./book";
import { EditRefused, setContent } from "./edits";
import { readEntry } from "./entry";
import { shiftFormula } from "./formula";
import { eachCell, EMPTY, type Content, type Sheet } from "./sheet";
import type { Transaction } from "./transaction";

/** What was copied: text for other programs, and the cells themselves for this one. */
export interface Clip {
  readonly text: string;
  readonly area: Area;
  readonly contents: readonly (readonly Content[])[];
}

const TRANSFER_LIMIT = 2_000_000;

/** Copies an area, whole rows and columns cut to the used part. */
export function copy(book: Book, area: Area): Clip {
  const cut = cutToUsed(book, area);
  const contents: Content[][] = [];
  const lines: string[] = [];
  for (let row = 0; row < cut.rows; row++) {
    const line: Content[] = [];
    const fields: string[] = [];
    for (let column = 0; column < cut.columns; column++) {
      line.push(book.content(cut.sheet, cut.row + row, cut.column + column));
      fields.push(quoteField(book.view(cut.sheet, cut.row + row, cut.column + column).text));
    }
    contents.push(line);
    lines.push(fields.join("\t"));
  }
  return { text: lines.join("\n"), area: cut, contents };
}

function cutToUsed(book: Book, area: Area): Area {
  const used = book.used(area.sheet);
  const rows = area.rows === ROW_LIMIT ? Math.max(1, used ? used.row + used.rows : 1) : area.rows;
  const columns = area.columns === COLUMN_LIMIT ? Math.max(1, used ? used.column + used.columns : 1) : area.columns;
  if (rows * columns > TRANSFER_LIMIT) throw new EditRefused(`The selection has ${rows * columns} cells; at most ${TRANSFER_LIMIT} can be copied at once.`);
  return { ...area, rows, columns };
}

const quoteField = (text: string): string => (/[\t\n\r"]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text);

/** Reads tab-separated text: a field that begins with a quote may hold tabs and line ends; a last line end ends the last row. */
export function readFields(text: string): string[][] {
  const rows: string[][] = [[]];
  let field = "";
  let quoted = false;
  let atStart = true;
  const endField = () => {
    rows.at(-1)!.push(field);
    field = "";
    atStart = true;
  };
  for (let at = 0; at < text.length; at++) {
    const character = text[at]!;
    if (quoted) {
      if (character !== '"') field += character;
      else if (text[at + 1] === '"') field += text[++at];
      else quoted = false;
    } else if (character === '"' && atStart && closes(text, at)) {
      quoted = true;
      atStart = false;
    } else if (character === "\t") endField();
    else if (character === "\n" || character === "\r") {
      if (character === "\r" && text[at + 1] === "\n") at++;
      endField();
      if (at < text.length - 1) rows.push([]);
    } else {
      field += character;
      atStart = false;
    }
  }
  if (field !== "" || !/[\n\r]$/.test(text)) endField();
  return rows;
}

/** True when the quote that opens a field is closed right before a tab, a line end or the end; a lone quote is a letter like any other. */
function closes(text: string, open: number): boolean {
  for (let at = open + 1; at < text.length; at++) {
    if (text[at] !== '"') continue;
    if (text[at + 1] === '"') at++;
    else return at + 1 === text.length || /[\t\n\r]/.test(text[at + 1]!);
  }
  return false;
}

/**
 * Pastes at the first cell of the target. A clip keeps its formulas, whose relative references move along, and is
 * repeated when the target is a whole multiple of it; text is taken as if each field were typed. Gives the area filled.
 */
export function paste(book: Book, clip: Clip | string, at: Area, label = "Paste"): Area {
  const block = typeof clip === "string" ? textBlock(book, readFields(clip)) : clipBlock(clip);
  const rows = at.rows % block.rows === 0 && at.rows < ROW_LIMIT ? at.rows : block.rows;
  const columns = at.columns % block.columns === 0 && at.columns < COLUMN_LIMIT ? at.columns : block.columns;
  if (at.row + rows > ROW_LIMIT || at.column + columns > COLUMN_LIMIT) throw new EditRefused("What was copied does not fit below and right of the selected cell.");
  if (rows * columns > TRANSFER_LIMIT) throw new EditRefused(`That would fill ${rows * columns} cells; at most ${TRANSFER_LIMIT} can be filled at once.`);
  const target = { sheet: at.sheet, row: at.row, column: at.column, rows, columns };
  book.change(label, (transaction, sheetById) => {
    const sheet = sheetById(at.sheet);
    for (let row = 0; row < rows; row++) {
      for (let column = 0; column < columns; column++) {
        const key = keyOf(at.row + row, at.column + column);
        const content = block.content(row % block.rows, column % block.columns, at.row + row, at.column + column, sheet.contents.get(key) ?? EMPTY);
        setContent(sheet, key, content, transaction);
      }
    }
  });
  return target;
}

interface Block {
  readonly rows: number;
  readonly columns: number;
  content(row: number, column: number, atRow: number, atColumn: number, before: Content): Content;
}

function clipBlock(clip: Clip): Block {
  return {
    rows: clip.area.rows,
    columns: clip.area.columns,
    content: (row, column, atRow, atColumn) => shifted(clip.contents[row]![column]!, atRow - clip.area.row - row, atColumn - clip.area.column - column),
  };
}

function textBlock(book: Book, fields: readonly (readonly string[])[]): Block {
  return {
    rows: fields.length,
    columns: fields.reduce((most, line) => Math.max(most, line.length), 1),
    content: (row, column, _atRow, _atColumn, before) => {
      const entry = readEntry(fields[row]![column] ?? "", book.locale);
      const format = entry.format !== null && before.format === "General" ? entry.format : before.format;
      return { ...before, value: entry.value, formula: entry.formula, format };
    },
  };
}

const shifted = (content: Content, rows: number, columns: number): Content =>
  content.formula === null ? content : { ...content, formula: shiftFormula(content.formula, rows, columns) };

/** Cut and paste: the cells go as they are, formulas unchanged. Gives the area they went to. */
export function move(book: Book, from: Area, to: { readonly sheet: string; readonly row: number; readonly column: number }, label = "Move"): Area {
  const clip = copy(book, from);
  const target: Area = { ...to, rows: clip.area.rows, columns: clip.area.columns };
  if (to.row + target.rows > ROW_LIMIT || to.column + target.columns > COLUMN_LIMIT) throw new EditRefused("What was cut does not fit below and right of the selected cell.");
  book.change(label, (transaction, sheetById) => {
    const source = sheetById(from.sheet);
    const sheet = sheetById(to.sheet);
    eachCell(clip.area, (row, column) => source.contents.has(keyOf(row, column)) && transaction.setContent(source, keyOf(row, column), undefined));
    clip.contents.forEach((line, row) => line.forEach((content, column) => setContent(sheet, keyOf(to.row + row, to.column + column), content, transaction)));
  });
  return target;
}

/**
 * Fills the target from the source that lies in it, downward or upward line by line when it is taller, else sideways.
 * Formulas move along. Two or more numbers or dates in even steps are continued; anything else is repeated.
 */
export function fill(book: Book, source: Area, target: Area, label = "Fill"): void {
  if (source.sheet !== target.sheet || overlap(source, target)?.rows !== source.rows || overlap(source, target)?.columns !== source.columns) {
    throw new EditRefused("Filling must start from a selection inside the area to fill.");
  }
  if (target.rows * target.columns > TRANSFER_LIMIT) throw new EditRefused(`That would fill ${target.rows * target.columns} cells; at most ${TRANSFER_LIMIT} can be filled at once.`);
  book.change(label, (transaction, sheetById) => {
    const sheet = sheetById(source.sheet);
    const wide = { ...source, row: source.row, rows: source.rows, column: target.column, columns: target.columns };
    if (target.columns > source.columns) fillLines(sheet, transaction, source, wide, "across");
    if (target.rows > source.rows) fillLines(sheet, transaction, wide, target, "down");
  });
}

function fillLines(sheet: Sheet, transaction: Transaction, source: Area, target: Area, way: "down" | "across"): void {
  const down = way === "down";
  const lines = down ? source.columns : source.rows;
  const length = down ? source.rows : source.columns;
  const reach = down ? target.rows : target.columns;
  const offset = down ? source.row - target.row : source.column - target.column;
  for (let line = 0; line < lines; line++) {
    const keyAt = (step: number) => (down ? keyOf(source.row + step, source.column + line) : keyOf(source.row + line, source.column + step));
    const pattern = Array.from({ length }, (_, index) => sheet.contents.get(keyAt(index)) ?? EMPTY);
    const step = evenStep(pattern);
    for (let position = -offset; position < reach - offset; position++) {
      if (position >= 0 && position < length) continue;
      const from = ((position % length) + length) % length;
      const content = pattern[from]!;
      const moved = position - from;
      const first = pattern[0]!;
      const next = step !== null ? { ...first, value: Number(((first.value as number) + step * position).toPrecision(15)) } : shifted(content, down ? moved : 0, down ? 0 : moved);
      setContent(sheet, keyAt(position), next, transaction);
    }
  }
}

function evenStep(pattern: readonly Content[]): number | null {
  if (pattern.length < 2 || pattern.some((content) => content.formula !== null || typeof content.value !== "number")) return null;
  const values = pattern.map((content) => content.value as number);
  const step = values[1]! - values[0]!;
  const scale = values.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  return values.every((value, index) => index === 0 || Math.abs(value - values[index - 1]! - step) <= 1e-12 * scale) ? step : null;
}

/** The first row of the area copied over the rows below it. */
export function fillDown(book: Book, area: Area): void {
  if (area.rows > 1) repeat(book, { ...area, rows: 1 }, area, "Fill down");
}

/** The first column of the area copied over the columns right of it. */
export function fillRight(book: Book, area: Area): void {
  if (area.columns > 1) repeat(book, { ...area, columns: 1 }, area, "Fill right");
}

const repeat = (book: Book, source: Area, target: Area, label: string): unknown => paste(book, copy(book, source), target, label);
