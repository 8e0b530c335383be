import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { relativeError } from "../reference/battery";
import { checkCases, checkIds, unmapped, type Ask } from "../reference/check-cases";
import { built, loadFunctions, type HostFunction } from "../support/functions";

/** Every published check that maps onto the catalogue, through the built functions; its source stands in its name. */
let functions: Record<string, HostFunction>;
beforeAll(() => {
  functions = loadFunctions({ script: built() });
});

const ask: Ask = (formula, ...args) => {
  const found = functions[formula](...args);
  const rows: unknown[][] = Array.isArray(found) ? found : [[found]];
  return rows.filter((row) => row.some((cell) => typeof cell === "number")) as number[][];
};

let asked = 0;
let worst = { error: 0, id: "" };
afterAll(() =>
  console.log(
    `${checkCases.length} of ${checkIds.length} checks through the built functions, ${asked} figures, worst relative error ${worst.error.toExponential(1)} (${worst.id})\n` +
      `not mapped:\n${Object.entries(unmapped).map(([id, why]) => `  ${id}: ${String(why)}`).join("\n")}`,
  ),
);

describe("published checks through the built functions", () => {
  test("every check is mapped or its absence explained", () => {
    expect([...checkCases.map((c) => c.id), ...Object.keys(unmapped)].sort()).toEqual([...checkIds].sort());
    for (const why of Object.values(unmapped)) expect(String(why).length).toBeGreaterThan(10);
  });

  for (const c of checkCases)
    test(`${c.id} ${c.title} — ${c.source} (${c.status})`, () => {
      const found = c.found(ask);
      expect(found.length).toBe(Math.max(c.expected.length, c.printed.length));
      expect(found.length).toBeGreaterThan(0);
      c.expected.forEach((value, k) => {
        const error = relativeError(found[k], value);
        asked++;
        if (error > worst.error) worst = { error, id: c.id };
        expect(error, `figure ${k}: ${found[k]} for ${value}`).toBeLessThanOrEqual(c.tolerance);
      });
      c.printed.forEach(({ value, within }, k) => {
        if (!Number.isNaN(value)) expect(Math.abs(found[k] - value), `printed figure ${k}: ${found[k]} for ${value}`).toBeLessThanOrEqual(within);
      });
    });
});
