import { afterAll, describe, expect, it } from "vitest";
import { distributions } from "../../src/chain/distribution";
import { density, hazard, reached, survival } from "../../src/chain/first-passage";
import { discountedOccupancy, occupancies } from "../../src/chain/occupancy";
import { percentiles } from "../../src/chain/percentile";
import { finish } from "../../src/chain/steps";
import { transitionMatrix } from "../../src/chain/transition";
import { shareElasticityAt } from "../../src/chain/transition-derivative";
import { denseKernel } from "../../src/numerics/method-choice";
import { denseOf } from "../../src/numerics/rows";
import { TransitionDerivative } from "../../src/numerics/transition-derivative";
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

  it("percentiles", () => {
    const { times } = percentiles(generator, start, targets, c.levels);
    expect(compareRow("percentile", times, e.hit_quantiles, id, false)).toBeLessThan(5e-14);
  });

  const [from, to] = c.deriv;
  if (from !== to && c.t > 0)
    it("derivative of P(t)", () => {
      const { n } = c;
      const derivative = finish(TransitionDerivative.open(denseOf(generator), c.t, denseKernel()));
      const p = derivative.transition;
      const d = finish(derivative.along(from, to));
      derivative.close();
      const rate = generator.rateOf(from, to);
      const elasticity = (value: number, probability: number): number => (probability > FLOOR ? (rate * value) / probability : 0);
      const near = (found: number, probability: number, expected: number, at: string): void => {
        const scale = (1 + Math.abs(Math.log(probability))) * (1 + Math.abs(expected));
        if (probability > FLOOR) expect(worstOf("elasticity").absolute(found, expected, at, scale)).toBeLessThan(2e-14);
      };
      if (e.dP)
        for (let i = 0; i < n; i++)
          for (let j = 0; j < n; j++)
            near(elasticity(d[i * n + j], p[i * n + j]), p[i * n + j], elasticity(Number(e.dP[i][j]), Number(e.P[i][j])), `${id} ${i},${j}`);
      for (let j = 0; e.ddist_t && j < n; j++) {
        const probability = Number(e.dist_t[j]);
        const change = start.reduce((sum, weight, i) => sum + weight * d[i * n + j], 0);
        near(elasticity(change, probability), probability, elasticity(Number(e.ddist_t[j]), probability), `${id} ${j}`);
      }
      if (!e.ddist_t) return;
      const up = e.dist_t.findIndex((text: string, j: number) => Number(text) > FLOOR && Number(e.ddist_t[j]) !== 0);
      if (up < 0) return;
      const probability = Number(e.dist_t[up]);
      const found = shareElasticityAt(generator, maskOf(n, [up]), start, c.t)[from * n + to];
      near(found, probability, elasticity(Number(e.ddist_t[up]), probability), `${id} share ${up}`);
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
