import { describe, expect, it } from "vitest";
import { audit } from "../../../src/audit/audit";
import type { SheetFacts } from "../../../src/audit/facts";
import { kindOf } from "../../../src/audit/kind";
import { readBody, roundingBand } from "../../../src/audit/body";
import { findingTexts } from "../../../src/cells/sentences/findings";
import { read } from "../../../src/table/read";
import type { Cells, CellValue } from "../../../src/table/rate-table";
import { codes, complaints, findingOf, headed } from "./table";

/** Both sides of the thresholds on which the rules turn. */

const three = ["Running", "Degraded", "Failed"];
const rates = [[null, 0.02, 0.01], [0.5, null, 0.1], [1, 0, null]];
const kindIn = (rows: readonly (readonly CellValue[])[]): string => kindOf(readBody(rows, read(rows).layout!));

describe("the kind of a table", () => {
  it("is probability within a fiftieth of 1, or a fifth below it with the stays largest", () => {
    expect(kindIn([[0.919, 0.1], [0.1, 0.9]])).toBe("probability"); // 1.019
    expect(kindIn([[0.93, 0.1], [0.1, 0.9]])).toBe("rates"); // 1.03
    expect(kindIn([[0.75, 0.06], [0.1, 0.9]])).toBe("probability"); // 0.81
    expect(kindIn([[0.7, 0.09], [0.1, 0.9]])).toBe("rates"); // 0.79
    expect(kindIn([[0.4, 0.45], [0.1, 0.9]])).toBe("rates"); // 0.85, but the stay is not the largest
  });
  it("is percent by rows of 100, and of less only where stays are large", () => {
    expect(kindIn([[91, 9], [30.5, 69.5]])).toBe("percent");
    expect(kindIn([[80, 5], [10, 85]])).toBe("percent");
    expect(kindIn([[4, 1], [1, 4]])).toBe("rates");
  });
  it("is columnsSum only where some row is broken", () => {
    expect(kindIn([[-1, 2], [1, -2]])).toBe("columnsSum");
    expect(kindIn([[-1, 1], [1, -1]])).toBe("rates");
    expect(kindIn([[-1, 2], [1, -3]])).toBe("rates");
  });
  it("is complement where the diagonal makes up the rest to 1, or exits exceed 1 beside sound rows", () => {
    expect(kindIn([[-0.2, 1.2], [0.5, 0.5]])).toBe("complement");
    expect(kindIn([[0, 0.7, 0.7], [0.2, 0.8, 0], [0, 0, 1]])).toBe("complement");
    expect(kindIn([[0, 0.5, 0.3], [0.2, 0.8, 0], [0, 0, 1]])).toBe("rates");
    expect(kindIn([[-1, 0], [0, -1]])).toBe("empty");
  });
  it("allows each number half of the last digit typed", () => {
    expect(roundingBand([0.33, 0.17, -0.5])).toBeCloseTo(0.015, 15);
    expect(roundingBand([2e-7, 1])).toBeCloseTo(1e-7, 20);
    expect(roundingBand([1 / 3, 0.5])).toBe(0);
  });
});

describe("a blank diagonal", () => {
  it("counts rows with exits only", () => {
    const wear = headed("", ["New", "Worn", "Scrapped"], [[null, 1, 0], [0, -2, 2], [0, 0, null]]);
    expect(findingOf(wear, "diagonalBlank")).toMatchObject({ span: { row: 1, column: 1 }, also: [], details: { rows: 1, all: false } });
  });
});

