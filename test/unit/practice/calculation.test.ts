import { describe, expect, test } from "vitest";
import { Book, type Edit } from "../../../src/host/practice/engine";
import { place } from "./formulas.helper";

function sheet(cells: Readonly<Record<string, string>>) {
  const book = new Book();
  const at = (address: string) => book.view("s1", place(address).row, place(address).column);
  const type = (entries: Readonly<Record<string, string>>) =>
    book.apply(Object.entries(entries).map(([address, text]): Edit => ({ kind: "type", sheet: "s1", ...place(address), text })), "Type");
  type(cells);
  const changed = (entries: Readonly<Record<string, string>>) => {
    let keys = 0;
    const stop = book.on("change", ({ cells }) => (keys = cells.get("s1")?.size ?? 0));
    type(entries);
    stop();
    return keys;
  };
  return { book, at, type, changed, value: (address: string) => at(address).value };
}

describe("following", () => {
  test("only what follows a changed cell is worked out again", () => {
    const { changed } = sheet({ A1: "1", B1: "=A1+1", C1: "=B1+1", D1: "=5+5", E1: "=D1" });
    expect(changed({ A1: "2" })).toBe(3);
  });

  test("formulas may stand in any order, in chains of any length", () => {
    const book = new Book();
    const length = 20_000;
    book.apply(Array.from({ length }, (_, row): Edit => ({ kind: "put", sheet: "s1", row, column: 0, value: row === length - 1 ? 1 : `=A${row + 2}+1` })), "Fill");
    expect(book.view("s1", 0, 0).value).toBe(length);
  });

  test("a range of very many formulas, all still to be worked out", () => {
    const length = 150_000;
    const book = new Book();
    const edits: Edit[] = Array.from({ length }, (_, row) => ({ kind: "put", sheet: "s1", row, column: 1, value: "=1" }));
    book.apply([{ kind: "put", sheet: "s1", row: 0, column: 0, value: `=SUM(B1:B${length})+SUM(B:B)` }, ...edits], "Fill");
    expect(book.view("s1", 0, 0).value).toBe(2 * length);
  });

  test("a change of formats alone works nothing out again", () => {
    const { book } = sheet({ A1: "1", B1: "=A1+1" });
    let cells = -1;
    book.on("change", (event) => (cells = event.cells.get("s1")?.size ?? 0));
    book.apply([{ kind: "format", area: { sheet: "s1", row: 0, column: 0, rows: 1, columns: 1 }, format: "0.0" }], "Format");
    expect(cells).toBe(1);
    expect(book.view("s1", 0, 0).text).toBe("1.0");
  });

  test("ranges, whole columns and other sheets are followed", () => {
    const { book, value } = sheet({ A1: "1", A2: "2", C1: "=SUM(A:A)", C2: "=SUM(A1:A3)" });
    const [second] = book.apply([{ kind: "addSheet", name: "My plan" }], "Add").addedSheets;
    book.apply([{ kind: "put", sheet: "s1", row: 5, column: 5, value: "='My plan'!A1*2" }, { kind: "put", sheet: second!, row: 0, column: 0, value: 21 }], "Write");
    expect(book.view("s1", 5, 5).value).toBe(42);
    book.apply([{ kind: "put", sheet: "s1", row: 2, column: 0, value: 10 }], "Write");
    expect([value("C1"), value("C2")]).toEqual([13, 13]);
  });

  test("cells that only the evaluation finds are followed too", () => {
    const { type, value } = sheet({ A1: "1", A2: "2", B1: "2", C1: '=INDIRECT("A"&B1)', D1: "=OFFSET(A1,B1-1,0)" });
    expect([value("C1"), value("D1")]).toEqual([2, 2]);
    type({ A2: "7" });
    expect([value("C1"), value("D1")]).toEqual([7, 7]);
    type({ B1: "1" });
    expect([value("C1"), value("D1")]).toEqual([1, 1]);
  });

  test("the followers of a table are counted once each, those inside it not", () => {
    const { book } = sheet({ A1: "1", A2: "=A1", B1: "=SUM(A1:A2)", C1: "=B1+A1" });
    expect(book.dependents({ sheet: "s1", row: 0, column: 0, rows: 2, columns: 1 })).toBe(2);
  });
});

