import { describe, expect, it } from "vitest";
import { Book, type Area } from "../../../../src/host/practice/engine";
import { PracticeWorkbook } from "../../../../src/host/practice/workbook";

function open() {
  const book = new Book();
  const sheet = book.sheets()[0]!;
  const page = {
    selection: { sheet: sheet.id, row: 1, column: 1, rows: 2, columns: 2 } as Area,
    readOnly: null as string | null,
    settled: 0,
    settle() {
      this.settled += 1;
    },
    select(area: Area) {
      this.selection = area;
    },
    onSelection: () => () => undefined,
  };
  return { book, page, workbook: new PracticeWorkbook(book, page), sheet: sheet.name, id: sheet.id };
}

describe("the practice workbook as the pane sees it", () => {
  it("reads values, contents as typed, formats, texts and the ring around a range", async () => {
    const { workbook, sheet } = open();
    await workbook.write(
      [{ sheet, row: 0, column: 0, cells: [["from", "A", "B"], ["A", null, 0.25], ["B", "0,5", "={1,2}"]], formats: [[], [undefined, undefined, "0.0%"]] }],
      "set up",
    );
    const reading = await workbook.read({ sheet, row: 1, column: 1, rows: 2, columns: 3 });
    expect(reading.values).toEqual([["", 0.25, ""], ["0,5", 1, 2]]);
    expect(reading.formulas).toEqual([["", "0.25", ""], ["0,5", "={1,2}", ""]]);
    expect(reading.formats[0]![1]).toBe("0.0%");
    expect(reading.texts[0]![1]).toBe("25.0%");
    expect(reading.facts.neighbours).toEqual({ above: ["A", "B", ""], below: ["", "", ""], left: ["A", "B"], right: ["", ""] });
    expect(reading.facts.calculation).toBe("automatic");
  });

  it("scans to the same values and contents as it reads", async () => {
    const { book, workbook, sheet, id } = open();
    book.apply(["1.50", "text", "=1/0", "={1;2}", "TRUE", "'=A1"].map((text, row) => ({ kind: "type" as const, sheet: id, row: row + (row > 3 ? 1 : 0), column: 0, text })), "type");
    const range = { sheet, row: 0, column: 0, rows: 8, columns: 2 };
    const read = await workbook.read(range);
    const scanned = await workbook.scan(range);
    expect(scanned.values).toEqual(read.values);
    expect(scanned.formulas).toEqual(read.formulas);
    expect(scanned.values.map((row) => row[0])).toEqual([1.5, "text", "#DIV/0!", 1, 2, true, "=A1", ""]);
    expect(scanned.formulas.map((row) => row[0])).toEqual(["1.5", "text", "=1/0", "={1;2}", "", "TRUE", "'=A1", ""]);
  });

  it("tells hidden lines and merged areas that touch the range, others not", async () => {
    const { book, workbook, sheet, id } = open();
    book.apply(
      [
        { kind: "hideRows", sheet: id, from: 2, count: 1, hidden: true },
        { kind: "hideColumns", sheet: id, from: 9, count: 1, hidden: true },
        { kind: "merge", area: { sheet: id, row: 0, column: 0, rows: 2, columns: 2 } },
      ],
      "hide",
    );
    const { facts } = await workbook.read({ sheet, row: 1, column: 1, rows: 3, columns: 3 });
    expect(facts.hiddenRows).toEqual([2]);
    expect(facts.hiddenColumns).toEqual([]);
    expect(facts.merged).toEqual([{ sheet, row: 0, column: 0, rows: 2, columns: 2 }]);
  });

  it("writes a batch as one undo step; text stays text, an apostrophe guards a formula sign", async () => {
    const { book, workbook, sheet, id } = open();
    await workbook.write([{ sheet, row: 0, column: 0, cells: [["'=A1", "0.5", "=1+1", undefined, ""]] }, { sheet, row: 5, column: 0, cells: [[7]] }], "the batch");
    const { values } = await workbook.read({ sheet, row: 0, column: 0, rows: 1, columns: 4 });
    expect(values).toEqual([["=A1", "0.5", 2, ""]]);
    expect(book.undoLabel).toBe("the batch");
    await workbook.undo();
    expect(book.used(id)).toBeNull();
  });

  it("adds a sheet under a free name and never over another", async () => {
    const { workbook } = open();
    expect(await workbook.addSheet("Check sheet", [["x"]])).toBe("Check sheet");
    expect(await workbook.addSheet("Check sheet", [["y"]])).toBe("Check sheet 2");
    expect((await workbook.sheets()).map((s) => s.name)).toEqual(["Sheet1", "Check sheet", "Check sheet 2"]);
  });

  it("places a formula only where its answer has room", async () => {
    const { workbook, sheet } = open();
    await workbook.write([{ sheet, row: 2, column: 1, cells: [["taken"]] }], "set up");
    await expect(workbook.placeFormula({ sheet, row: 0, column: 0 }, "={1,2;3,4;5,6}", { rows: 3, columns: 2 }, "place")).rejects.toThrow("B3 is filled; the answer needs 3 × 2 empty cells from A1 on.");
    await workbook.placeFormula({ sheet, row: 0, column: 0 }, "={1,2;3,4}", { rows: 2, columns: 2 }, "place");
    expect((await workbook.read({ sheet, row: 0, column: 0, rows: 2, columns: 2 })).values).toEqual([[1, 2], [3, 4]]);
  });

  it("takes the open edit first, and refuses with the reason while another tab writes", async () => {
    const { page, workbook, sheet } = open();
    await workbook.write([{ sheet, row: 0, column: 0, cells: [[1]] }], "one");
    expect(page.settled).toBe(1);
    page.readOnly = "Another tab is editing this workbook.";
    await expect(workbook.write([{ sheet, row: 0, column: 0, cells: [[2]] }], "two")).rejects.toThrow(page.readOnly);
    await expect(workbook.store.set("ctmc.audit", {})).rejects.toThrow(page.readOnly);
    await expect(workbook.read({ sheet: "Nowhere", row: 0, column: 0, rows: 1, columns: 1 })).rejects.toThrow("There is no sheet named Nowhere.");
  });

  it("keeps JSON with the workbook", async () => {
    const { book, workbook } = open();
    await workbook.store.set("ctmc.audit", { version: 1, units: { a: "day" } });
    expect(await workbook.store.get("ctmc.audit")).toEqual({ version: 1, units: { a: "day" } });
    expect(await new PracticeWorkbook(Book.fromJSON(JSON.parse(JSON.stringify(book.toJSON()))), open().page).store.get("ctmc.audit")).toEqual({ version: 1, units: { a: "day" } });
  });
});