describe("percent formats side by side", () => {
  const formats = (marked: readonly (readonly [number, number])[]): SheetFacts => ({
    formats: Array.from({ length: 4 }, (_, i) => Array.from({ length: 4 }, (__, j) => (marked.some(([r, c]) => r === i && c === j) ? "0.0%" : "General"))),
  });
  const table = (large: number): Cells => headed("", three, [[null, 0.2, 0.01], [large, null, 0.1], [1, 0, null]]);
  it("stop where a plain one is above 1, else warn, at the fewer of the two", () => {
    expect(findingOf(table(5), "percentMixed", { facts: formats([[1, 2]]) })).toMatchObject({ severity: "stop", span: { row: 1, column: 2 }, details: { withSign: 1, without: 4 } });
    expect(findingOf(table(0.5), "percentMixed", { facts: formats([[1, 2]]) })).toMatchObject({ severity: "warning" });
    expect(findingOf(table(0.5), "percentMixed", { facts: formats([[1, 2], [1, 3], [2, 1], [2, 3]]) })).toMatchObject({ span: { row: 3, column: 1 }, details: { withSign: 4, without: 1 } });
  });
  it("are silent where all agree; zeros, diagonal and a literal % do not count", () => {
    expect(findingOf(table(0.5), "percentMixed", { facts: formats([[1, 2], [1, 3], [2, 1], [2, 3], [3, 1]]) })).toBeUndefined();
    expect(findingOf(table(0.5), "percentMixed", { facts: formats([[1, 1], [3, 2]]) })).toBeUndefined();
    expect(findingOf(table(0.5), "percentMixed", { facts: { formats: table(0.5).map((row) => row.map((_, j) => (j === 2 ? '0" %"' : "General"))) } })).toBeUndefined();
  });
});

describe("a range beside more cells", () => {
  const facts = (right: CellValue[], below: CellValue[]): SheetFacts => ({ neighbours: { above: [], left: [], right, below } });
  const table = headed("", three, rates);
  const shape = (rows: number, columns: number): Cells => Array.from({ length: rows }, (_, i) => Array.from({ length: columns }, (__, j) => (i === j ? 0 : 1 + i + 2 * j)));
  it("is short by one name in row and column only if numbers go on", () => {
    expect(complaints(table, { facts: facts(["Idle", 0.1, null, null], ["idle ", null, null, null]) })).toEqual(["rangeShort"]);
    expect(complaints(table, { facts: facts(["Idle", null, null, null], ["Idle", null, null, null]) })).toEqual([]);
    expect(complaints(table, { facts: facts(["Idle", 0.1, null, null], ["Busy", 1, null, null]) })).toEqual([]);
    expect(complaints(table, { facts: facts(["Total", 0.1, 0.6, 1], ["Total", 1.5, 0.02, 0.11]) })).toEqual([]);
  });
  it("is short of a row whose column it holds", () => {
    const wide = table.map((row, i) => [...row, i === 0 ? "Idle" : 0.2]);
    const missing = findingOf(wide, "rangeShort", { facts: facts(["", null, null, null], ["Idle", 1, 0, 0, null]) });
    expect(missing).toMatchObject({ span: { row: 4, column: 0, rows: 1, columns: 5 }, details: { name: "Idle", rows: 1, columns: 0, range: [0, 0, 5, 5] } });
    expect(findingOf(wide, "rangeShort", { facts: facts(["", null, null, null], ["Other", 1, 0, 0, null]) })).toBeUndefined();
  });
  it("without headings is short on the side where rates go on", () => {
    expect(findingOf(shape(3, 2), "rangeShort", { facts: facts([9, 9, 9], [null, null]) })).toMatchObject({ details: { rows: 0, columns: 1 }, span: { column: 2, rows: 3 } });
    expect(findingOf(shape(2, 3), "rangeShort", { facts: facts([null, null], [9, 9, 9]) })).toMatchObject({ details: { rows: 1, columns: 0 }, span: { row: 2 } });
    expect(findingOf(shape(3, 3), "rangeShort", { facts: facts([9, 9, null], [9, 9, 9]) })).toMatchObject({ details: { rows: 1, columns: 1 } });
    expect(findingOf(shape(3, 3), "rangeShort", { facts: facts([9, null, null], [9, 9, 9]) })).toBeUndefined();
    expect(findingOf(shape(3, 3), "rangeShort", { facts: facts([9, 9, 9], [9, null, null]) })).toBeUndefined();
    expect(findingOf(shape(3, 2), "rangeShort", { facts: facts([9, 9, 9], [9, null]) })).toBeUndefined();
  });
  it("is not short of its totals", () => {
    const sums = shape(3, 3).map((row) => row.reduce<number>((sum, value) => sum + Number(value), 0));
    expect(findingOf(shape(3, 3), "rangeShort", { facts: facts(sums, [9, 9, 9]) })).toBeUndefined();
  });
});

