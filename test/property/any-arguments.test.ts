import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { HostError } from "../support/functions";
import { BARE, call, functions, LIST, ONE_WAY, PUMP } from "../unit/functions/tables";

/** Every formula with arguments drawn from what cells hold, right or wrong: answers of finite numbers and texts, or refusals in words. */
const value = fc.constantFrom<unknown>(
  null, "", 0, 1, 2, 3, -1, 0.5, 1e-9, 1e9, 1e300, true, false, "Running", "failed", "nobody", "2", " ",
  PUMP, ONE_WAY, BARE, LIST, [...PUMP, ...ONE_WAY], [["a", "b", "a"]], [[1, 2, 3]], [[1], [0], [0]], [[0.2, 0.3, 0.5]], [["", 1], [2, ""]],
  [[0.9, 0.1], [0.2, 0.8]], [["P", 0, "Up"], ["P", 5, "Down"]], [["Worn", "", 3]], [[new HostError("#N/A")]], new HostError("#DIV/0!"), [[1, 2], [3, 4]], [[5]], [["x"]],
);

describe("any arguments", () => {
  it("are answered or refused in words", () => {
    const ids = Object.keys(functions);
    const refused = new Map<string, number>();
    fc.assert(
      fc.property(fc.constantFrom(...ids), fc.array(value, { minLength: 8, maxLength: 8 }), fc.boolean(), (id, args, sensible) => {
        const given = sensible && !/^(BIRTHDEATH|REPAIRGROUP|QUEUE|FROM|RATEINTERVAL|EMBEDDING)/.test(id) ? [PUMP, ...args.slice(1)] : args;
        const found = call(id, ...given);
        const cells: unknown[] = Array.isArray(found) ? found.flat() : [found];
        for (const cell of cells) {
          if (cell instanceof HostError) {
            expect(["#VALUE!", "#N/A"]).toContain(cell.code);
            expect(cell.message.length).toBeLessThanOrEqual(120);
            expect(cell.message).toMatch(/[.…]$/);
            expect(cell.message).not.toMatch(/NaN|undefined|null|Infinity|failed \(/);
            refused.set(cell.message, (refused.get(cell.message) ?? 0) + 1);
          } else expect(typeof cell === "string" || typeof cell === "boolean" || Number.isFinite(cell), `${id} gave ${String(cell)}`).toBe(true);
        }
      }),
      { seed: 11, numRuns: 6000 },
    );
    expect(refused.size).toBeGreaterThan(100);
  });
});
