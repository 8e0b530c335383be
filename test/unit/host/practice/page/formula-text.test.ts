import { describe, expect, it } from "vitest";
import { Book, CANONICAL, localeOf } from "../../../../../src/host/practice/engine";
import { rangeText, takesRange, turnAbsolute, usedRanges, wordAt } from "../../../../../src/host/practice/page/formula-text";

describe("ranges of a formula", () => {
  const book = new Book();
  const home = book.sheets()[0]!.id;
  const { addedSheets } = book.apply([{ kind: "addSheet", name: "Chiller rates" }, { kind: "put", sheet: home, row: 4, column: 0, value: "={1;2;3}" }], "set up");

  it("are found with their place in the text, the same one under the same mark", () => {
    const text = "=SUM(B3:F7, 'Chiller rates'!$A$1, b3:f7, A5#, Nowhere!A1)";
    const found = usedRanges(text, book, home);
    expect(found.map((r) => text.slice(r.start, r.end).replace("#", ""))).toEqual(["B3:F7", "'Chiller rates'!$A$1", "b3:f7", "A5", "Nowhere!A1"]);
    expect(found.map((r) => r.mark)).toEqual([0, 1, 0, 2, 3]);
    expect(found[0]!.area).toEqual({ sheet: home, row: 2, column: 1, rows: 5, columns: 5 });
    expect(found[1]!.area!.sheet).toBe(addedSheets[0]);
    expect(found[3]!.area).toEqual({ sheet: home, row: 4, column: 0, rows: 3, columns: 1 });
    expect(found[4]!.area).toBeNull();
  });
  it("are read from unfinished text, and not from text constants", () => {
    expect(usedRanges('=CTMC.SURVIVAL(B3:F7,"A1', book, home)).toHaveLength(1);
    expect(usedRanges("=A1+B2:", book, home)).toHaveLength(2);
    expect(usedRanges("A1", book, home)).toEqual([]);
  });
});

describe("the caret", () => {
  it("offers names where one can stand, not in text, numbers or ranges", () => {
    expect(wordAt("=CTMC.TR", 8, CANONICAL)).toEqual({ start: 1, word: "CTMC.TR" });
    expect(wordAt("=SUM(ct", 7, CANONICAL)).toEqual({ start: 5, word: "ct" });
    expect(wordAt('=IF(A1,"ct', 10, CANONICAL)).toBeNull();
    expect(wordAt("=Sheet2!AB", 10, CANONICAL)).toBeNull();
    expect(wordAt("CTMC", 4, CANONICAL)).toBeNull();
    expect(wordAt("=SUM(1", 2, CANONICAL)).toBeNull();
  });
  it("takes a range after a bracket, an operator or a separator only", () => {
    for (const t of ["=", "=SUM(", "=A1+", "=SUM(A1, ", "=A1&"]) expect(takesRange(t, t.length, CANONICAL), t).toBe(true);
    for (const t of ["", "12", "=A1", "=SUM(A1)", '="text', "=A5#", "=SUM", "={"]) expect(takesRange(t, t.length, CANONICAL), t).toBe(false);
    expect(takesRange("=SUMME(A1;", 10, localeOf("de-DE"))).toBe(true);
  });
});

describe("writing references", () => {
  it("names the sheet only when it is another, quoted where it must be", () => {
    expect(rangeText({ row: 2, column: 1, rows: 5, columns: 5 }, null)).toBe("B3:F7");
    expect(rangeText({ row: 2, column: 1, rows: 1, columns: 1 }, "Chiller rates")).toBe("'Chiller rates'!B3");
    expect(rangeText({ row: 0, column: 1, rows: 1_048_576, columns: 2 }, "Plan")).toBe("Plan!B:C");
  });
  it("turns a reference through its four forms", () => {
    const forms: string[] = [];
    let state = { text: "=SUM(B3:F7)", caret: 8 };
    for (let i = 0; i < 4; i += 1) {
      state = turnAbsolute(state.text, state.caret, CANONICAL)!;
      forms.push(state.text);
    }
    expect(forms).toEqual(["=SUM($B$3:$F$7)", "=SUM(B$3:F$7)", "=SUM($B3:$F7)", "=SUM(B3:F7)"]);
    expect(turnAbsolute("=SUM(1)", 5, CANONICAL)).toBeNull();
  });
});