describe("EXP in the cells of a table", () => {
  const formulas = (count: number, text = "=EXP(G2*3)"): SheetFacts => {
    let left = count;
    return { formulas: headed("", three, rates).map((row, i) => row.map((value, j) => (i > 0 && j > 0 && value !== null && left-- > 0 ? text : value === null ? "" : String(value)))) };
  };
  const table = headed("", three, rates);
  it("is a stop from three cells on, if they are more than half of what is filled", () => {
    // six cells are filled: five rates and a typed 0
    expect(complaints(table, { facts: formulas(4) })).toContain("exponentialCells");
    expect(complaints(table, { facts: formulas(3) })).not.toContain("exponentialCells");
    expect(complaints(headed("", ["Up", "Down"], [[null, 0.1], [1, null]]), { facts: { formulas: [["", "", ""], ["", "", "=EXP(A9)"], ["", "=EXP(A10)", ""]] } })).toEqual([]);
  });
  it("is not 1 − EXP, nor a name that ends so", () => {
    expect(complaints(table, { facts: formulas(6, "=1-EXP(-G2*3)") })).not.toContain("exponentialCells");
    expect(complaints(table, { facts: formulas(6, "=MYEXP(G2)") })).toEqual([]);
  });
  it("needs a stay below 1 and a value above 1 to be told by values", () => {
    expect(complaints([[0.7, 1.2], [1, 0.5]])).toContain("exponentialCells");
    expect(complaints([[1, 1.2], [1, 1]])).not.toContain("exponentialCells");
    expect(complaints([[0.7, 1], [1, 0.5]])).not.toContain("exponentialCells");
    expect(complaints([[0.7, 0.9], [1, 0.5]])).not.toContain("exponentialCells");
  });
  it("labels of probability make a value outside 0..1 a stop; rates, percent and the diagonal do not", () => {
    const odd = headed("probability", three, [[null, 1.5, 0.01], [0.5, null, 0.1], [1, 0, null]]);
    expect(findingOf(odd, "outsideUnit")).toMatchObject({ span: { row: 1, column: 2 }, details: { value: 1.5 } });
    expect(complaints(headed("probability rate", three, [[null, 1.5, 0.01], [0.5, null, 0.1], [1, 0, null]]))).toEqual([]);
    expect(complaints(headed("probability in %", three, [[null, 15, 1], [50, null, 10], [100, 0, null]]))).not.toContain("outsideUnit");
    expect(codes(audit(headed("P(t)", three, [[-0.03, 0.02, 0.01], [0.5, -0.6, 0.1], [1, 0, -1]])))).not.toContain("outsideUnit");
  });
});

describe("a horizon", () => {
  const table = [[0, 2], [1, 0]];
  const asked = (...times: number[]) => ({ asked: [{ name: "DISTRIBUTION", hasTargets: false, hasStart: true, hasTimes: true, times, where: "Plan!A1" }] });
  it("is too short below a thousandth of a jump, too long above a million", () => {
    expect(complaints(table, asked(0.0005))).toEqual([]);
    expect(complaints(table, asked(0.00049))).toEqual(["horizonUnit"]);
    expect(complaints(table, asked(500_000))).toEqual([]);
    expect(complaints(table, asked(500_001))).toEqual(["horizonUnit"]);
    expect(complaints(table, asked(0))).toEqual([]);
    expect(complaints(table, asked(0.0001, 600_000))).toEqual([]);
  });
});

