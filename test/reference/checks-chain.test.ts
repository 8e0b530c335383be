import { describe, expect, test } from "vitest";
import { relativeError } from "./battery";
import { answeredFormulas, askChain } from "./chain-answers";
import { checkCases, checkIds, unmapped, type Ask } from "./check-cases";

/** Formulas of other parts of the catalogue, whose checks run through the built functions only. */
const elsewhere = ["FROMPROBABILITY", "EMBEDDINGGAP"];

describe("published checks, answered by the chain", () => {
  test("every check is mapped or its absence explained", () => {
    expect([...checkCases.map((c) => c.id), ...Object.keys(unmapped)].sort()).toEqual([...checkIds].sort());
  });

  for (const c of checkCases) {
    let skipped = false;
    const ask: Ask = (formula, ...args) => {
      if (elsewhere.includes(formula)) {
        skipped = true;
        throw new Error("elsewhere");
      }
      expect(answeredFormulas()).toContain(formula);
      return askChain(formula, ...args);
    };
    test(`${c.id} ${c.title} — ${c.source} (${c.status})`, () => {
      let found: number[];
      try {
        found = c.found(ask);
      } catch (error) {
        if (skipped) return;
        throw error;
      }
      expect(found.length).toBe(Math.max(c.expected.length, c.printed.length));
      c.expected.forEach((value, k) => expect(relativeError(found[k], value), `figure ${k}: ${found[k]} for ${value}`).toBeLessThanOrEqual(c.tolerance));
      c.printed.forEach(({ value, within }, k) => {
        if (!Number.isNaN(value)) expect(Math.abs(found[k] - value), `printed figure ${k}: ${found[k]} for ${value}`).toBeLessThanOrEqual(within);
      });
    });
  }
});
