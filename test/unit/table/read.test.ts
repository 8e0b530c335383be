import { describe, expect, it } from "vitest";
import { sentenceOf } from "../../../src/cells/sentences/problems";
import { read, readRateTable } from "../../../src/table/read";
import type { Cells } from "../../../src/table/rate-table";

const dense = (cells: Cells) => Array.from(readRateTable(cells).generator.dense());
const names = (cells: Cells) => readRateTable(cells).names;
const refusal = (cells: Cells) => {
  const { problems, table } = read(cells);
  expect(table).toBeNull();
  return sentenceOf(problems[0]);
};

describe("square form: headings", () => {
  const body = [
    [0, 2, 0],
    [3, 0, 1],
    [0, 0, 0],
  ];
  const rates = body.flat();
  const n3 = ["Up", "Worn", "Down"];

  it("reads none, both, top only and left only", () => {
    expect(read(body).layout).toMatchObject({ headings: "none", names: null, size: 3 });
    expect(dense(body)).toEqual(rates);
    for (const corner of ["", null, 0, "from \\ to"]) {
      const both = [[corner, ...n3], ...body.map((row, i) => [n3[i], ...row])];
      expect(read(both).layout).toMatchObject({ headings: "both", names: n3, body: { row: 1, column: 1, rows: 3, columns: 3 } });
      expect(dense(both)).toEqual(rates);
    }
    const top = [n3, ...body];
    expect(read(top).layout).toMatchObject({ headings: "top", names: n3, body: { row: 1, column: 0 } });
    expect(dense(top)).toEqual(rates);
    const left = body.map((row, i) => [n3[i], ...row]);
    expect(read(left).layout).toMatchObject({ headings: "left", names: n3, body: { row: 0, column: 1 } });
    expect(dense(left)).toEqual(rates);
  });

  it("takes numbers as headings only under a word in the corner", () => {
    const both = [["state", 1, 2], [1, 0, 5], [2, 7, 0]];
    expect(names(both)).toEqual(["1", "2"]);
    expect(dense(both)).toEqual([0, 5, 7, 0]);
    expect(names([["state", 7], [0, 5], [6, 0]])).toEqual(["state", "7"]);
    expect(names([["state", 0, 5], [7, 6, 0]])).toEqual(["state", "7"]);
  });

  it("refuses equal numbers beside and above a blank corner, but not the rates of a symmetric two-state table", () => {
    for (const corner of ["", null, 0])
      expect(refusal([[corner, 1, 2, 3], [1, 0, 5, 1], [2, 7, 0, 1], [3, 1, 1, 0]])).toContain("put a word into the corner");
    expect(dense([[0, 1], [1, 0]])).toEqual([0, 1, 1, 0]);
    expect(dense(["", "", "", ""].map((_, i) => [0, 1, 2, 3].map((j) => (i === j ? "" : 1))))).toHaveLength(16);
    expect(dense([[0, 2, 2], [2, 0, 3], [2, 3, 0]])).toHaveLength(9);
    expect(refusal([["", 0, 1, 2], [0, "", 3, 1], [1, 4, "", 1], [2, 5, 6, ""]])).toContain("put a word into the corner");
    expect(refusal([[0, 0.5, 1.5], [0.5, 0, 1], [1.5, 1, 0]])).toContain("else enter the diagonal");
    expect(dense([[-3, 1, 2], [1, -4, 3], [2, 3, -5]])).toHaveLength(9);
  });

  it("refuses headings that differ, are reordered, missing or repeated", () => {
    expect(refusal([["", "A", "B"], ["B", 0, 1], ["A", 1, 0]])).toBe('Row 1 is headed "B", column 1 "A". Use the same names in the same order.');
    expect(refusal([["", "A", "B"], ["A", 0, 1], ["", 1, 0]])).toBe('Row 2 is headed blank, column 2 "B". Use the same names in the same order.');
    expect(refusal([["", "A", "a "], ["A", 0, 1], ["a", 1, 0]])).toContain('States 1 and 2 are both named "a"');
    expect(refusal([["", "A", "-", "C"], ["A", 0, 1, 1], ["-", 1, 0, 1], ["C", 1, 1, 0]])).toContain("Column 2 has no heading");
    expect(refusal([["", "A", { fault: "#REF!" }], ["A", 0, 1], ["B", 1, 0]])).toContain("#REF!");
    expect(refusal([["From", "A", "B"], ["", 0, 1], ["", 2, 0]])).toContain("Row 1 is headed blank");
  });

  it("leaves out blank margins of a generous selection", () => {
    for (const blank of ["", null, 0]) {
      const wide = (rows: Cells) => [...rows.map((row) => [...row, blank, blank]), ...[1, 2, 3].map(() => [...rows[0].map(() => blank), blank, blank])];
      expect(names(wide([["", ...n3], ...body.map((row, i) => [n3[i], ...row])]))).toEqual(n3);
      expect(dense(wide([n3, [0, 2, 1], [3, 0, 1], [0, 4, 0]]))).toEqual([0, 2, 1, 3, 0, 1, 0, 4, 0]);
      expect(dense(wide([n3, ...body]))).toEqual(rates);
      expect(dense(wide(body.map((row, i) => [n3[i], ...row])))).toEqual(rates);
    }
  });

  it("without headings drops only lines that hold nothing in row and column alike", () => {
    expect(dense([[0, 1, ""], [2, 0, null], ["", "", null]])).toEqual([0, 1, 2, 0]);
    expect(dense([[0, 1, ""], [2, 0, ""]])).toEqual([0, 1, 2, 0]);
    expect(dense([[0, 1, 0], [2, 0, 0], [0, 0, 0]])).toHaveLength(9);
    expect(dense([["", 1, 4], [2, "", 1], ["", "", ""]])).toHaveLength(9);
    expect(refusal([[0, 1, 0], [2, 0, 0]])).toBe("The table has 2 from-rows and 3 to-columns. Select as many rows as columns.");
  });
});

