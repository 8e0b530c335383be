import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { HostError } from "../support/functions";
import { call } from "../unit/functions/tables";

/** Whatever is in a range: CHECK never fails, and where a formula refuses the range, CHECK's first stop says the same sentence. */
const cell = fc.oneof(
  { weight: 6, arbitrary: fc.constantFrom<unknown>(0, 1, 2, 0.5, "", null) },
  { weight: 2, arbitrary: fc.constantFrom<unknown>(-1, -2, "-", "x", "n/a", "Up", "Down", "Total", "0,5", " 3 ", 95, 0.1) },
  { weight: 1, arbitrary: fc.constantFrom<unknown>(true, new HostError("#DIV/0!"), 1e200, 1e-200, "a much longer name than anybody would put into a heading of a table of rates") },
);
const range = fc.tuple(fc.integer({ min: 1, max: 5 }), fc.integer({ min: 1, max: 5 })).chain(([rows, columns]) =>
  fc.array(fc.array(cell, { minLength: columns, maxLength: columns }), { minLength: rows, maxLength: rows }),
);
const named = range.map((body) => {
  const names = ["Up", "Worn", "Down", "Gone", "Sold", "Lost"];
  return [["", ...names.slice(0, body[0].length)], ...body.map((row, i) => [names[i], ...row])];
});
const list = fc.array(fc.tuple(fc.constantFrom("A", "B", "C", ""), fc.constantFrom("A", "B", "C", 4), cell), { minLength: 1, maxLength: 6 });

describe("CHECK", () => {
  it("agrees with the formulas on every range", () => {
    fc.assert(
      fc.property(fc.oneof(range, named, list), (cells) => {
        const rows = call("CHECK", cells) as string[][];
        expect(Array.isArray(rows)).toBe(true);
        expect(rows.every((row) => row.length === 4 && row.every((text) => typeof text === "string"))).toBe(true);
        const order = rows.map(([severity]) => ["stop", "warning", "note", "ok"].indexOf(severity));
        expect(order.every((rank, k) => rank >= 0 && (k === 0 || rank >= order[k - 1]))).toBe(true);
        const found = call("GENERATOR", cells);
        if (found instanceof HostError) expect(rows[0].slice(0, 3)).toEqual(["stop", rows[0][1], found.message]);
      }),
      { seed: 7, numRuns: 3000 },
    );
  });
});
