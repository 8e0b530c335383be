import { describe, expect, it } from "vitest";
import { planTaylor } from "../../../src/numerics/taylor-plan";
import { SCHEMES } from "../../../src/numerics/taylor-scheme";

/** Largest x with omitted · x^m/(m+1)! ≤ 2^-55 · share, by the definition. */
function limit(order: number, share = 1): number {
  const { omitted } = SCHEMES.find((scheme) => scheme.order === order)!;
  let factorial = 1;
  for (let k = 2; k <= order + 1; k++) factorial *= k;
  return ((factorial * 2 ** -55 * share) / omitted) ** (1 / order);
}

describe("the choice of order and squarings", () => {
  it("the limits are those of the method's description", () => {
    expect(limit(8)).toBeCloseTo(0.0422, 4);
    expect(limit(14)).toBeCloseTo(0.482, 3);
    expect(limit(21)).toBeCloseTo(2.07, 2);
  });

  it.each([
    [2, 4],
    [4, 8],
    [8, 14],
    [14, 21],
  ])("order %i serves up to its limit, order %i beyond it", (order, next) => {
    expect(planTaylor(2, limit(order) * (1 - 1e-9), 1)).toEqual({ order, squarings: 0 });
    expect(planTaylor(2, limit(order) * (1 + 1e-9), 1)).toEqual({ order: next, squarings: 0 });
  });

  it("the highest order is squared once more beyond each doubling of its limit", () => {
    for (let s = 0; s < 60; s++) {
      expect(planTaylor(2, limit(21) * 2 ** s * (1 - 1e-9), 1)).toEqual({ order: 21, squarings: s });
      expect(planTaylor(2, limit(21) * 2 ** s * (1 + 1e-9), 1)).toEqual({ order: 21, squarings: s + 1 });
    }
  });

  it("with an arrow between all states the spread of the rates moves the limit", () => {
    const spread = 1e6;
    const x = limit(21, 1 / spread);
    expect(planTaylor(60, x * (1 - 1e-9), spread)).toEqual({ order: 21, squarings: 0 });
    expect(planTaylor(60, x * (1 + 1e-9), spread).squarings).toBeGreaterThan(0);
  });

  it("without it the longest path counts: no squaring while it fits into the order, several beyond", () => {
    // A loop would weigh 1e-18: a path of n − 1 jumps is either within the order or cut.
    expect(planTaylor(22, 1e-18, Infinity)).toEqual({ order: 21, squarings: 0 });
    const beyond = planTaylor(23, 1e-18, Infinity);
    // One path of 22 jumps, C(22, 22)/2^(21 s) ≤ 2^-55.
    expect(beyond).toEqual({ order: 21, squarings: 3 });
    expect(planTaylor(300, 1e-9, Infinity).squarings).toBeGreaterThan(beyond.squarings);
  });

  it("never asks for fewer squarings when time grows", () => {
    for (const size of [2, 10, 60, 300])
      for (let jumps = 1e-6, before = 0; jumps < 1e6; jumps *= 1.1) {
        const { order, squarings } = planTaylor(size, jumps, Infinity);
        const cost = [2, 4, 8, 14, 21].indexOf(order) + squarings;
        expect(cost).toBeGreaterThanOrEqual(before - 1);
        before = cost;
      }
  });
});
