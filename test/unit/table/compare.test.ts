import { describe, expect, test } from "vitest";
import { Generator } from "../../../src/chain/generator";
import { compareTables } from "../../../src/table/compare";
import { fingerprint, murmur3 } from "../../../src/table/fingerprint";
import type { Cells } from "../../../src/table/rate-table";
import { readRateTable } from "../../../src/table/read";

const base: Cells = [["", "Up", "Down", "Test"], ["Up", "", 0.02, 0.1], ["Down", 0.5, "", ""], ["Test", 4, "", ""]];
const print = (cells: Cells): string => fingerprint(readRateTable(cells));

describe("fingerprint", () => {
  test("is eight signs, the same for blank, zero, dash, diagonal, margin and list form", () => {
    const first = print(base);
    expect(first).toMatch(/^[0-9A-HJKMNP-TV-Z]{8}$/);
    expect(print([["", "Up", "Down", "Test", null], ["Up", -0.12, 0.02, 0.1, null], ["Down", 0.5, -0.5, 0, null], ["Test", 4, "–", null, null], [null, null, null, null, null]])).toBe(first);
    expect(print([["Up", "Down", 0.02], ["Up", "Test", 0.1], ["Down", "Up", 0.5], ["Test", "Up", 4]])).toBe(first);
    expect(print([["from", "to", "rate"], ["Up", "Down", 0.02], ["Up", "Test", 0.1], ["Test", "Up", 4], ["Down", "Up", 0.5]])).toBe(first);
  });

  test("changes with any rate, name, arrow or the order of the states", () => {
    const seen = new Set([print(base)]);
    const different = (cells: Cells): void => {
      const signs = print(cells);
      expect(seen.has(signs)).toBe(false);
      seen.add(signs);
    };
    const edit = (row: number, column: number, value: number | string): Cells => base.map((r, i) => r.map((v, j) => (i === row && j === column ? value : v)));
    different(edit(1, 2, 0.020000000000000004)); // one unit in the last place
    different(edit(2, 3, 1e-12));
    different(edit(1, 3, ""));
    different([["", "Up", "Down", "Tests"], ["Up", "", 0.02, 0.1], ["Down", 0.5, "", ""], ["Tests", 4, "", ""]]);
    different([["", "Down", "Up", "Test"], ["Down", "", 0.5, ""], ["Up", 0.02, "", 0.1], ["Test", "", 4, ""]]);
    different([[0, 0.02, 0.1], [0.5, 0, 0], [4, 0, 0]]);
  });

  test("20,000 tables that differ in one rate have 20,000 fingerprints", () => {
    const seen = new Set<string>();
    for (let k = 1; k <= 20_000; k++)
      seen.add(fingerprint({ generator: Generator.fromArrows(2, [[0, 1, k / 1000], [1, 0, 1]]), names: null }));
    expect(seen.size).toBe(20_000); // 20,000² / 2⁴¹: a chance agreement would be rare
  });

  test("the hash is the published one", () => {
    // MurmurHash3_x86_32 test values, from memory: empty with seed 0 and 1, and "test", "Hello, world!" with seed 0x9747b28c
    const bytes = (text: string): Uint8Array => Uint8Array.from(text, (c) => c.charCodeAt(0));
    expect(murmur3(bytes(""), 0)).toBe(0);
    expect(murmur3(bytes(""), 1)).toBe(0x514e28b7);
    expect(murmur3(bytes("test"), 0x9747b28c)).toBe(0x704b81dc);
    expect(murmur3(bytes("Hello, world!"), 0x9747b28c)).toBe(0x24884cba);
  });
});

describe("compare", () => {
  const compare = (before: Cells, after: Cells): ReturnType<typeof compareTables> => compareTables(readRateTable(before), readRateTable(after));

  test("no difference, whatever the order and form", () => {
    expect(compare(base, [["test", "up", 4], ["up", "test", 0.1], ["up", "down", 0.02], ["down", "up", 0.5]])).toEqual([]);
  });

  test("states of one side first, then changed, gone and new arrows", () => {
    const after: Cells = [["", "Up", "Down", "Spare"], ["Up", "", 0.03, ""], ["Down", 0.5, "", 7], ["Spare", 1, "", ""]];
    expect(compare(base, after)).toEqual([
      { kind: "onlyBefore", state: "Test" },
      { kind: "onlyAfter", state: "Spare" },
      { kind: "arrow", from: "Up", to: "Down", before: 0.02, after: 0.03, ratio: 1.5 },
      { kind: "arrow", from: "Up", to: "Test", before: 0.1, after: 0, ratio: 0 },
      { kind: "arrow", from: "Down", to: "Spare", before: 0, after: 7, ratio: NaN },
      { kind: "arrow", from: "Test", to: "Up", before: 4, after: 0, ratio: 0 },
      { kind: "arrow", from: "Spare", to: "Up", before: 0, after: 1, ratio: NaN },
    ]);
  });

  test("tables without names are matched by number, and borrow the other's names", () => {
    const rows = compare([[0, 1], [2, 0]], [["", "Up", "Down"], ["Up", "", 1], ["Down", 3, ""]]);
    expect(rows).toEqual([{ kind: "arrow", from: "Down", to: "Up", before: 2, after: 3, ratio: 1.5 }]);
    expect(compare([[0, 1], [2, 0]], [[0, 1, 0], [2, 0, 0], [0, 1, 0]])).toEqual([
      { kind: "onlyAfter", state: "State 3" },
      { kind: "arrow", from: "State 3", to: "State 2", before: 0, after: 1, ratio: NaN },
    ]);
  });
});
