import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { checkSheet } from "../../src/pane/check-sheet";
import { examine } from "../../src/pane/examine";
import { previewOf } from "../../src/pane/preview";
import { FakeWorkbook, type Typed } from "../support/fake-workbook";

const cell: fc.Arbitrary<Typed> = fc.oneof(
  { weight: 6, arbitrary: fc.constantFrom<Typed>("", 0, 0.02, 1, -1, 0.5, 3, 100) },
  { weight: 3, arbitrary: fc.constantFrom<Typed>("Up", "Down", "Repair", "Total", "MTBF", "per day", "from", "to", "rate", "-", "n/a", "x", "0,5", " 1 ") },
  { weight: 1, arbitrary: fc.constantFrom<Typed>("#N/A", "#DIV/0!", true, false, "=1", "'a", "<b>", "\u00a0", "𝔘", 1e308, -1e-308, 1e151) },
  { weight: 1, arbitrary: fc.double({ noNaN: true, noDefaultInfinity: true }) },
  { weight: 1, arbitrary: fc.string({ maxLength: 12 }) },
);
const grid = fc.tuple(fc.integer({ min: 1, max: 7 }), fc.integer({ min: 1, max: 7 })).chain(([rows, columns]) => fc.array(fc.array(cell, { minLength: columns, maxLength: columns }), { minLength: rows, maxLength: rows }));
/** Tables with names on both sides and anything at all among the rates. */
const named = fc.array(cell, { minLength: 9, maxLength: 9 }).map((body): Typed[][] => {
  const names = ["Up", "Down", "Repair"];
  return [["from", ...names], ...names.map((name, row) => [name, ...body.slice(3 * row, 3 * row + 3)])];
});

describe("any cells at all", () => {
  it("are looked at without a fault: sentences, remedies that can be shown, a check sheet of plain values", async () => {
    await fc.assert(
      fc.asyncProperty(fc.oneof(grid, named), async (rows) => {
        const workbook = new FakeWorkbook({ Any: rows });
        const reading = await workbook.read({ sheet: "Any", row: 0, column: 0, rows: rows.length, columns: rows[0].length });
        const looked = examine(reading, () => ({ sheet: "Any", row: 0, column: 0 }));
        for (const item of looked.open) {
          expect(item.sentence.length).toBeGreaterThan(0);
          expect(item.sentence).not.toMatch(/undefined|NaN|Infinity|\[object/);
          const remedy = item.remedy?.remedy;
          if (!remedy) continue;
          expect(item.remedy!.label.length).toBeGreaterThan(0);
          if (remedy.kind === "selection") continue;
          const preview = await previewOf(workbook, remedy, reading);
          if (preview.write) await workbook.write([preview.write], "remedy");
        }
        const { cells } = await checkSheet(looked, { version: "1.0.0", date: "2026-12-01", workbook: "", formulas: [] });
        for (const value of cells.flat()) {
          if (typeof value === "number") expect(Number.isFinite(value)).toBe(true);
          if (typeof value === "string") expect(value).not.toMatch(/^[=+\-@]|undefined|NaN|\[object/);
        }
      }),
      { numRuns: 600, seed: 20261201 },
    );
  });
});
