import { describe, expect, test } from "vitest";
import { Book, copy, EditRefused, fill, fillDown, fillRight, move, paste, readFields, shiftFormula, type Area, type Edit } from "../../../src/host/practice/engine";
import { place } from "./formulas.helper";

function sheet(cells: Readonly<Record<string, string>>) {
  const book = new Book();
  book.apply(Object.entries(cells).map(([address, text]): Edit => ({ kind: "type", sheet: "s1", ...place(address), text })), "Type");
  return { book, input: (address: string) => book.view("s1", place(address).row, place(address).column).input };
}

function area(text: string): Area {
  const [first, last = first] = text.split(":");
  const from = place(first!);
  const to = place(last!);
  return { sheet: "s1", ...from, rows: to.row - from.row + 1, columns: to.column - from.column + 1 };
}

test("references move along, locked ones stay, and those that leave the sheet are lost", () => {
  expect(shiftFormula("=A1+$A1+A$1+$A$1", 2, 1)).toBe("=B3+$A3+B$1+$A$1");
  expect(shiftFormula("=SUM(A1:B2)+'My sheet'!C3+D4#", 1, 1)).toBe("=SUM(B2:C3)+'My sheet'!D4+E5#");
  expect(shiftFormula("=SUM(A:B)+SUM(1:2)+SUM($A:B)+SUM($1:2)", 1, 1)).toBe("=SUM(B:C)+SUM(2:3)+SUM($A:C)+SUM($1:3)");
  expect(shiftFormula("=A1+B2", -1, 0)).toBe("=#REF!+B1");
  expect(shiftFormula('=LET(x,A1,x&"A1")', 1, 0)).toBe('=LET(x,A2,x&"A1")');
  expect(shiftFormula("=A1+", 1, 0)).toBe("=A2+");
});

describe("text for other programs", () => {
  test("tabs, line ends and quotes survive", () => {
    const { book } = sheet({ A1: "plain", B1: 'say "so"', A2: "12%" });
    book.apply([{ kind: "put", sheet: "s1", row: 1, column: 1, value: "two\nlines\tand a tab" }], "Write");
    const { text } = copy(book, area("A1:B2"));
    expect(text).toBe('plain\t"say ""so"""\n12%\t"two\nlines\tand a tab"');
    expect(readFields(text)).toEqual([["plain", 'say "so"'], ["12%", "two\nlines\tand a tab"]]);
  });

  test("line ends of all kinds, a last one that ends the last row, empty fields, a quote that is only a letter", () => {
    expect(readFields("a\tb\r\nc\t\r\n")).toEqual([["a", "b"], ["c", ""]]);
    expect(readFields("a\rb")).toEqual([["a"], ["b"]]);
    expect(readFields("")).toEqual([[""]]);
    expect(readFields('6" pipe\t"open')).toEqual([['6" pipe', '"open']]);
  });

  test("pasted fields count as typed", () => {
    const { book, input } = sheet({});
    const filled = paste(book, "Rate\t12%\n=A1\t2026-03-01\n", area("B2"));
    expect(filled).toEqual(area("B2:C3"));
    expect([input("B2"), input("C2"), input("B3"), input("C3")]).toEqual(["Rate", "12%", "=A1", "2026-03-01"]);
    expect(book.undo()?.label).toBe("Paste");
    expect(input("B2")).toBe("");
  });
});

test("a clip keeps its formulas, which move along, and is repeated over a multiple of its size", () => {
  const { book, input } = sheet({ A1: "1", B1: "=A1*2" });
  paste(book, copy(book, area("A1:B1")), area("A3:D4"));
  expect([input("A3"), input("B3"), input("C3"), input("D3"), input("D4")]).toEqual(["1", "=A3*2", "1", "=C3*2", "=C4*2"]);
});

test("what is moved keeps its references", () => {
  const { book, input } = sheet({ A1: "1", B1: "=A1*2" });
  move(book, area("B1"), { sheet: "s1", row: 4, column: 3 });
  expect([input("B1"), input("D5")]).toEqual(["", "=A1*2"]);
});

describe("filling", () => {
  test("down and right over formulas", () => {
    const { book, input } = sheet({ A1: "=B1+$C$1", A3: "x" });
    fillDown(book, area("A1:A3"));
    expect([input("A2"), input("A3")]).toEqual(["=B2+$C$1", "=B3+$C$1"]);
    fillRight(book, area("A3:B3"));
    expect(input("B3")).toBe("=C3+$C$1");
  });

  test("continues even steps of numbers and dates, in any direction", () => {
    const { book, input } = sheet({ A3: "10", A4: "20", B3: "2026-03-01", B4: "2026-03-08", C3: "x", C4: "5" });
    fill(book, area("A3:C4"), area("A3:C6"));
    expect(["A5", "A6", "B5", "B6", "C5", "C6"].map(input)).toEqual(["30", "40", "2026-03-15", "2026-03-22", "x", "5"]);
    fill(book, area("A3:A4"), area("A1:A4"));
    expect(["A1", "A2"].map(input)).toEqual(["-10", "0"]);
    fill(book, area("A3"), area("A3:C3"));
    expect(["B3", "C3"].map(input)).toEqual(["10", "10"]);
  });

  test("0.1 and 0.2 go on as people write them", () => {
    const { book, input } = sheet({ A1: "0.1", A2: "0.2" });
    fill(book, area("A1:A2"), area("A1:A9"));
    expect([input("A3"), input("A7")]).toEqual(["0.3", "0.7"]);
  });
});

