import { describe, expect, it } from "vitest";
import { audit } from "../../../src/audit/audit";
import { Problem } from "../../../src/chain/problem";
import type { Cells } from "../../../src/table/rate-table";
import { codes, complaints, findingOf, headed } from "./table";

const three = ["Running", "Degraded", "Failed"];
const clean = headed("from/to", three, [
  [-0.03, 0.02, 0.01],
  [0.5, -0.6, 0.1],
  [1, 0, -1],
]);

describe("a clean table", () => {
  it("has no finding at all when its diagonal agrees", () => expect(audit(clean)).toEqual([]));
  it("has one note when its diagonal is blank", () => {
    const blank = headed("", three, [[null, 0.02, 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(codes(audit(blank))).toEqual(["diagonalBlank"]);
    expect(findingOf(blank, "diagonalBlank")).toMatchObject({ severity: "note", remedy: "fillDiagonal", details: { rows: 3, all: true } });
  });
});

describe("mistake 1: a row does not sum to 0", () => {
  it("stops, with every row's place", () => {
    const cells = headed("", three, [[-0.03, 0.02, 0.01], [0.5, -0.7, 0.1], [1, 0, -2]]);
    expect(audit(cells)).toMatchObject([
      { code: "rowSum", severity: "stop", span: { row: 2, column: 2 }, also: [{ row: 3, column: 3 }], remedy: "clearDiagonal", details: { places: 2 } },
    ]);
  });
  it("is worded as rounding inside the rounding band (mistake 14)", () => {
    const cells = headed("", three, [[-0.33, 0.17, 0.17], [0.5, -0.6, 0.1], [1, 0, -1]]);
    expect(audit(cells)).toMatchObject([{ code: "rowSumRounded", severity: "stop", remedy: "clearDiagonal" }]);
  });
  it("is silent where the sum differs in the last bits only", () => {
    expect(audit(headed("", three, [[-0.30000000000000004, 0.1, 0.2], [0.5, -0.6, 0.1], [1, 0, -1]]))).toEqual([]);
  });
});

describe("mistake 3: a positive diagonal", () => {
  it("stops and says that a minus sign got lost where it equals the exits", () => {
    const cells = headed("", three, [[0.03, 0.02, 0.01], [0.5, 0.6, 0.1], [1, 0, 1]]);
    expect(audit(cells)).toMatchObject([{ code: "diagonalPositive", severity: "stop", details: { lostMinus: true, places: 3 } }]);
  });
});

describe("mistake 4: columns are from", () => {
  const turned = headed("", three, [[-0.03, 0.5, 1], [0.02, -0.6, 0], [0.01, 0.1, -1]]);
  it("stops where the given diagonal fits the columns", () => {
    expect(complaints(turned)).toContain("columnsSum");
    expect(findingOf(turned, "columnsSum")).toMatchObject({ severity: "stop", remedy: "transposeCopy" });
  });
  it("is silent where rows and columns both sum to 0", () => {
    expect(audit(headed("", three, [[-3, 1, 2], [2, -3, 1], [1, 2, -3]]))).toEqual([]);
  });
  it("asks once, with the largest arrow, where the diagonal is blank", () => {
    const blank = headed("", three, [[null, 0.02, 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(findingOf(blank, "largestArrow", { answers: {} })).toMatchObject({ asks: true, details: { fromName: "Failed", toName: "Running", rate: 1, orientation: true } });
    expect(codes(audit(blank, { answers: { largestArrow: "right" } }))).toEqual(["diagonalBlank"]);
    expect(complaints(blank, { answers: { largestArrow: "columns" } })).toEqual(["columnsSum"]);
    expect(codes(audit(blank))).not.toContain("largestArrow");
  });
  it("warns where a final state has exits and nothing leads to it", () => {
    const turned = headed("", ["Well", "Ill", "Dead"], [[null, 0.3, null], [0.2, null, null], [0.02, 0.1, null]]);
    expect(findingOf(turned, "seemsTransposed")).toMatchObject({ severity: "warning", remedy: "transposeCopy", details: { name: "Dead" } });
    expect(complaints(turned)).toEqual(["seemsTransposed"]);
    expect(complaints(headed("", ["Up", "Failed"], [[null, 0.3], [0.2, null]]))).toEqual([]);
  });
  it("does not ask where the corner gives the order and the amount", () => {
    const said = headed("rate per h, from \\ to", three, [[null, 0.02, 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(codes(audit(said, { answers: {} }))).toEqual(["diagonalBlank"]);
  });
});

describe("mistake 5: probabilities where rates are expected", () => {
  const table = headed("", ["Well", "Ill", "Dead"], [[0.9, 0.08, 0.02], [0.2, 0.7, 0.1], [0, 0, 1]]);
  it("stops and offers the conversion", () => {
    expect(complaints(table)).toEqual(expect.arrayContaining(["probabilityTable"]));
    expect(findingOf(table, "probabilityTable")).toMatchObject({ severity: "stop", remedy: "convertProbability" });
    expect(complaints(table)).not.toContain("probabilitySums");
  });
  it("does not offer to clear the diagonal: that would make rates of probabilities without a word", () => {
    expect(audit(table)).toMatchObject([{ code: "diagonalPositive", remedy: undefined, also: [], details: { explained: true } }, { code: "probabilityTable" }]);
  });
  it("warns of sums that miss 1 by rounding (mistake 14)", () => {
    const rounded = headed("", ["Well", "Ill", "Dead"], [[0.9, 0.08, 0.03], [0.2, 0.7, 0.1], [0, 0, 1]]);
    expect(findingOf(rounded, "probabilitySums")).toMatchObject({ severity: "warning", remedy: "rescaleRows", details: { rows: 1 } });
  });
  it("does not offer it either where only some rows sum to 1", () => {
    const mixed = headed("", ["Well", "Ill", "Dead"], [[0.9, 0.08, 0.02], [2, 3, 0.1], [0, 0, 1]]);
    expect(audit(mixed).map(({ code, remedy }) => [code, remedy])).toEqual([["diagonalPositive", undefined], ["diagonalWithoutExits", undefined]]);
  });
  it("knows them with a class left out, by the stays", () => {
    const unrated = headed("", ["A", "B", "Default"], [[0.87, 0.04, 0.01], [0.05, 0.8, 0.06], [0, 0, 1]]);
    expect(findingOf(unrated, "probabilityTable")).toMatchObject({ details: { short: true } });
    const percent = headed("", ["A", "B", "Default"], [[87, 4, 1], [5, 80, 6], [0, 0, 100]]);
    expect(findingOf(percent, "percentTable")).toMatchObject({ details: { short: true } });
  });
  it("knows exits made probabilities one by one beside sound rows", () => {
    expect(complaints(headed("", ["Well", "Ill", "Dead"], [[0, 0.5934, 0.5507], [0.2, 0.7, 0.1], [0, 0, 1]]))).toContain("competingExits");
  });
  it("is silent on rates whose exits sum to 1", () => {
    expect(complaints([[0, 1, 0], [0, 0, 1], [1, 0, 0]])).toEqual([]);
  });
});

describe("mistake 6: percent as whole numbers", () => {
  it("stops where rows sum to 100", () => {
    const cells = headed("", ["A", "B", "Default"], [[91.5, 7, 1.5], [4, 88, 8], [0, 0, 100]]);
    expect(findingOf(cells, "percentTable")).toMatchObject({ severity: "stop", remedy: "dividePercent" });
  });
  it("is silent on rates that happen to leave at 100", () => {
    expect(complaints([[-100, 60, 40], [100, -100, 0], [50, 50, -100]])).toEqual([]);
  });
});

describe("mistake 13: a negative rate", () => {
  it("stops at the cell", () => {
    const cells = headed("", three, [[null, -0.02, 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(audit(cells)[0]).toMatchObject({ code: "rateNegative", severity: "stop", span: { row: 1, column: 2 }, where: { row: 1, rowName: "Running", column: 2, columnName: "Degraded" } });
  });
});

describe("mistake 15: an unreachable state", () => {
  it("warns of the states that no path from the start meets", () => {
    const cells = headed("", three, [[null, 0.02, 0], [0.5, null, 0], [1, 0, null]]);
    expect(findingOf(cells, "unreachable", { start: Float64Array.of(1, 0, 0) })).toMatchObject({ severity: "warning", details: { names: ["Failed"], started: true } });
  });
  it("reports several states without arrows in as one finding", () => {
    const cells = headed("", ["New", "Used", "Odd", "Strange", "Scrapped"], [
      [null, 1, 0, 0, 0], [0, null, 0, 0, 1], [0, 1, null, 0, 0], [0, 1, 0, null, 0], [0, 0, 0, 0, null],
    ]);
    expect(audit(cells).filter((finding) => finding.code === "unreachable")).toMatchObject([{ details: { names: ["Odd", "Strange"] } }]);
  });
  it("warns of a state in the middle of a square table, where nobody puts the beginning", () => {
    const middle = headed("", ["Up", "Odd", "Down"], [[null, 0, 1], [1, null, 0], [2, 0, null]]);
    expect(findingOf(middle, "unreachable")).toMatchObject({ details: { names: ["Odd"] } });
    expect(complaints([["Up", "Down", 1], ["Odd", "Up", 1], ["Down", "Up", 2], ["Down", "Lost", 2]])).toEqual([]);
  });
  it("warns of a last state without arrows in, unless the table puts its worst state first or the name says beginning", () => {
    const rows = [[null, 0.1, 0], [1, null, 0], [2, 0, null]];
    expect(complaints(headed("", ["Running", "Repair", "Parked"], rows))).toEqual(["unreachable"]);
    expect(complaints(headed("", ["Repair", "Limping", "As new"], rows))).toEqual([]);
    expect(complaints(headed("", ["Failed", "Limping", "Parked"], rows))).toEqual([]);
  });
  it("counts a cell that cannot be read as an arrow", () => {
    expect(complaints(headed("", three, [[null, 0.02, "?"], [0.5, null, -1], [1, 0, null]]))).toEqual(["rateNotNumber", "rateNegative"]);
  });
  it("is silent on a table that lists the worst state first", () => {
    expect(complaints(headed("", ["Scrapped", "Worn", "New"], [[null, 0, 0], [1, null, 0], [0.1, 2, null]]))).toEqual([]);
  });
});

describe("mistake 16: absorbing by mistake", () => {
  it("warns where a row without exits has no final name", () => {
    const cells = headed("", ["Running", "Repair", "Degraded"], [[null, 0.1, 0.2], [0, null, 0], [0.5, 0.1, null]]);
    expect(findingOf(cells, "noExit")).toMatchObject({ severity: "warning", details: { names: ["Repair"] } });
  });
  it.each(["Dead", "Failed", "In default", "Scrapped", "Retired", "Left", "Done", "Closed", "Lost"])("is silent for %s", (name) => {
    expect(complaints(headed("", ["A", "B", name], [[null, 1, 1], [1, null, 1], [null, null, null]]))).toEqual([]);
  });
  it("is silent where a formula waits for whatever has no exit", () => {
    const pump = headed("", ["Fit", "Worn", "Under water"], [[null, 1, 0], [1, null, 1], [null, null, null]]);
    expect(complaints(pump)).toEqual(["noExit"]);
    expect(complaints(pump, { asked: [{ name: "MEANABSORPTION", hasTargets: false, hasStart: false, hasTimes: false, times: [], where: "Plan!B2" }] })).toEqual([]);
    const two = headed("", ["Fit", "Repair", "Failed"], [[null, 1, 0.1], [null, null, null], [null, null, null]]);
    expect(complaints(two, { asked: [{ name: "MEANABSORPTION", hasTargets: false, hasStart: false, hasTimes: false, times: [], where: "Plan!B2" }] })).toContain("noExit");
  });
  it("takes D for default on a rating scale only", () => {
    const grades = [[null, 0.1, 0.01], [0.1, null, 0.02], [0, 0, null]];
    expect(complaints(headed("", ["AAA", "BB+", "D"], grades))).toEqual([]);
    expect(complaints(headed("", ["Dock", "Sea", "D"], grades))).toEqual(["noExit"]);
  });
  it("warns of the repair forgotten in the smallest table, and only notes a code at the end of wear without repair", () => {
    expect(complaints(headed("", ["Up", "Down"], [[null, 0.1], [null, null]]))).toEqual(["noExit"]);
    expect(complaints(headed("", ["S0", "S1", "S2"], [[null, 0.1, 0], [0, null, 0.2], [0, 0, null]]))).toEqual([]);
    expect(complaints(headed("", ["S0", "S1", "S2"], [[null, 0.1, 0], [1, null, 0.2], [0, 0, null]]))).toEqual(["noExit"]);
  });
  it("only notes it where the table has no names", () => {
    expect(audit([[0, 1, 1], [1, 0, 1], [0, 0, 0]]).find((finding) => finding.code === "noExit")?.severity).toBe("note");
  });
});

describe("mistake 17: a time to failure without a target", () => {
  const asked = [{ name: "MEANABSORPTION", hasTargets: false, hasStart: false, hasTimes: false, times: [], where: "Plan!B2" }];
  it("stops where nothing is final", () => expect(findingOf(clean, "noTarget", { asked })).toMatchObject({ severity: "stop", details: { where: "Plan!B2" } }));
  it("is silent with a target, or a final state", () => {
    expect(audit(clean, { asked: [{ ...asked[0], hasTargets: true }] })).toEqual([]);
    expect(complaints(headed("", three, [[null, 1, 1], [1, null, 1], [null, null, null]]), { asked })).toEqual([]);
  });
});

describe("mistake 18: two closed classes", () => {
  const apart = headed("", ["Pump 1 up", "Pump 1 down", "Pump 2 up", "Pump 2 down"], [[null, 1, 0, 0], [2, null, 0, 0], [0, 0, null, 1], [0, 0, 2, null]]);
  it("stops without a start", () => expect(findingOf(apart, "closedClasses")).toMatchObject({ severity: "stop", details: { classes: [["Pump 1 up", "Pump 1 down"], ["Pump 2 up", "Pump 2 down"]] } }));
  it("is silent with a start", () => expect(complaints(apart, { start: Float64Array.of(1, 0, 0, 0) })).not.toContain("closedClasses"));
  it("only notes competing ends under final names", () => {
    const ends = headed("", ["Waiting", "Cured", "Dead"], [[null, 0.2, 0.1], [null, null, null], [null, null, null]]);
    expect(findingOf(ends, "closedClasses")?.severity).toBe("note");
    expect(complaints(ends)).toEqual([]);
  });
});

describe("mistake 19: totals in the selection", () => {
  const rows = [[0, 0.02, 0.01], [0.5, 0, 0.1], [1, 0, 0]];
  const sums = [0.03, 0.6, 1];
  it("names the column by its label", () => {
    const cells: Cells = [["", ...three, "Total"], ...rows.map((row, i) => [three[i], ...row, sums[i]])];
    expect(findingOf(cells, "totalsSelected")).toMatchObject({ severity: "stop", span: { row: 0, column: 4, rows: 4, columns: 1 }, remedy: "narrowSelection", details: { lines: [["column", 5, "Total"]] } });
  });
  it("names row and column where both are there", () => {
    const cells: Cells = [["", ...three, "Sum"], ...rows.map((row, i) => [three[i], ...row, sums[i]]), ["Sum", 1.5, 0.02, 0.11, 1.63]];
    expect(findingOf(cells, "totalsSelected")?.details.lines).toHaveLength(2);
  });
  it("finds it by the sums where nothing is labelled", () => {
    const cells: Cells = rows.map((row, i) => [...row, sums[i]]);
    expect(findingOf(cells, "totalsSelected")?.span).toMatchObject({ column: 3 });
  });
  it("is silent where a column only happens to be the sum of the others", () => {
    expect(complaints(headed("", ["A", "B", "Dead"], [[null, 1, 1], [2, null, 2], [null, null, null]]))).toEqual([]);
  });
});

describe("mistakes 21 and 22: labels and text numbers", () => {
  it("stops at labels that differ, are out of order, or stand twice", () => {
    const differ = [["", "A", "B"], ["A", 0, 1], ["C", 1, 0]];
    const order = [["", "A", "B"], ["B", 0, 1], ["A", 1, 0]];
    const twice = [["", "A", "A"], ["A", 0, 1], ["A", 1, 0]];
    expect(codes(audit(differ))).toEqual(["headingsDiffer"]);
    expect(codes(audit(order))).toEqual(["headingsDiffer"]);
    expect(codes(audit(twice))).toEqual(["nameRepeated"]);
  });
  it.each(["0,02", "0.02\u00a0", "'0.02", "2 000"])("stops at the text number %j and offers to read it", (text) => {
    const cells = headed("", three, [[null, text, 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(audit(cells)[0]).toMatchObject({ code: "rateIsText", severity: "stop", remedy: "convertText" });
  });
  it("offers nothing where a thousand and one point something look alike", () => {
    const cells = headed("", three, [[null, "1,250", 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(audit(cells)[0].remedy).toBeUndefined();
  });
});

describe("a refused start", () => {
  it("is a stop with its own problem", () => {
    const problem = new Problem("startSum", { sum: 0.9 });
    expect(audit(clean, { start: problem })).toMatchObject([{ code: "startSum", severity: "stop", problem }]);
  });
});
