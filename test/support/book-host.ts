import { Book, type Edit } from "../../src/host/practice/engine";
import { type TestHost, type TestSheet } from "../conformance/workbook";

export interface BookHost extends Omit<TestHost, "workbook" | "protect"> {
  readonly book: Book;
  id(sheet: string): string;
}

/** A workbook of the practice engine with these sheets in it, and what a person does to it behind the pane's back. */
export function bookHost(sheets: readonly TestSheet[], book = new Book()): BookHost {
  const id = (name: string): string => {
    const sheet = book.sheetNamed(name);
    if (!sheet) throw new Error(`The test has no sheet ${name}.`);
    return sheet.id;
  };
  const apply = (...edits: Edit[]): void => void book.apply(edits, "test");
  const [opening] = book.sheets();
  const [first, ...rest] = sheets;
  apply(opening ? { kind: "renameSheet", sheet: opening.id, name: first.name } : { kind: "addSheet", name: first.name });
  for (const { name } of rest) apply({ kind: "addSheet", name });
  const type = (sheet: string, row: number, column: number, text: string): void => apply({ kind: "type", sheet: id(sheet), row, column, text });
  for (const { name, cells } of sheets) {
    for (const [row, line] of cells.entries()) for (const [column, text] of line.entries()) if (text !== "") type(name, row, column, String(text));
  }
  return {
    book,
    id,
    type,
    merge: (range) => apply({ kind: "merge", area: { ...range, sheet: id(range.sheet) } }),
    hideRow: (sheet, row) => apply({ kind: "hideRows", sheet: id(sheet), from: row, count: 1, hidden: true }),
    hideColumn: (sheet, column) => apply({ kind: "hideColumns", sheet: id(sheet), from: column, count: 1, hidden: true }),
    hideSheet: (sheet) => apply({ kind: "hideSheet", sheet: id(sheet), hidden: true }),
  };
}
