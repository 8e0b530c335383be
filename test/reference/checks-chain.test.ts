import { describe, expect, test } from "vitest";
import { relativeError } from "./battery";
import { askChain } from "./chain-answers";
import { checkCases, checkIds, unmapped } from "./check-cases";

describe("published checks, answered by the chain", () => {
  test("every check is mapped or its absence explained", () => {
    expect([...checkCases.map((c) => c.id), ...Object.keys(unmapped)].sort()).toEqual([...checkIds].sort());
  });

  for (const c of checkCases) {
    test(`${c.id} ${c.title} — ${c.source} (${c.status})`, () => {
      const found = c.found(askChain);
      expect(found.length).toBe(Math.max(c.expected.length, c.printed.length));
      c.expected.forEach((value, k) => expect(relativeError(found[k], value), `figure ${k}: ${found[k]} for ${value}`).toBeLessThanOrEqual(c.tolerance));
      c.printed.forEach(({ value, within }, k) => {
        if (!Number.isNaN(value)) expect(Math.abs(found[k] - value), `printed figure ${k}: ${found[k]} for ${value}`).toBeLessThanOrEqual(within);
      });
    });
  }
});
