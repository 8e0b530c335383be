import { describe, expect, test } from "vitest";
import { Book, CANONICAL, formatValue, localeOf, readEntry, toCanonical, toLocal } from "../../../src/host/practice/engine";

const german = localeOf("de-DE");
const british = localeOf("en-GB");
const french = localeOf("fr-FR");

describe("typing", () => {
  const cases: readonly [locale: typeof CANONICAL, typed: string, value: unknown, format: string | null][] = [
    [CANONICAL, "12", 12, null],
    [CANONICAL, "-0.5", -0.5, null],
    [CANONICAL, ".5", 0.5, null],
    [CANONICAL, "+7", 7, null],
    [CANONICAL, "12%", 0.12, "0%"],
    [CANONICAL, "12.5 %", 0.125, "0.0%"],
    [CANONICAL, "1,234", 1234, "#,##0"],
    [CANONICAL, "1,234.50", 1234.5, "#,##0.00"],
    [CANONICAL, "1.5e-3", 0.0015, "0.0E+00"],
    [CANONICAL, "1E400", "1E400", null],
    [CANONICAL, "9007199254740991", 9007199254740991, null],
    [CANONICAL, "123456789012345678", "123456789012345678", null],
    [CANONICAL, "2026-03-01", 46082, "yyyy-mm-dd"],
    [CANONICAL, "3/1/2026", 46082, "mm/dd/yyyy"],
    [CANONICAL, "2026-03-01 06:00", 46082.25, "yyyy-mm-dd hh:mm"],
    [CANONICAL, "18:00", 0.75, "hh:mm"],
    [CANONICAL, "2026-02-30", "2026-02-30", null],
    [CANONICAL, "3/4", "3/4", null],
    [CANONICAL, "1-2", "1-2", null],
    [CANONICAL, "1,5", "1,5", null],
    [CANONICAL, "12,34", "12,34", null],
    [CANONICAL, "true", true, null],
    [CANONICAL, "'12", "12", null],
    [CANONICAL, "-", "-", null],
    [CANONICAL, "=", "=", null],
    [CANONICAL, "Running", "Running", null],
    [CANONICAL, "  x ", "  x ", null],
    [CANONICAL, "0x10", "0x10", null],
    [CANONICAL, "Infinity", "Infinity", null],
    [german, "1,5", 1.5, null],
    [german, "1.234,5", 1234.5, "#,##0.0"],
    [german, "1.234", 1234, "#,##0"],
    [german, "1.5", "1.5", null],
    [german, "12,5%", 0.125, "0.0%"],
    [german, "1.3.2026", 46082, "dd.mm.yyyy"],
    [german, "2026-03-01", 46082, "yyyy-mm-dd"],
    [british, "1/3/2026", 46082, "dd/mm/yyyy"],
    [french, "1 234,5", 1234.5, "#,##0.0"],
  ];
  for (const [locale, typed, value, format] of cases) {
    test(`${locale.tag}: ${typed}`, () => {
      const entry = readEntry(typed, locale);
      expect([entry.value, entry.formula, entry.format]).toEqual([value, null, format]);
    });
  }

  test("what the formula bar shows gives the same content when typed again", () => {
    for (const locale of [CANONICAL, german, british, french]) {
      const book = new Book({ locale });
      for (const text of ["12%", "7%", "0.07", "1e-7", "0,1", "29%", "57%", "1234,5", "2026-03-01", "1.3.2026", "18:30", "'12", "'=x", "''quoted", "TRUE", "Running", "#N/A", '=SUM(1;2)&"a;b,c"', "=1/3", "123456789012345678"]) {
        const type = (typed: string) => book.apply([{ kind: "type", sheet: "s1", row: 0, column: 0, text: typed }], "Type");
        type(text);
        const before = JSON.stringify(book.toJSON().sheets);
        type(book.view("s1", 0, 0).input);
        expect(JSON.stringify(book.toJSON().sheets), `${locale.tag} ${text}`).toBe(before);
      }
    }
  });
});

