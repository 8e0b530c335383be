import { describe, expect, it } from "vitest";
import { findTables } from "../../../src/audit/tables-in-sheet";
import type { CellValue } from "../../../src/table/rate-table";

type Sheet = CellValue[][];
const B = null;

const spans = (sheet: Sheet): number[][] => findTables(sheet).map(({ span }) => [span.row, span.column, span.rows, span.columns]);

describe("rate tables in a sheet", () => {
  it("are found by their names, with title, notes, totals and results around left out", () => {
    const sheet: Sheet = [
      ["Line 3, rates per h", B, B, B, B, B],
      ["from/to", "Running", "Slow", "Failed", "Total", "Source"],
      ["Running", B, 0.02, 0.01, 0.03, "log 2031"],
      ["Slow", 0.5, B, 0.1, 0.6, "log 2031"],
      ["Failed", 1, 0, B, 1, "guess"],
      ["Availability", 0.97, B, B, B, B],
      ["Mean time", 44.2, B, B, B, B],
    ];
    expect(spans(sheet)).toEqual([[1, 0, 4, 4]]);
    expect(findTables(sheet)[0].leftOut).toEqual([{ line: "column", label: "Total" }]);
  });

  it("are found with one name that differs, in another order, or broken cells", () => {
    expect(spans([["", "A", "B", "C"], ["A", 0, 1, 2], ["B", 1, 0, 2], ["X", 1, 0, 0]])).toEqual([[0, 0, 4, 4]]);
    expect(spans([["", "A", "B", "C"], ["B", 0, 1, 2], ["A", 1, 0, 2], ["C", 1, 0, 0]])).toEqual([[0, 0, 4, 4]]);
    expect(spans([["", "A", "B", "C"], ["A", 0, "0,1", 2], ["B", -1, 0, 2], ["C", 1, 0, 0]])).toEqual([[0, 0, 4, 4]]);
  });

  it("are found side by side and one under the other", () => {
    const sheet: Sheet = [
      ["", "A", "B", B, "", "Up", "Down"],
      ["A", 0, 1, B, "Up", 0, 0.1],
      ["B", 2, 0, B, "Down", 3, 0],
      [B, B, B, B, B, B, B],
      ["", "C", "D", B, B, B, B],
      ["C", 0, 1, B, B, B, B],
      ["D", 2, 0, B, B, B, B],
    ];
    expect(spans(sheet)).toEqual([[0, 0, 3, 3], [0, 4, 3, 3], [4, 0, 3, 3]]);
  });

  it("are found where they touch, with any diagonal", () => {
    const sheet: Sheet = [
      ["", "A", "B", "", "Up", "Down"],
      ["A", 0.9, 0.1, "Up", 0.7, 0.3],
      ["B", 0.2, 0.8, "Down", 0.4, 0.6],
      ["", "C", "D", "", "In", "Out"],
      ["C", 0.5, 0.5, "In", 0.6, 0.4],
      ["D", 0.3, 0.7, "Out", 0.1, 0.9],
    ];
    expect(spans(sheet)).toEqual([[0, 0, 3, 3], [0, 3, 3, 3], [3, 0, 3, 3], [3, 3, 3, 3]]);
  });

  it("are found with a unit row under the headings", () => {
    expect(spans([["", "A", "B"], ["", "1/h", "1/h"], ["A", 0, 1], ["B", 2, 0]])).toEqual([[0, 0, 4, 3]]);
  });

  it("are found as lists, with and without headings, extra columns left out or kept where the rate is not third", () => {
    const rows: Sheet = [["Up", "Down", 0.1, "per h"], ["Down", "Up", 2, "per h"]];
    expect(spans(rows)).toEqual([[0, 0, 2, 3]]);
    expect(spans([["From", "To", "Rate", "Unit"], ...rows])).toEqual([[0, 0, 3, 3]]);
    expect(spans([["From", "To", "Unit", "Rate"], ["Up", "Down", "per h", 0.1], ["Down", "Up", "per h", 2]])).toEqual([[0, 0, 3, 4]]);
  });

  it("are found without names where the diagonal says so", () => {
    expect(spans([[B, B, B, B], [B, -0.1, 0.1, B], [B, 2, -2, B]])).toEqual([[1, 1, 2, 2]]);
    expect(spans([[0, 1, 2], [1, 0, 2], [1, 1, 0], [B, B, B]])).toEqual([[0, 0, 3, 3]]);
  });

  it("are not made of other tables of numbers", () => {
    const budget: Sheet = [["", "Jan", "Feb", "Mar"], ["Spares", 120, 80, 95], ["Crew", 300, 310, 290], ["Hire", 10, 0, 25]];
    expect(spans(budget)).toEqual([]);
    expect(spans([["Name", "Town", "Age"], ["Ann", "Lund", 31], ["Bo", "Ystad", 44]])).toEqual([]);
    expect(spans([[1, 2, 3], [4, 5, 6], [7, 8, 9]])).toEqual([]);
    expect(spans([["Availability", 0.97], ["Unavailability", 0.03]])).toEqual([]);
  });
});