describe("square form: cells", () => {
  it("takes blank, 0, dash as no arrow, n/a and x on the diagonal too", () => {
    expect(dense([["x", "-", 1], ["–", "N/A", ""], [null, "—", "X"]])).toEqual([0, 0, 1, 0, 0, 0, 0, 0, 0]);
    expect(dense([["", "A", "B"], ["A", "x", 1], ["B", 2, "n/a"]])).toEqual([0, 1, 2, 0]);
    expect(refusal([[0, 1, 1], [1, 0, "n/a"], [1, 1, 0]])).toBe('Row 2, column 3: "n/a" is not a rate. Enter a number, 0 or more.');
  });

  it("names the place of a wrong rate", () => {
    const table = [["", "Running", "Worn", "Degraded"], ["Running", "", 1, 1], ["Worn", 1, "", 1], ["Degraded", -0.2, 1, ""]];
    expect(refusal(table)).toBe("Row 3 (Degraded), column 1: -0.2 is not a rate. Enter 0 or more.");
    expect(refusal([[0, "abc"], [1, 0]])).toBe('Row 1, column 2: "abc" is not a rate. Enter a number, 0 or more.');
    expect(refusal([[0, 1], ["0,5", 0]])).toBe('Row 2, column 1: "0,5" is text. Enter it as a number, such as 0.5.');
    expect(refusal([[0, { fault: "#DIV/0!" }], [1, 0]])).toContain("Row 1, column 2: the cell holds the error #DIV/0!");
    expect(refusal([[0, true], [1, 0]])).toContain('"TRUE" is not a rate');
    expect(refusal([[0, 1e151], [1, 0]])).toContain("Row 1, column 2");
    expect(refusal([[0, 1e-151], [1, 0]])).toContain("1e-151");
    expect(dense([[0, 1e150], [1e-150, 0]])).toEqual([0, 1e150, 1e-150, 0]);
  });

  it("holds a given diagonal against the exits", () => {
    expect(readRateTable([[-2, 2], [3, -3.000000001]]).givenDiagonal).toEqual([-2, -3.000000001]);
    expect(readRateTable([[0, 2], ["", 0]]).givenDiagonal).toEqual([null, null]);
    expect(refusal([[-2.5, 2], [3, -3]])).toBe("Row 1: the diagonal is -2.5, the exits sum to 2. Correct one or clear the diagonal.");
    expect(refusal([[2, 2], [3, -3]])).toBe("Row 1, column 1: the diagonal is 2. Enter minus the exits, -2, or clear it.");
    expect(refusal([[-1, 0], [3, -3]])).toContain("no exits");
    expect(read([[-0.67, 0.33, 0.33], [1, -1, 0], [0, 0, 0]]).problems[0].code).toBe("rowSumRounded");
    expect(refusal([[-0.33333333331, 0.33333333441], [1, -1]])).toBe(
      "Row 1: the diagonal is -0.333333, the exits sum to 0.333333, 1.1e-9 apart. Correct one or clear the diagonal.",
    );
    expect(refusal([[5]])).toContain("no exits");
  });

  it("lists every problem, layout before cells before diagonals", () => {
    const { problems } = read([["", "A", "A"], ["A", -5, "?"], ["A", -1, 0]]);
    expect(problems.map((p) => p.code)).toEqual(["nameRepeated", "rateNotNumber", "rateNegative"]);
    expect(read([[-1, 2], [-1, 0]]).problems.map((p) => p.code)).toEqual(["rateNegative", "rowSum"]);
  });

  it("refuses an empty range", () => {
    for (const cells of [[], [[]], [[""]], [[null, ""], ["", " "]], [["word"]]]) expect(refusal(cells)).toContain("holds no rates");
    expect(dense([[0]])).toEqual([0]);
  });
});