describe("spelling of formulas", () => {
  test("decimal comma and semicolons, apart from quotes and sheet names", () => {
    expect(toCanonical(`=SUM(A1;1,5)&"a;b,c"`, german)).toBe(`=SUM(A1,1.5)&"a;b,c"`);
    expect(toCanonical("='a;b'!A1+{1,5.2;3.4}", german)).toBe("='a;b'!A1+{1.5,2;3,4}");
    expect(toLocal("=SUM(A1,1.5)+{1,2;3,4.5}", german)).toBe("=SUM(A1;1,5)+{1.2;3.4,5}");
    expect(toLocal("=CTMC.CHECK(A1,B2)", german)).toBe("=CTMC.CHECK(A1;B2)");
    expect(toLocal("=SUM(A1,1.5)", british)).toBe("=SUM(A1,1.5)");
  });

  test("text in cells is read by the same habits", () => {
    const book = new Book({ locale: german });
    book.apply([{ kind: "type", sheet: "s1", row: 0, column: 0, text: `="1,5"*2` }], "Type");
    expect(book.view("s1", 0, 0)).toMatchObject({ value: 3, input: `="1,5"*2` });
    book.apply([{ kind: "type", sheet: "s1", row: 0, column: 0, text: "=0,5&1" }], "Type");
    expect(book.view("s1", 0, 0).value).toBe("0,51");
  });
});

describe("number formats", () => {
  const cases: readonly [value: number | string | boolean, code: string, text: string][] = [
    [0.1 + 0.2, "General", "0.3"],
    [1 / 3, "General", "0.333333333"],
    [1234567.891, "General", "1234567.891"],
    [123456789012, "General", "1.23457E+11"],
    [0.00001234, "General", "1.234E-05"],
    [1234.5, "0", "1235"],
    [1.005, "0.00", "1.01"],
    [-1234.5, "#,##0.00", "-1,234.50"],
    [0.125, "0.0%", "12.5%"],
    [0.5, "0%", "50%"],
    [1234567, "0.00E+00", "1.23E+06"],
    [0.00012, "0.0E+00", "1.2E-04"],
    [9.99e5, "0.0E+00", "1.0E+06"],
    [-5, "0;(0)", "(5)"],
    [0, '0;-0;"none"', "none"],
    [12, '0" h"', "12 h"],
    [5, "000", "005"],
    [0.5, "#.##", ".5"],
    [5, "#.##", "5."],
    [1500, "0.0,", "1.5"],
    [46082, "yyyy-mm-dd", "2026-03-01"],
    [46082, "d mmm yy", "1 Mar 26"],
    [46082, "dddd", "Sunday"],
    [46082.75, "hh:mm", "18:00"],
    [46082.75, "h:mm AM/PM", "6:00 PM"],
    [1.5, "[h]:mm", "36:00"],
    [-1, "yyyy-mm-dd", "########"],
    ["Running", "0.00", "Running"],
    ["x", '"state "@', "state x"],
    [true, "0.00", "TRUE"],
    [5, "[<10]0.0;0", "5.0"],
    [15, "[<10]0.0;0", "15"],
    [5, "[Red]0.0", "5.0"],
  ];
  for (const [value, code, text] of cases) test(`${String(value)} as ${code}`, () => expect(formatValue(value, code, CANONICAL)).toBe(text));
  test("in a language with a decimal comma", () => expect(formatValue(-1234.5, "#,##0.00", german)).toBe("-1.234,50"));
  test("a date stays a date when days are added to it", () => {
    const book = new Book();
    for (const [row, text] of ["2026-03-01", "=A1+30", "=A2-A1", "=TODAY()"].entries()) book.apply([{ kind: "type", sheet: "s1", row, column: 0, text }], "Type");
    expect([1, 2].map((row) => book.view("s1", row, 0).text)).toEqual(["2026-03-31", "30"]);
    expect(book.view("s1", 3, 0).text).toMatch(/^\d{4}-\d\d-\d\d$/);
  });
});
