import { parseArea, type Area, type Book, type Edit } from "../engine";

/** What a person would type: "=…" a formula, other strings text, numbers, null for a cell left alone. */
export type Entry = string | number | boolean | null;

/** A sheet written down: blocks of cells by the address of their first cell, then how they look. */
export interface DemoSheet {
  readonly name: string;
  readonly cells: Readonly<Record<string, readonly (readonly Entry[])[]>>;
  readonly bold?: readonly string[];
  readonly formats?: Readonly<Record<string, string>>;
  readonly widths?: Readonly<Record<string, number>>;
}

/** The edits that write a sheet. */
function editsOf(sheet: DemoSheet, id: string): Edit[] {
  const edits: Edit[] = [{ kind: "addSheet", id, name: sheet.name }];
  const area = (text: string): Area => {
    const found = parseArea(text);
    if (!found) throw new Error(`${text} is no address`);
    return { sheet: id, ...found };
  };
  for (const [at, rows] of Object.entries(sheet.cells)) {
    const { row, column } = area(at);
    rows.forEach((line, r) =>
      line.forEach((value, c) => {
        if (value !== null) edits.push({ kind: "put", sheet: id, row: row + r, column: column + c, value });
      }),
    );
  }
  for (const at of sheet.bold ?? []) edits.push({ kind: "format", area: area(at), bold: true });
  for (const [at, format] of Object.entries(sheet.formats ?? {})) edits.push({ kind: "format", area: area(at), format });
  for (const [letters, width] of Object.entries(sheet.widths ?? {})) edits.push({ kind: "width", sheet: id, column: area(`${letters}1`).column, width });
  return edits;
}

/** Writes sheets into a book that holds only its first, empty sheet, and takes that one away. */
export function place(book: Book, sheets: readonly DemoSheet[]): void {
  const first = book.sheets()[0]!;
  const edits = sheets.flatMap((sheet, i) => editsOf(sheet, `demo${i + 1}`));
  book.apply([...edits, { kind: "removeSheet", sheet: first.id }], "the example");
}
