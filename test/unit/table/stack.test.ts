import { describe, expect, it } from "vitest";
import { sentenceOf } from "../../../src/cells/sentences/problems";
import { Problem } from "../../../src/chain/problem";
import type { Cells } from "../../../src/table/rate-table";
import { readStack } from "../../../src/table/stack";

const DAY = [[0, 1, 2], [3, 0, 0], [0, 0, 0]];
const NIGHT = [[0, 0, 5], [0, 0, 0], [0, 0, 0]];
const NAMES = ["Up", "Worn", "Off"];

const refusal = (cells: Cells, phases: number): string => {
  try {
    readStack(cells, phases);
  } catch (problem) {
    if (problem instanceof Problem) return sentenceOf(problem);
  }
  return "read";
};

describe("tables stacked on each other", () => {
  const headed = (body: number[][], corner: string | number) => [[corner, ...NAMES], ...body.map((row, i) => [NAMES[i], ...row])];

  it.each<[string, Cells]>([
    ["bare", [...DAY, ...NIGHT]],
    ["bare, with a blank margin", [...DAY, ...NIGHT].map((row) => [...row, "", ""])],
    ["headed", [...headed(DAY, ""), ...headed(NIGHT, 0)]],
    ["headed, words in the corners, a margin of zeros", [...headed(DAY, "day"), ...headed(NIGHT, "night")].map((row) => [...row, 0])],
    ["headed on top", [NAMES, ...DAY, NAMES, ...NIGHT]],
    ["headed on the left", [...DAY, ...NIGHT].map((row, i) => [NAMES[i % 3], ...row])],
    ["with numbers as headings", [...DAY, ...NIGHT].flatMap((row, i) => [...(i % 3 === 0 ? [["state", 7, 8, 9]] : []), [7 + (i % 3), ...row]])],
    ["blank where nothing goes", [...DAY, ...NIGHT].map((row) => row.map((rate) => (rate === 0 ? "" : rate)))],
  ])("are read %s", (_, cells) => {
    const tables = readStack(cells, 2);
    expect(tables.map((table) => Array.from(table.generator.dense()))).toEqual([DAY.flat(), NIGHT.flat()]);
    expect(tables[0].names).toEqual(tables[1].names);
  });

  it("are refused with the row of the range, or the table where it concerns all of it", () => {
    expect(refusal([...DAY, ...NIGHT], 4)).toBe("ratesStack: 6 rows cannot be shared by 4 durations. Stack one table of equal height for each.");
    expect(refusal([...headed(DAY, ""), ...headed([[0, 0, -5], [0, 0, 0], [0, 0, 0]], "")], 2)).toBe("Row 6 (Up), column 3: -5 is not a rate. Enter 0 or more.");
    expect(refusal([...headed(DAY, ""), ["", "Up", "Off", "Worn"], ["Up", 0, 0, 1], ["Off", 0, 0, 0], ["Worn", 0, 0, 0]], 2)).toBe(
      "ratesStack, table 2: its states differ from the first table's. Use the same states in the same order.",
    );
    expect(refusal([...headed(DAY, ""), ["", "Up", "Off", "Worn"], ["Up", 0, 0, 1], ["Worn", 0, 0, 0], ["Off", 0, 0, 0]], 2)).toBe(
      'Table 2: Row 2 is headed "Worn", column 2 "Off". Use the same names in the same order.',
    );
    expect(refusal([...DAY, ...NIGHT, ...NIGHT], 2)).toContain("ratesStack: 9 rows");
  });
});
