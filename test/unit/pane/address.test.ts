import { describe, expect, it } from "vitest";
import { cellText, contains, overlap, placeText, sameRange, within } from "../../../src/pane/address";

const range = { sheet: "Rates", row: 1, column: 1, rows: 5, columns: 5 };

describe("addresses", () => {
  it.each([[0, "A"], [25, "Z"], [26, "AA"], [51, "AZ"], [52, "BA"], [701, "ZZ"], [702, "AAA"], [16383, "XFD"]])("column %d is %s", (column, letters) => {
    expect(cellText({ ...range, column, rows: 1, columns: 1 })).toBe(`${letters}2`);
  });

  it("names ranges, one cell by itself", () => {
    expect(placeText(range)).toBe("Rates B2:F6");
    expect(cellText({ ...range, rows: 1, columns: 1 })).toBe("B2");
  });

  it("places a part of a range, also outside it, never off the sheet", () => {
    expect(cellText(within(range, { row: 5, column: 0, rows: 1, columns: 5 }))).toBe("B7:F7");
    expect(cellText(within(range, { row: -9, column: -1, rows: 1, columns: 1 }))).toBe("A1");
  });

  it("compares ranges", () => {
    const inner = { ...range, row: 2, rows: 2 };
    expect(contains(range, inner)).toBe(true);
    expect(contains(inner, range)).toBe(false);
    expect(contains(range, { ...inner, sheet: "Other" })).toBe(false);
    expect(sameRange(range, { ...range })).toBe(true);
    expect(sameRange(range, null)).toBe(false);
    expect(overlap(range, { ...range, row: 4, column: 3 })).toEqual({ ...range, row: 4, column: 3, rows: 2, columns: 3 });
    expect(overlap(range, { ...range, row: 6 })).toBeNull();
  });
});
