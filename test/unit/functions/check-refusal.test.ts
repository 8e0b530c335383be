import { describe, expect, it } from "vitest";
import type { CellValue } from "../../../src/table/rate-table";
import { seeded } from "../../property/clean-tables";
import { HostError, loadFunctions } from "../../support/functions";

const functions = loadFunctions();

/** Cells as the host sends them: errors as its own error values. */
const sent = (cells: readonly (readonly CellValue[])[]): unknown[][] =>
  cells.map((row) => row.map((cell) => (typeof cell === "object" && cell !== null ? new HostError(cell.fault) : cell)));

function refusalOf(name: string, ...args: unknown[]): string | null {
  try {
    functions[name](...args);
    return null;
  } catch (error) {
    if (!(error instanceof HostError)) throw error;
    return error.message;
  }
}

/** Ranges that are refused for each reason that the table's reader knows, by problem code. */
const REFUSED: Readonly<Record<string, CellValue[][]>> = {
  rangeEmpty: [["", ""], ["", ""]],
  notSquare: [["", "A", "B"], ["A", 0, 1]],
  cornerBlank: [["", 1, 2], [1, 0, 3], [2, 4, 0]],
  headingMissing: [["", "A", ""], ["A", 0, 1], ["", 2, 0]],
  headingNotName: [["", "A", { fault: "#REF!" }], ["A", 0, 1], ["B", 2, 0]],
  headingsDiffer: [["", "A", "B"], ["A", 0, 1], ["C", 2, 0]],
  nameRepeated: [["", "A", "a"], ["A", 0, 1], ["a", 2, 0]],
  cellFault: [["", "A", "B"], ["A", 0, { fault: "#DIV/0!" }], ["B", 2, 0]],
  rateNotNumber: [["", "A", "B"], ["A", 0, "unknown"], ["B", 2, 0]],
  rateIsText: [["", "A", "B"], ["A", 0, "0,2"], ["B", 2, 0]],
  rateNegative: [["", "A", "B"], ["A", 0, -1], ["B", 2, 0]],
  rateOutOfRange: [["", "A", "B"], ["A", 0, 1e200], ["B", 2, 0]],
  diagonalPositive: [["", "A", "B"], ["A", 1, 1], ["B", 2, 0]],
  diagonalWithoutExits: [["", "A", "B"], ["A", 0, 1], ["B", 0, -2]],
  rowSum: [["", "A", "B"], ["A", -3, 1], ["B", 2, -2]],
  rowSumRounded: [["", "A", "B", "C"], ["A", -0.33, 0.17, 0.17], ["B", 2, -2, 0], ["C", 1, 0, -1]],
  listNameMissing: [["A", "B", 1], ["B", "A", 2], ["C", 7, 2], ["C", "A", 1], ["A", "C", 1]],
  arrowToItself: [["A", "B", 1], ["B", "B", 2]],
  arrowRepeated: [["A", "B", 1], ["A", "B", 2]],
};

describe("CHECK's first stop row", () => {
  it.each(Object.keys(REFUSED))("is the refusing sentence, word for word: %s", (code) => {
    const cells = sent(REFUSED[code]);
    const refusal = refusalOf("TRANSITION", cells, [[1]]);
    expect(refusal).not.toBeNull();
    const [severity, , sentence] = functions.CHECK(cells, null)[0];
    expect([severity, sentence]).toEqual(["stop", refusal]);
    expect(refusal!.length).toBeLessThanOrEqual(120);
  });

  it("is also what the long run refuses for", () => {
    const apart = [["", "P up", "P down", "Q up", "Q down"], ["P up", 0, 1, 0, 0], ["P down", 2, 0, 0, 0], ["Q up", 0, 0, 0, 1], ["Q down", 0, 0, 2, 0]];
    expect(functions.CHECK(apart, null)[0].slice(0, 3)).toEqual(["stop", "row 3 (Q up)", refusalOf("STATIONARY", apart, null, null)]);
    expect(functions.CHECK(apart, [["P up"]]).map((row: string[]) => row[0])).not.toContain("stop");
  });

  it("is also what the start is refused for", () => {
    const clean = [["", "A", "B"], ["A", -1, 1], ["B", 2, -2]];
    for (const start of [[["C"]], [[0.5, 0.4]], [[3]], [[-1, 2]]]) {
      const refusal = refusalOf("DISTRIBUTION", clean, start, [[1]], null);
      expect(functions.CHECK(clean, start)[0].slice(0, 3)).toEqual(["stop", "table", refusal]);
    }
  });
});

it("CHECK gives four columns of text for 3,000 ranges of garbage, and its first stop is the refusal", () => {
  const random = seeded(5);
  const pieces: CellValue[] = [
    "", null, 0, 1, -1, 0.5, 1e300, "A", "B", "Total", "From", "To", "Rate", "n/a", "x", "-", "0,5", "12%", true, { fault: "#N/A" }, "MTBF (years)", "per h", "2 down", "0 down",
    "Failed", 100, 33.33, "\u00a0", "'", "a very long name of a state that goes on and on without any end in sight, truly",
  ];
  const pick = <T>(items: readonly T[]): T => items[Math.floor(random() * items.length)];
  let refused = 0;
  for (let k = 0; k < 3000; k++) {
    const [rows, columns] = [1 + Math.floor(random() * 5), 1 + Math.floor(random() * 6)];
    const few = Array.from({ length: 3 }, () => pick(pieces));
    const cells = sent(Array.from({ length: rows }, (_, i) => Array.from({ length: columns }, (__, j) => (random() < 0.3 ? pick(few) : i === 0 || j === 0 ? pick(pieces) : pick<CellValue>([0, 1, 0.5, pick(pieces)])))));
    const found: unknown[][] = functions.CHECK(cells, null);
    expect(found.length).toBeGreaterThan(0);
    for (const row of found) {
      expect(row).toHaveLength(4);
      for (const text of row) {
        expect(typeof text).toBe("string");
        expect(text).not.toMatch(/undefined|NaN|null\b|\[object|Infinity/u);
      }
    }
    const refusal = refusalOf("TRANSITION", cells, [[1]]);
    if (refusal === null) continue;
    refused++;
    expect(found[0][0]).toBe("stop");
    expect(found[0][2]).toBe(refusal);
  }
  expect(refused).toBeGreaterThan(1500);
}, 60_000);
