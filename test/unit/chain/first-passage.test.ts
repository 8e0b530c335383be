import { describe, expect, it } from "vitest";
import { density, hazard, reached, SMALLEST_SURVIVAL, survival } from "../../../src/chain/first-passage";
import { Generator } from "../../../src/chain/generator";
import { passage } from "../../../src/chain/passage";
import { expectNear, expectProblem, line, mask, repairable, unit } from "./closed-forms";

const exponential = Generator.fromArrows(2, [[0, 1, 2]]);
const start = unit(2, 0);
const target = mask(2, 1);

describe("first passages", () => {
  it("of one exponential stay, at both ends of the scale", () => {
    const times = [0, 1e-20, 1, 100, 300];
    times.forEach((t, m) => {
      expectNear(survival(exponential, start, target, times)[m], Math.exp(-2 * t), 5e-16 * (1 + 2 * t));
      expectNear(reached(exponential, start, target, times)[m], -Math.expm1(-2 * t), 1e-15);
      expectNear(density(exponential, start, target, times)[m], 2 * Math.exp(-2 * t), 5e-16 * (1 + 2 * t));
    });
    expect(reached(exponential, start, target, [1e-20])[0]).toBe(2e-20);
  });

  it("the hazard is constant there, and not a number where survival is below what is kept", () => {
    const edge = -Math.log(SMALLEST_SURVIVAL) / 2;
    const found = hazard(exponential, start, target, [0, 7, edge * (1 - 1e-6), edge * (1 + 1e-6), 1e4]);
    for (const h of found.slice(0, 3)) expectNear(h, 2, 1e-15);
    expect(Array.from(found.slice(3))).toEqual([NaN, NaN]);
  });

  it("of stages in a line are Erlang", () => {
    // F(t) for small t: Σ_{k ≥ 5} e^(−t) t^k/k!
    const t = 1e-3;
    let term = Math.exp(-t);
    for (let k = 1; k <= 5; k++) term *= t / k;
    let sum = 0;
    for (let k = 6; term > 1e-60; k++) {
      sum += term;
      term *= t / k;
    }
    expectNear(reached(line(5, 1), unit(6, 0), mask(6, 5), [t])[0], sum, 1e-14);
  });

  it("a start in a target has met it at once; a target out of reach never is", () => {
    const chain = repairable(1, 1);
    expect(survival(chain, unit(2, 1), target, [0, 5])).toEqual(Float64Array.of(0, 0));
    expect(reached(chain, Float64Array.of(0.25, 0.75), target, [0])[0]).toBe(0.75);
    const cut = Generator.fromArrows(3, [[0, 1, 1], [1, 0, 1]]);
    expect(survival(cut, unit(3, 0), mask(3, 2), [1e6])[0]).toBe(1);
    expect(reached(cut, unit(3, 0), mask(3, 2), [1e6])[0]).toBe(0);
    expect(hazard(cut, unit(3, 0), mask(3, 2), [1])[0]).toBe(0);
  });

  it("every state a target: nothing survives", () => {
    expect(survival(repairable(1, 1), start, mask(2, 0, 1), [0, 3])).toEqual(Float64Array.of(0, 0));
    expect(reached(repairable(1, 1), start, mask(2, 0, 1), [0, 3])).toEqual(Float64Array.of(1, 1));
  });

  it("refuses bad times like every question about time", () => {
    for (const ask of [survival, reached, density, hazard])
      expectProblem(() => ask(exponential, start, target, [1, -2]), "timeNegative");
  });

  it("the stopped chain adds up the rates into the targets and keeps the others", () => {
    const chain = Generator.fromArrows(4, [[0, 1, 1], [0, 2, 2], [0, 3, 4], [1, 0, 8], [3, 0, 16]]);
    const { generator, start: begin, met, rateIn, outside } = passage(chain, Float64Array.of(0.5, 0.25, 0.125, 0.125), mask(4, 2, 3));
    expect([...generator.arrows()]).toEqual([[0, 1, 1], [0, 2, 6], [1, 0, 8]]);
    expect(Array.from(begin)).toEqual([0.5, 0.25, 0.25]);
    expect([met, Array.from(rateIn), Array.from(outside)]).toEqual([2, [6, 0, 0], [0, 1]]);
  });
});