describe("formulas that lead back to themselves", () => {
  test("are named with the way back, and recover", () => {
    const { at, type, value } = sheet({ A1: "=B1", B1: "=C1+1", C1: "=A1", D1: "=A1" });
    expect(at("A1").value).toBe("#REF!");
    expect(at("A1").sentence).toMatch(/^The formula leads back to itself: .*→/);
    expect(value("D1")).toBe("#REF!");
    type({ C1: "4" });
    expect([value("A1"), value("B1"), value("D1")]).toEqual([5, 5, 5]);
  });

  test("across sheets, and of any length", () => {
    const book = new Book();
    book.apply([{ kind: "addSheet", id: "p", name: "My plan" }], "Add");
    const length = 30_000;
    const edits: Edit[] = Array.from({ length }, (_, row) => ({ kind: "put", sheet: "s1", row, column: 0, value: row === length - 1 ? "='My plan'!A1" : `=A${row + 2}` }));
    book.apply([...edits, { kind: "put", sheet: "p", row: 0, column: 0, value: "=Sheet1!A1" }], "Fill");
    expect(book.view("s1", 17, 0).sentence).toBe("The formula leads back to itself: Sheet1!A1 → Sheet1!A2 → Sheet1!A3 → Sheet1!A4 → … → Sheet1!A1.");
    expect(book.view("p", 0, 0).value).toBe("#REF!");
    book.apply([{ kind: "put", sheet: "p", row: 0, column: 0, value: 3 }], "Mend");
    expect(book.view("s1", 0, 0).value).toBe(3);
  });

  test("a formula that reads itself, directly or in a range", () => {
    const { at } = sheet({ A1: "=A1", B3: "=SUM(B1:B9)" });
    expect(at("A1").sentence).toBe("The formula leads back to itself: A1 → A1.");
    expect(at("B3").value).toBe("#REF!");
  });

  test("a branch that is not taken is no way back", () => {
    const { value } = sheet({ A1: "1", B1: "=IF(A1>0,5,C1)", C1: "=B1+1" });
    expect([value("B1"), value("C1")]).toEqual([5, 6]);
  });

  test("a result that would spill onto its own source", () => {
    const { at, type } = sheet({ A1: "=C1:C3", C1: "1" });
    type({ C1: "", B1: "=SUM(C1:C5)", D1: "x" });
    type({ C2: "=SEQUENCE(3)+SUM(C4:C5)" });
    expect(at("C2").value).toBe("#REF!");
    expect(at("C3").value).toBe("");
  });

  // What is shown follows from the contents alone: the same in whatever order they are typed, and after recalculating everything.
  test.each<[string, Record<string, string>, Record<string, unknown>]>([
    ["one that reads itself, in a circle with another", { A3: "=SUM(A1:D4)", C3: "=TRANSPOSE(A1:B3)" }, { A3: "#REF!", C3: "#REF!", D3: "" }],
    ["a circle through the cells of a spill", { A3: "=E4+F1", C3: "=TRANSPOSE(A1:B3)", F1: "2" }, { A3: "#REF!", C3: "#REF!", E4: "" }],
    ["no circle where the spill ends before", { A3: "=E5+F1", C3: "=TRANSPOSE(A1:B3)", F1: "2" }, { A3: 2, C3: 0, E3: 2 }],
    ["a spill whose length decides", { A1: "=C4", C1: "=SEQUENCE(F1+0*A1)", F1: "3" }, { A1: 0, C1: 1, C3: 3 }],
    ["a spill long enough", { A1: "=C4", C1: "=SEQUENCE(F1+0*A1)", F1: "4" }, { A1: "#REF!", C1: "#REF!", C3: "" }],
    ["two circles with a cell in common", { A1: "=B1+C1", B1: "=A1", C1: "=A1", D1: "=B1" }, { A1: "#REF!", B1: "#REF!", C1: "#REF!", D1: "#REF!" }],
    ["a circle that leads to another", { A1: "=A1+B1", B1: "=C1", C1: "=B1", D1: "=IF(F1,7,A1)", F1: "1" }, { A1: "#REF!", B1: "#REF!", C1: "#REF!", D1: 7 }],
  ])("%s", (_, cells, expected) => {
    for (const order of orders(Object.entries(cells))) {
      const { book, type, value } = sheet({});
      const shown = () => Object.fromEntries(Object.keys(expected).map((address) => [address, value(address)]));
      for (const [address, text] of order) type({ [address]: text });
      expect(shown()).toEqual(expected);
      // Away and back again: each cell in turn emptied and typed anew.
      for (const [address, text] of order) {
        type({ [address]: "" });
        type({ [address]: text });
        expect(shown()).toEqual(expected);
      }
      book.recalculate();
      expect(shown()).toEqual(expected);
    }
  });

  test("a spill that gets longer or shorter makes and ends a circle", () => {
    const { type, value } = sheet({ A1: "=C4", C1: "=SEQUENCE(F1+0*A1)", F1: "3" });
    type({ F1: "4" });
    expect([value("A1"), value("C1"), value("C2")]).toEqual(["#REF!", "#REF!", ""]);
    type({ F1: "2" });
    expect([value("A1"), value("C1"), value("C2"), value("C3")]).toEqual([0, 1, 2, ""]);
    type({ A1: "7", F1: "4" });
    type({ A1: "=C4", F1: "2" });
    expect([value("A1"), value("C2"), value("C3")]).toEqual([0, 2, ""]);
  });

  test("something in the way of a spill ends the circle through it", () => {
    const { type, value } = sheet({ A1: "=C3", C1: "=SEQUENCE(3)+0*A1" });
    expect([value("A1"), value("C1")]).toEqual(["#REF!", "#REF!"]);
    type({ C2: "x" });
    expect([value("A1"), value("C1")]).toEqual([0, "#SPILL!"]);
    type({ C2: "" });
    expect([value("A1"), value("C1")]).toEqual(["#REF!", "#REF!"]);
    type({ C1: "=SEQUENCE(2)+0*A1" });
    expect([value("A1"), value("C1"), value("C2")]).toEqual([0, 1, 2]);
    type({ C1: "=SEQUENCE(3)+0*A1" });
    type({ C1: "=E1#" });
    expect([value("A1"), value("C1")]).toEqual([0, "#REF!"]);
  });
});

