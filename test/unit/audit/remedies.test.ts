import { describe, expect, it } from "vitest";
import { audit } from "../../../src/audit/audit";
import { cellName, rangeName, sheetPrefix } from "../../../src/audit/a1";
import { remedyFor, type Remedy, type RemedyInput } from "../../../src/audit/remedies";
import { remedyTexts } from "../../../src/cells/sentences/remedies";
import { read } from "../../../src/table/read";
import type { Cells, CellValue } from "../../../src/table/rate-table";
import { complaints, headed } from "./table";

const three = ["Running", "Degraded", "Failed"];

function remedy(cells: Cells, code: string, at?: RemedyInput["at"], answers?: Record<string, string>): Remedy | null {
  const finding = audit(cells, { answers }).find((one) => one.code === code);
  if (!finding) throw new Error(`no finding ${code}`);
  const made = remedyFor(finding, { cells, reading: read(cells), at });
  if (made) {
    expect(remedyTexts(made).label).not.toBe("");
    expect(remedyTexts(made).done).toMatch(/\.$/u);
  }
  return made;
}

/** The cells after a remedy of kind "cells", formulas as what they show. */
function after(cells: Cells, made: Remedy | null): Cells {
  if (made?.kind !== "cells") throw new Error("no cell changes");
  const next = cells.map((row) => [...row]) as CellValue[][];
  for (const change of made.changes) next[change.row][change.column] = change.shows ?? change.after;
  return next;
}

describe("remedies", () => {
  const blank = headed("", three, [[null, 0.02, 0.01], [0.5, null, 0.1], [1, 0, null]]);

  it("fill the diagonal with formulas that follow the rates", () => {
    const made = remedy(blank, "diagonalBlank", { sheet: "Plan", row: 4, column: 1 });
    expect(made).toMatchObject({ changes: [
      { row: 1, column: 1, before: "", after: "=-SUM(D6:E6)", shows: -0.03 },
      { row: 2, column: 2, after: "=-SUM(C7,E7)", shows: -0.6 },
      { row: 3, column: 3, after: "=-SUM(C8:D8)", shows: -1 },
    ] });
    expect(audit(after(blank, made))).toEqual([]);
  });

  it("clear a diagonal that does not agree", () => {
    const cells = headed("", three, [[-0.3, 0.02, 0.01], [0.5, -0.6, 0.1], [1, 0, -1]]);
    expect(complaints(after(cells, remedy(cells, "rowSum")))).toEqual([]);
  });

  it("read text numbers, all but those that can be read in two ways", () => {
    const cells = headed("", three, [[null, "0,02", "1,250"], ["0.5\u00a0", null, "1 200"], [1, 0, null]]);
    expect(remedy(cells, "rateIsText")).toMatchObject({ changes: [
      { row: 1, column: 2, before: "0,02", after: 0.02 },
      { row: 2, column: 1, after: 0.5 },
      { row: 2, column: 3, after: 1200 },
    ] });
  });

  it("divide percent, and offer the conversion next", () => {
    const cells = headed("", ["A", "B", "Default"], [[91.5, 7, 1.5], [4, 88, 8], [0, 0, 100]]);
    const next = after(cells, remedy(cells, "percentTable"));
    expect(next[1].slice(1)).toEqual([0.915, 0.07, 0.015]);
    expect(complaints(next)).toContain("probabilityTable");
    expect(remedy(next, "probabilityTable", { sheet: "Q 3", row: 0, column: 0 })).toEqual({
      code: "convertProbability", kind: "newTable", table: [["=CTMC.FROMPROBABILITY('Q 3'!A1:D4,1,TRUE)"]],
    });
  });

  it("rescale rows of probabilities", () => {
    const cells = headed("", ["Well", "Ill", "Dead"], [[0.9, 0.08, 0.03], [0.2, 0.7, 0.1], [0, 0, 1]]);
    const next = after(cells, remedy(cells, "probabilitySums"));
    expect(complaints(next)).not.toContain("probabilitySums");
  });

  it("transpose a copy, headings with it", () => {
    const turned = headed("from/to", three, [[-0.03, 0.5, 1], [0.02, -0.6, 0], [0.01, 0.1, -1]]);
    const made = remedy(turned, "columnsSum");
    expect(made).toMatchObject({ kind: "newTable" });
    expect(audit((made as Extract<Remedy, { kind: "newTable" }>).table)).toEqual([]);
  });

  it("narrow the selection to the table without its totals", () => {
    const cells: Cells = [["", ...three, "Total"], ...[[0, 0.02, 0.01, 0.03], [0.5, 0, 0.1, 0.6], [1, 0, 0, 1]].map((row, i) => [three[i], ...row])];
    expect(remedy(cells, "totalsSelected")).toEqual({ code: "narrowSelection", kind: "selection", range: { row: 0, column: 0, rows: 4, columns: 4 } });
  });

  it("invert mean times into a new table that follows the old one", () => {
    const cells = headed("Mean time (h)", ["Up", "Down"], [[null, 400], [8, null]]);
    expect(remedy(cells, "meanTimes", { sheet: "Data", row: 2, column: 1 })).toEqual({
      code: "invertMeanTimes", kind: "newTable", table: [["rate", "Up", "Down"], ["Up", null, "=1/D4"], ["Down", "=1/C5", null]],
    });
    const list = [["From", "To", "MTTR (h)"], ["Up", "Down", 400], ["Down", "Up", 8]];
    expect(remedy(list, "meanTimes")).toMatchObject({ table: [["From", "To", "rate"], ["Up", "Down", 0.0025], ["Down", "Up", 0.125]] });
  });
});

describe("addresses", () => {
  it("are written as formulas write them", () => {
    expect([cellName(0, 0), cellName(9, 25), cellName(0, 26), cellName(4, 701), cellName(4, 702)]).toEqual(["A1", "Z10", "AA1", "ZZ5", "AAA5"]);
    expect(rangeName({ row: 2, column: 1, rows: 5, columns: 5 })).toBe("B3:F7");
    expect(["Plan", "Q 3", "It's", "A1", "R1C1", "Données"].map(sheetPrefix)).toEqual(["Plan!", "'Q 3'!", "'It''s'!", "'A1'!", "'R1C1'!", "Données!"]);
  });
});
