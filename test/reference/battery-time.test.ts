import { afterAll, describe, expect, it } from "vitest";
import { distributions } from "../../src/chain/distribution";
import { density, hazard, reached, survival } from "../../src/chain/first-passage";
import { discountedOccupancy, occupancies } from "../../src/chain/occupancy";
import { transitionMatrix } from "../../src/chain/transition";
import { battery, generatorOf, maskOf, referenceValue, startOf, Worst } from "./battery";

/** Below this no accuracy is promised: products leave the double range. */
const FLOOR = 1e-280;

const worst = new Map<string, Worst>();
function worstOf(quantity: string): Worst {
  let found = worst.get(quantity);
  if (!found) worst.set(quantity, (found = new Worst()));
  return found;
}

/** Compares one value and returns its error in units of 1 + |ln expected|. */
function compare(quantity: string, found: number, text: string, at: string, logarithmic: boolean): number {
  const expected = referenceValue(text);
  if (Math.abs(expected) < FLOOR && expected !== 0) return found < 10 * FLOOR ? 0 : Infinity;
  const scale = logarithmic && expected !== 0 ? 1 + Math.abs(Math.log(Math.abs(expected))) : 1;
  const one = new Worst();
  one.note(found, expected, at, scale);
  worstOf(quantity).note(found, expected, at, scale);
  return one.error;
}

function compareRow(quantity: string, found: ArrayLike<number>, texts: readonly string[], at: string, logarithmic: boolean): number {
  expect(found.length).toBe(texts.length);
  return texts.reduce((error, text, j) => Math.max(error, compare(quantity, found[j], text, `${at} [${j}]`, logarithmic)), 0);
}

describe.each(battery.map((c) => [c.id, c] as const))("battery %s", (id, c) => {
  const generator = generatorOf(c);
  const start = startOf(c);
  const targets = maskOf(c.n, c.target);
  const { expect: e } = c;

  if (e.P)
    it("P(t)", () => {
      const found = transitionMatrix(generator, c.t);
      for (let i = 0; i < c.n; i++)
        expect(compareRow("P(t)", found.subarray(i * c.n, (i + 1) * c.n), e.P[i], `${id} row ${i}`, true)).toBeLessThan(4e-15);
    });

  it("distribution", () => {
    expect(compareRow("distribution", distributions(generator, start, [c.t])[0], e.dist_t, id, true)).toBeLessThan(4e-15);
  });

  it("first passage", () => {
    const at = [c.t];
    expect(compare("survival", survival(generator, start, targets, at)[0], e.hit_sf_t, id, true)).toBeLessThan(4e-15);
    expect(compare("reached", reached(generator, start, targets, at)[0], e.hit_cdf_t, id, true)).toBeLessThan(4e-15);
    expect(compare("density", density(generator, start, targets, at)[0], e.hit_pdf_t, id, true)).toBeLessThan(4e-15);
    if (referenceValue(e.hit_sf_t) > 1e-280)
      expect(compare("hazard", hazard(generator, start, targets, at)[0], e.hit_hazard_t, id, true)).toBeLessThan(4e-15);
  });

  it("occupancy", () => {
    expect(compareRow("occupancy", occupancies(generator, start, [c.t])[0], e.occupancy_t, id, false)).toBeLessThan(1e-13);
    const discounted = discountedOccupancy(generator, start, c.t, c.discount);
    expect(compareRow("discounted occupancy", discounted, e.discounted_t, id, false)).toBeLessThan(1e-13);
  });
});

afterAll(() => {
  for (const [quantity, w] of worst) console.log(`${quantity.padEnd(22)} ${w}`);
});