function orders<T>(entries: readonly T[]): T[][] {
  if (entries.length < 2) return [[...entries]];
  return entries.flatMap((first, at) => orders(entries.filter((_, other) => other !== at)).map((rest) => [first, ...rest]));
}

describe("spills", () => {
  test("fill, follow and shrink with their source", () => {
    const { at, type, value } = sheet({ A1: "3", B1: "=SEQUENCE(A1)", D1: "=SUM(B1#)", E1: "=B3" });
    expect([value("B3"), value("D1"), value("E1")]).toEqual([3, 6, 3]);
    expect(at("B3").anchor).toEqual({ row: 0, column: 1 });
    expect(at("B1").extent).toEqual({ rows: 3, columns: 1 });
    type({ A1: "2" });
    expect([value("B3"), value("D1"), value("E1")]).toEqual(["", 3, 0]);
    type({ A1: "5" });
    expect([value("B5"), value("D1"), value("E1")]).toEqual([5, 15, 3]);
  });

  test("say what is in the way, and take the room when it is freed", () => {
    const { at, type, value } = sheet({ B1: "=SEQUENCE(3,2)", C2: "x" });
    expect(at("B1").value).toBe("#SPILL!");
    expect(at("B1").sentence).toBe("C2 is in the way: the result fills B1:C3. Empty it or move the formula.");
    type({ C2: "" });
    expect(value("C3")).toBe(6);
    type({ B2: "y" });
    expect(value("B1")).toBe("#SPILL!");
    expect(value("B3")).toBe("");
  });

  test("of two that want the same cells the first to be there keeps them", () => {
    const { at, type, value } = sheet({ A1: "=SEQUENCE(1,3)" });
    type({ C3: "=1", B1: "" });
    type({ C3: "", B3: "=SEQUENCE(1,2)" });
    expect(value("C3")).toBe(2);
    type({ C2: "=SEQUENCE(3)" });
    expect(at("C2").sentence).toMatch(/^The result of B3 is in the way at C3/);
    type({ B3: "" });
    expect([value("C2"), value("C4")]).toEqual([1, 3]);
  });

  test("run off the sheet or over merged cells: refused", () => {
    const { at, book } = sheet({ A1: "=SEQUENCE(2)" });
    book.apply([{ kind: "put", sheet: "s1", row: 1_048_575, column: 3, value: "=SEQUENCE(2)" }], "Write");
    expect(book.view("s1", 1_048_575, 3).sentence).toContain("runs off the sheet");
    book.apply([{ kind: "put", sheet: "s1", row: 0, column: 5, value: "=SEQUENCE(4)" }, { kind: "merge", area: { sheet: "s1", row: 2, column: 5, rows: 1, columns: 2 } }], "Write");
    expect(at("F1").sentence).toContain("merged cells at F3");
    book.undo();
    expect(at("F1").value).toBe("");
  });
});