describe("list form", () => {
  const list = [["From", "To", "Rate"], ["Up", "Down", 0.1], ["", "", ""], [null, 0, null], ["Down", " up", 2], ["Down", "Gone", "-"]];

  it("numbers states in order of first appearance and ignores blank rows", () => {
    const table = readRateTable(list);
    expect(table).toMatchObject({ form: "list", headings: "top", names: ["Up", "Down", "Gone"], size: 3, body: { row: 1, rows: 5 } });
    expect(Array.from(table.generator.dense())).toEqual([0, 0.1, 0, 2, 0, 0, 0, 0, 0]);
    expect(table.arrows[1].place).toEqual({ row: 4, column: 2 });
    expect(readRateTable(list.slice(1)).names).toEqual(["Up", "Down", "Gone"]);
    expect(readRateTable(list.map((row) => [...row, "", 0])).size).toBe(3);
  });

  it("names the rows of loops, repetitions and wrong rates", () => {
    expect(refusal([["A", "a", 1], ["A", "B", 2]])).toContain("Row 1:");
    expect(refusal([["A", "B", 1], ["B", "A", 2], ["a", "b", 3]])).toBe("Rows 1 and 3: the arrow A to B stands twice. Keep one row.");
    expect(refusal([["A", "B", -1], ["B", "A", 2]])).toBe("Row 1: -1 is not a rate. Enter 0 or more.");
    expect(refusal([["A", "B", 1], ["B", "A", "0,5"], ["B", "C", 1]])).toBe('Row 2: "0,5" is text. Enter it as a number, such as 0.5.');
    expect(refusal([["A", "B", 1], ["", "A", 2], ["B", "C", 1]])).toContain("Row 2: blank in place of a state name");
    expect(refusal([["A", "B", "0.5"], ["B", "A", 2], ["B", "C", 1]])).toContain("Row 1");
  });

  it("refuses numbers for names", () => {
    const sentence = (row: number) => `Row ${row}: "1" in place of a state name. Enter the names of both states as text.`;
    expect(refusal([["from", "to", "rate"], [1, 2, 0.5], [2, 1, 0.25], [2, 3, 1]])).toBe(sentence(2));
    expect(refusal([[1, 2, 0.5], [2, 1, 0.25], [2, 3, 1], [3, 1, 1]])).toBe(sentence(1));
    expect(refusal([[90, 5, 5], [3, 80, 7], [1, 2, 95]])).toContain("percent?");
    expect(refusal([["A", "B", "C"], [0, 1, 2], [1, 0, 2]])).toContain("is headed");
  });

  it("refuses columns behind it, and names a heading without partner in a square", () => {
    expect(refusal([["from", "to", "rate", "unit"], ["A", "B", 1, "per h"], ["B", "A", 2, "per h"]])).toBe(
      "Column 4 is filled, but a list has three: from, to, rate. Select those three columns only.",
    );
    expect(refusal([["", "A", "B", "Total"], ["A", "", 1, 1], ["B", 2, "", 2]])).toBe(
      "Column 3 (Total) has no row: 2 from-rows, 3 to-columns. Select as many of both.",
    );
    expect(refusal([["", "A", "B"], ["A", "", 1], ["B", 2, ""], ["Sum", 2, 1]])).toContain("Row 3 (Sum) has no column");
  });

  it("leaves square tables of three columns alone", () => {
    expect(readRateTable([["", "A", "B"], ["A", "x", 1], ["B", 2, "x"]]).form).toBe("square");
    expect(readRateTable([["From", "A", "B"], ["A", "-", 1], ["B", "", ""]]).form).toBe("square");
    expect(readRateTable([["A", "-", 1], ["B", 2, "-"]])).toMatchObject({ form: "square", headings: "left" });
  });
});
