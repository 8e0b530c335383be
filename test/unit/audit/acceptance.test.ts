import { describe, expect, it } from "vitest";
import { acceptanceKey } from "../../../src/audit/acceptance";
import { audit } from "../../../src/audit/audit";
import { read } from "../../../src/table/read";
import type { Cells } from "../../../src/table/rate-table";

const table = (repair: number | null, worn = 0.02, last = "Stuck"): Cells => [
  ["", "Running", "Worn", last],
  ["Running", null, worn, 0.001],
  ["Worn", 0.5, null, 0.1],
  [last, repair, null, null],
];

function keyOf(cells: Cells, code: string, sheet = "Rates"): string {
  const finding = audit(cells).find((candidate) => candidate.code === code);
  if (!finding) throw new Error(`no ${code}`);
  return acceptanceKey(finding, sheet, cells, read(cells));
}

describe("what an acceptance holds on to", () => {
  const key = keyOf(table(null), "noExit");

  it("stays for the same values, wherever the table stands", () => {
    expect(keyOf(table(null), "noExit")).toBe(key);
  });

  it("stays when a value changes that is not concerned", () => {
    expect(keyOf(table(null, 0.03), "noExit")).toBe(key);
  });

  it("ends with a renamed state, on another sheet, and for another rule", () => {
    expect(keyOf(table(null, 0.02, "Jammed"), "noExit")).not.toBe(key);
    expect(keyOf(table(null), "noExit", "Old")).not.toBe(key);
    expect(keyOf(table(null), "diagonalBlank")).not.toBe(key);
  });

  it("ends when a value concerned changes", () => {
    const faulty = (diagonal: number): Cells => [["", "Up", "Down"], ["Up", diagonal, 1], ["Down", 2, null]];
    expect(keyOf(faulty(-3), "rowSum")).not.toBe(keyOf(faulty(-4), "rowSum"));
    expect(keyOf(faulty(-3), "rowSum")).toBe(keyOf(faulty(-3), "rowSum"));
    const exits = (rate: number): Cells => [["", "Up", "Down", "Off"], ["Up", -3, 1, rate], ["Down", 2, null, null], ["Off", 1, null, null]];
    expect(keyOf(exits(1), "rowSum")).not.toBe(keyOf(exits(5), "rowSum"));
  });
});
