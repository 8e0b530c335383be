import { describe, expect, it } from "vitest";
import { entry, frozenEntry } from "../../../../src/host/excel/entry";
import { cellText, overlap, placeText } from "../../../../src/host/excel/place";
import { missingSets } from "../../../../src/host/excel/requirements";
import { sentenceOf } from "../../../../src/host/excel/run";
import { themeOf } from "../../../../src/host/excel/theme";
import { freeName } from "../../../../src/host/excel/writing";

describe("entries", () => {
  it.each([
    [undefined, null], [null, ""], ["", ""], [0.5, 0.5], [true, true], ["=A1", "=A1"], ["'=A1", "'=A1"], ["1/2", "'1/2"],
    ["May 5", "'May 5"], ["VRAI", "'VRAI"], ["Machine shop", "Machine shop"], ["Runs, degraded", "Runs, degraded"],
  ])("%s becomes %s", (value, expected) => {
    expect(entry(value)).toBe(expected);
  });

  it.each([["#N/A", "#N/A"], ["#VALUE!", "#VALUE!"], ["", ""], ["=A1", "'=A1"], ["0.5", "'0.5"], ["Up", "'Up"], [1, 1], [false, false]])("the result %s is kept as %s", (value, expected) => {
    expect(frozenEntry(value)).toBe(expected);
  });
});

describe("places", () => {
  it("are written as the host writes them", () => {
    expect([cellText(0, 0), cellText(9, 25), cellText(0, 26), cellText(1_048_575, 16_383)]).toEqual(["A1", "Z10", "AA1", "XFD1048576"]);
    expect([placeText("Plan", 0, 0), placeText("My plan", 1, 1), placeText("It's", 1, 1)]).toEqual(["Plan!A1", "'My plan'!B2", "'It''s'!B2"]);
  });

  it("overlap or do not", () => {
    const a = { sheet: "S", row: 0, column: 0, rows: 3, columns: 3 };
    expect(overlap(a, { sheet: "S", row: 2, column: 1, rows: 5, columns: 1 })).toEqual({ sheet: "S", row: 2, column: 1, rows: 1, columns: 1 });
    expect(overlap(a, { sheet: "S", row: 3, column: 0, rows: 1, columns: 1 })).toBeNull();
  });
});

describe("sheet names", () => {
  it.each([
    ["Check", [], "Check"],
    ["Check", ["CHECK", "check 2"], "Check 3"],
    ["x".repeat(40), ["x".repeat(31)], `${"x".repeat(29)} 2`],
    ["[a]:b", [], "a b"],
    ["'a'", [], "a"],
    ["", [], "Sheet"],
    ["History", [], "History 1"],
  ])("%s beside %j is %s", (wanted, taken, name) => {
    expect(freeName(wanted, taken)).toBe(name);
  });
});

describe("the theme", () => {
  it("is the host's word, else the brightness of its background, else unknown", () => {
    expect(themeOf({ officeTheme: { isDarkTheme: true, bodyBackgroundColor: "#ffffff" } })).toBe("dark");
    expect(themeOf({ officeTheme: { bodyBackgroundColor: "#262626" } })).toBe("dark");
    expect(themeOf({ officeTheme: { bodyBackgroundColor: "F0F0F0" } })).toBe("light");
    expect(themeOf({ officeTheme: {} })).toBeNull();
    expect(themeOf({})).toBeNull();
  });
});

describe("a host that is too old", () => {
  it("is told what it lacks", () => {
    expect(missingSets(() => true)).toEqual([]);
    expect(missingSets((set) => set !== "ExcelApi")).toEqual(["answers that fill several cells (ExcelApi 1.12)"]);
  });
});

describe("whatever is thrown", () => {
  it("ends as a sentence", () => {
    expect(sentenceOf({ code: "ItemNotFound", message: "x" })).toMatch(/no longer there/);
    expect(sentenceOf({ code: "GeneralException", message: "An internal error has occurred." })).toBe("Excel refused this step: An internal error has occurred. (GeneralException)");
    expect(sentenceOf(new Error("Plain."))).toBe("Plain.");
    expect(sentenceOf("text")).toBe("text");
  });
});