describe("a year's table cut into months", () => {
  const others = (cells: Cells) => ({ others: [{ where: "Year!A1", cells }] });
  const two = (a: number, b: number): Cells => headed("", ["A", "B"], [[1 - a, a], [b, 1 - b]]);
  it("needs the same states in the same order, and another table of probabilities", () => {
    const month = two(0.021, 0.031);
    expect(findingOf(month, "cycleLength", others(two(0.252, 0.372)))).toMatchObject({ details: { way: "divided", cycles: 12 } });
    expect(findingOf(month, "cycleLength", others(headed("", ["A", "C"], [[0.748, 0.252], [0.372, 0.628]])))).toBeUndefined();
    expect(findingOf(month, "cycleLength", others(headed("", ["A", "B"], [[-0.252, 0.252], [0.372, -0.372]])))).toBeUndefined();
    expect(findingOf(month, "cycleLength", others(two(0.252, 0.3)))).toBeUndefined();
    expect(findingOf(headed("", ["A", "B"], [[-0.021, 0.021], [0.031, -0.031]]), "cycleLength", others(two(0.252, 0.372)))).toBeUndefined();
  });
  it("is silent where the rounding of the short table explains the gap", () => {
    expect(findingOf(two(0.01, 0.01), "cycleLength", others(two(0.12, 0.12)))).toBeUndefined();
    expect(findingOf(two(0.0101, 0.0101), "cycleLength", others(two(0.1212, 0.1212)))).toMatchObject({ details: { way: "divided", cycles: 12 } });
  });
  it("takes one stay as a root only with its exits as roots too", () => {
    const year = headed("", ["A", "B", "Gone"], [[0.7, 0.2, 0.1], [0, 1, 0], [0, 0, 1]]);
    const stay = 0.7 ** (1 / 12);
    expect(findingOf(headed("", ["A", "B", "Gone"], [[stay, (1 - stay) * 0.6, (1 - stay) * 0.4], [0, 1, 0], [0, 0, 1]]), "cycleLength", others(year))).toBeUndefined();
  });
});

describe("a mixture of formulas and constants", () => {
  const names = ["A", "B", "C", "D"];
  const table = headed("", names, names.map((_, i) => names.map((__, j) => (i === j ? null : 1 + i + j))));
  const facts = (constants: number): SheetFacts => {
    let left = constants;
    return { formulas: table.map((row, i) => row.map((_, j) => (i > 0 && j > 0 && i !== j ? (left-- > 0 ? "7" : "=H1") : "1"))) };
  };
  it("is told up to one constant for every four formulas", () => {
    expect(findingOf(table, "pastedConstants", { facts: facts(2) })).toMatchObject({ details: { constants: 2, formulas: 10 } });
    expect(findingOf(table, "pastedConstants", { facts: facts(3) })).toBeUndefined();
    expect(findingOf(table, "pastedConstants", { facts: facts(0) })).toBeUndefined();
  });
  it("needs three formulas, or cells that a formula spills into", () => {
    const small = headed("", ["A", "B"], [[null, 1], [2, null]]);
    expect(findingOf(small, "pastedConstants", { facts: { formulas: [["", "", ""], ["", "", "=H1"], ["", "7", ""]] } })).toBeUndefined();
    const spilled = facts(1).formulas!.map((row) => row.map((formula) => (formula === "=H1" ? "" : formula)));
    expect(findingOf(table, "pastedConstants", { facts: { formulas: spilled } })).toMatchObject({ details: { constants: 1, formulas: 11 } });
  });
});

describe("the question", () => {
  it("is not asked of a table without arrows, nor of a symmetric one with a said unit", () => {
    expect(codes(audit([[0, 0], [0, 0]], { answers: {} }))).toEqual(["noArrows"]);
    expect(codes(audit(headed("per h", ["A", "B"], [[null, 2], [2, null]]), { answers: {} }))).toEqual(["diagonalBlank"]);
  });
});

describe("a list among further columns", () => {
  it("gives the three columns to take by their numbers in the range", () => {
    const list = [["No.", "From", "To", "Unit", "Rate"], [1, "Up", "Down", "per h", 0.1], [2, "Down", "Up", "per h", 2]];
    expect(findingTexts(findingOf(list, "listWithMore")!).remedy).toBe("Take the three columns: =CTMC.FROMLIST(CHOOSECOLS(list, 2, 3, 5)).");
    expect(findingOf(list, "listWithMore")).toMatchObject({ details: { lines: [["column", 1, "No.", "notes"], ["column", 4, "Unit", "units"]] } });
  });
});
