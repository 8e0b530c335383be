import { describe, expect, it } from "vitest";
import { call, PUMP, refusal } from "./tables";

/** Whole columns: 1,048,576 rows, blank as the host sends them. */
const ROWS = 1_048_576;
const tall = (rows: readonly (readonly unknown[])[], blank: unknown) => {
  const line = rows[0].map(() => blank);
  return [...rows, ...Array.from({ length: ROWS - rows.length }, () => line)];
};

describe("whole columns", () => {
  const list = [["from", "to", "rate"], ["Up", "Down", 0.1], ["Down", "Up", 2]];

  it.each(["", 0, null])("answer as their filled part does, blanks as %j", (blank) => {
    expect(call("STATIONARY", tall(list, blank))).toEqual(call("STATIONARY", list));
    expect(call("STATIONARY", tall(PUMP, blank))).toEqual(call("STATIONARY", PUMP));
    expect(call("CHECK", tall(list, blank))).toEqual(call("CHECK", list));
    expect(call("FROMLOG", tall([["P", 1, "Up"], ["P", 4, "Down"]], blank), 6)).toEqual(call("FROMLOG", [["P", 1, "Up"], ["P", 4, "Down"]], 6));
  });

  it("are refused in words where they are too long or empty", () => {
    expect(refusal(call("SURVIVAL", list, 1, 2, tall([[1]], 0)))).toBe("#VALUE! The result has 1048576 × 1 cells, over the limit of 100000 cells. Ask for less at once.");
    expect(refusal(call("DISTRIBUTION", list, tall([[1]], 0), 1))).toBe("#VALUE! start: 1048576 × 1 cells were given. Give one state, or 2 probabilities in one row or column.");
    for (const blank of ["", 0]) {
      const empty = tall([[blank, blank, blank]], blank);
      for (const name of ["STATIONARY", "FROMLIST", "FROMCOUNTS", "FROMPROBABILITY", "FROMLOG", "PHASED"]) {
        const found = refusal(call(name, empty, 1, 1));
        expect(found, name).toMatch(/^#VALUE! .+\.$/);
        expect(found, name).not.toContain("failed");
      }
      expect(call("CHECK", empty)[0][0]).toBe("stop");
      expect(call("CHECK", empty)[0][2]).not.toContain("failed");
    }
  });
});
