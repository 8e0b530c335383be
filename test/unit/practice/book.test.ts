import { expect, test } from "vitest";
import { Book } from "../../../src/host/practice/engine";

test("a formula follows the cells it names, and undo takes the step back", () => {
  const book = new Book();
  const type = (row: number, column: number, text: string) => book.apply([{ kind: "type", sheet: "s1", row, column, text }], "Type");
  type(0, 0, "1");
  type(1, 0, "2");
  type(2, 0, "=SUM(A1:A2)*10");
  expect(book.view("s1", 2, 0).value).toBe(30);
  type(1, 0, "4");
  expect(book.view("s1", 2, 0).value).toBe(50);
  expect(book.undo()?.label).toBe("Type");
  expect(book.view("s1", 2, 0).value).toBe(30);
});
