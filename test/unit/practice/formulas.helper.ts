import { Book, type BookOptions } from "../../../src/host/practice/engine";

/** Types a formula into a blank sheet beside some given cells and reads back what it gives: a value, or a table of them. */
export function evaluate(formula: string, cells: Readonly<Record<string, string | number | boolean>> = {}, options: BookOptions = {}): unknown {
  const book = new Book(options);
  const edits = Object.entries(cells).map(([address, value]) => ({ kind: "put" as const, sheet: "s1", ...place(address), value }));
  book.apply([...edits, { kind: "put", sheet: "s1", row: 99, column: 25, value: formula }], "Set up");
  return result(book, 99, 25);
}

export function place(address: string): { row: number; column: number } {
  const match = /^([A-Z]+)(\d+)$/.exec(address)!;
  const column = [...match[1]!].reduce((total, letter) => total * 26 + letter.charCodeAt(0) - 64, 0) - 1;
  return { row: Number(match[2]) - 1, column };
}

export function result(book: Book, row: number, column: number): unknown {
  const { extent, value } = book.view("s1", row, column);
  if (!extent) return value;
  return Array.from({ length: extent.rows }, (_, down) => Array.from({ length: extent.columns }, (__, across) => book.view("s1", row + down, column + across).value));
}
