import { describe, expect, test } from "vitest";
import { callAt, CANONICAL, CustomFunctionHost, functionList, localeOf, pieces } from "../../../src/host/practice/engine";

describe("pieces", () => {
  test("references with where they point, without gaps", () => {
    const text = "=SUM('My plan'!$B$3:F7, 1.5)+A5#";
    const found = pieces(text, CANONICAL);
    expect(found.map((piece) => piece.text).join("")).toBe(text);
    expect(found.filter((piece) => piece.reference).map((piece) => piece.reference)).toEqual([
      { sheetName: "My plan", row: 2, column: 1, rows: 5, columns: 5, spill: false },
      { sheetName: null, row: 4, column: 0, rows: 1, columns: 1, spill: true },
    ]);
  });
  test("in the local spelling, at the places where it is typed", () => {
    const found = pieces("=SUM(A1;1,5)", localeOf("de-DE"));
    expect(found.map(({ kind, text }) => [kind, text])).toEqual([
      ["operator", "="], ["function", "SUM"], ["open", "("], ["reference", "A1"], ["separator", ";"], ["number", "1,5"], ["close", ")"],
    ]);
  });
  test("unfinished text is taken as far as it goes", () => {
    for (const text of ["=", "=SUM(", '=SUM(A1,"open', "=A1:", "='x", "=1+*", "={1,", "=SUM(A1,,"]) {
      expect(pieces(text, CANONICAL).map((piece) => piece.text).join("")).toBe(text);
    }
    expect(pieces("no formula", CANONICAL)).toEqual([]);
  });
});

describe("the call around the caret", () => {
  const text = "=CTMC.AVAILABILITY(B3:F7, IF(A1>0, {1,2}, 3), 5)";
  test.each([[20, "CTMC.AVAILABILITY", 0], [27, "CTMC.AVAILABILITY", 1], [30, "IF", 0], [37, "IF", 1], [40, "IF", 1], [42, "IF", 2], [44, "CTMC.AVAILABILITY", 1], [46, "CTMC.AVAILABILITY", 2]])("at %i", (caret, name, argument) => {
    expect(callAt(text, caret, CANONICAL)).toMatchObject({ name, argument });
  });
  test("none before or outside", () => {
    expect(callAt(text, 5, CANONICAL)).toBe(null);
    expect(callAt("=1+(2", 5, CANONICAL)).toBe(null);
    expect(callAt("=SUM(1)", 7, CANONICAL)).toBe(null);
  });
  test("argument separators of the language", () => expect(callAt("=SUM(1,5;2;", 11, localeOf("de-DE"))).toMatchObject({ name: "SUM", argument: 2 }));
});

test("functions come with their arguments and a description, the add-in's first", () => {
  const host = new CustomFunctionHost();
  host.standIn.associate("X", () => 1);
  host.useMetadata({ functions: [{ id: "X", name: "X", description: "Does x.", parameters: [{ name: "rates", description: "The table." }, { name: "time", optional: true }] }, { id: "Y", name: "Y", parameters: [] }] });
  const list = functionList(host);
  expect(list[0]).toEqual({ name: "CTMC.X", description: "Does x.", custom: true, arguments: [{ name: "rates", optional: false, text: "The table." }, { name: "time", optional: true, text: "" }] });
  expect(list.map((entry) => entry.name)).not.toContain("CTMC.Y");
  expect(list.length).toBeGreaterThan(150);
  for (const { name, description } of list) expect(description, name).toMatch(/\.$/);
});