describe("errors", () => {
  test("a formula that cannot be read keeps its text and says where it stops", () => {
    const { at } = sheet({ A1: "=1+", A2: "=SUM(1,2", A3: "=1 2", A4: "=foo(" });
    for (const address of ["A1", "A2", "A3", "A4"]) {
      expect(at(address).value).toBe("#NAME?");
      expect(at(address).sentence).toMatch(/^(A closing bracket is missing|The formula (stops|cannot be read))/);
    }
    expect(at("A1").input).toBe("=1+");
  });

  test("names the unknown function, name or sheet", () => {
    const { at } = sheet({ A1: "=NOSUCH(1)", A2: "=rate*2", A3: "=Gone!A1" });
    expect(at("A1").sentence).toBe("There is no function NOSUCH.");
    expect(at("A2").sentence).toBe("The name RATE is not known.");
    expect(at("A3").sentence).toBe('There is no sheet named "Gone".');
  });

  test("an error travels with its sentence", () => {
    const { at } = sheet({ A1: "=NOSUCH(1)", A2: "=A1+1" });
    expect(at("A2").sentence).toBe("There is no function NOSUCH.");
  });
});

test("a recalculation cut into slices ends with the same values", async () => {
  const book = new Book({ sliceMs: 0 });
  book.apply(Array.from({ length: 300 }, (_, row): Edit => ({ kind: "put", sheet: "s1", row, column: 0, value: row === 0 ? 1 : `=A${row}+1` })), "Fill");
  expect(book.busy).toBe(true);
  await book.whenIdle();
  expect(book.view("s1", 299, 0)).toMatchObject({ value: 300, busy: false });
});

describe("a formula that cannot be read", () => {
  test.each([
    ["=SUM(A1:A3", "A closing bracket is missing: 1 more is opened than closed."],
    ['=IF(LEN("(")>0,SUM((1', "A closing bracket is missing: 3 more are opened than closed."],
    ["=SUM(A1))", "A bracket too many is closed: 1 more is closed than opened."],
    ["='Crew (north'!A1+", 'The formula stops at its end, after "=\'Crew (north\'!A1+": something is missing, or a mark does not belong.'],
  ])("%s says why", (formula, sentence) => {
    expect(sheet({ B1: formula }).at("B1")).toMatchObject({ value: "#NAME?", sentence });
  });
});