describe("one step of undo", () => {
  test("takes back and makes again cells, formats, widths and sheets", () => {
    const { book, input } = sheet({ A1: "1" });
    const saved = () => JSON.stringify(book.toJSON());
    const states = [saved()];
    const steps: Edit[][] = [
      [{ kind: "type", sheet: "s1", row: 0, column: 0, text: "2" }, { kind: "clear", area: area("A1:B2") }],
      [{ kind: "format", area: area("A1:B2"), format: "0.00", bold: true }],
      [{ kind: "width", sheet: "s1", column: 1, width: 140 }, { kind: "hideRows", sheet: "s1", from: 3, count: 2, hidden: true }],
      [{ kind: "addSheet", name: "Plan", id: "p" }, { kind: "put", sheet: "p", row: 0, column: 0, value: "=Sheet1!A1" }],
      [{ kind: "renameSheet", sheet: "s1", name: "Rates table" }],
      [{ kind: "moveSheet", sheet: "p", to: 0 }, { kind: "hideSheet", sheet: "p", hidden: true }],
      [{ kind: "removeSheet", sheet: "p" }],
    ];
    for (const edits of steps) {
      book.apply(edits, "Step");
      states.push(saved());
    }
    expect(new Set(states).size).toBe(states.length);
    for (let at = states.length - 2; at >= 0; at--) {
      book.undo();
      expect(saved()).toBe(states[at]);
    }
    for (let at = 1; at < states.length; at++) {
      book.redo();
      expect(saved()).toBe(states[at]);
    }
    expect(book.redo()).toBe(null);
    expect(input("A1")).toBe("");
  });

  test("a renamed sheet is renamed in formulas; a removed one leaves a sentence and comes back with undo", () => {
    const { book } = sheet({ A1: "5" });
    book.apply([{ kind: "addSheet", name: "Plan", id: "p" }, { kind: "put", sheet: "p", row: 0, column: 0, value: '=Sheet1!A1&"Sheet1!A1"' }], "Add");
    book.apply([{ kind: "renameSheet", sheet: "s1", name: "Bob's rates" }], "Rename");
    expect(book.formula("p", 0, 0)).toBe(`='Bob''s rates'!A1&"Sheet1!A1"`);
    book.apply([{ kind: "removeSheet", sheet: "s1" }], "Remove");
    expect(book.view("p", 0, 0).sentence).toBe(`There is no sheet named "Bob's rates".`);
    book.undo();
    expect(book.view("p", 0, 0).value).toBe("5Sheet1!A1");
  });

  test("an edit that cannot be made leaves nothing of its batch", () => {
    const { book, input } = sheet({ A1: "1" });
    const batch: Edit[] = [{ kind: "type", sheet: "s1", row: 0, column: 0, text: "2" }, { kind: "removeSheet", sheet: "s1" }];
    expect(() => book.apply(batch, "Try")).toThrow(new EditRefused("A workbook needs one sheet that shows."));
    expect(input("A1")).toBe("1");
    for (const name of ["", "a/b", "x".repeat(32), "'x", "sheet1"]) expect(() => book.apply([{ kind: "addSheet", name }], "Add")).toThrow(EditRefused);
    expect(book.freeName("sheet1")).toBe("sheet1 2");
    expect(book.freeName("a/b")).toBe("a b");
  });
});

test("a saved workbook opens as it was; a damaged one is refused with a sentence and changes nothing", () => {
  const { book, input } = sheet({ A1: "1", A2: "=SEQUENCE(2)", B1: "'=no formula", B2: "#N/A" });
  book.store.set("ctmc.audit", { version: 1, signOffs: ["a"] });
  const again = Book.fromJSON(JSON.parse(JSON.stringify(book.toJSON())));
  expect(again.toJSON()).toEqual(book.toJSON());
  expect(again.view("s1", 2, 0).value).toBe(2);
  expect(again.view("s1", 1, 1)).toMatchObject({ value: "#N/A", kind: "error" });
  for (const damaged of [null, 5, {}, { version: 2 }, { version: 1, sheets: [] }, { version: 1, sheets: [{ id: "s1", name: "A", cells: [[1e9, 0, 1]] }] }]) {
    expect(() => book.replaceWith(damaged)).toThrow(/^The saved workbook is /);
  }
  expect(input("A1")).toBe("1");
});
