import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { meanAbsorption } from "../../src/chain/absorption";
import { Generator, type Arrow } from "../../src/chain/generator";
import { stationaryShares } from "../../src/chain/stationary";
import { finish } from "../../src/chain/steps";
import { subchain } from "../../src/chain/subchain";
import { eliminateDense } from "../../src/numerics/dense-elimination";
import { ALWAYS_DENSE, eliminate } from "../../src/numerics/elimination";
import type { Elimination, LeakSystem, Pausable } from "../../src/numerics/leak-system";
import { eliminateSparse, planElimination } from "../../src/numerics/sparse-elimination";
import { battery, generatorOf, Worst } from "../reference/battery";
import { closedTandem, gridOfQueues, irreducibleArbitrary, seeded } from "../support/chains";

const methods: Record<string, (system: LeakSystem) => Pausable<Elimination>> = {
  dense: eliminateDense,
  sparse: (system) => eliminateSparse(system, finish(planElimination(system, Infinity))!),
};
const everyState = (n: number): Int32Array => Int32Array.from({ length: n }, (_, i) => i);

describe("dense and sparse elimination answer alike", () => {
  const compare = (chain: Generator, leaking: number, worst: Worst, at: string): void => {
    const closed = subchain(chain, everyState(chain.size)).system;
    const leaky = { ...closed, leak: closed.leak.map((_, i) => (i === leaking % chain.size ? 0.25 : i % 3 === 0 ? 1e-9 : 0)) };
    const w = Float64Array.from({ length: chain.size }, (_, i) => i + 1);
    const [one, other] = Object.values(methods).map((method) => {
      const leak = finish(method(leaky));
      expect(leak.sound).toBe(true);
      return [...leak.solve(w), ...leak.solveTransposed(w), ...finish(method(closed)).shares()];
    });
    one.forEach((value, k) => worst.note(value, other[k], at));
  };

  test("on random chains with rates from 1e-6 to 1e6", () => {
    const worst = new Worst();
    fc.assert(fc.property(irreducibleArbitrary(30), fc.nat(), (chain, leaking) => compare(chain, leaking, worst, "random")), seeded);
    console.log(`dense against sparse, random: ${worst}`);
    expect(worst.error).toBeLessThan(2e-14); // measured 5e-15
  });

  test("on the irreducible chains of the battery", () => {
    const worst = new Worst();
    for (const c of battery) {
      if (c.expect.closed_classes.length > 1 || c.expect.transient.length > 0) continue;
      compare(generatorOf(c), 0, worst, c.id);
    }
    console.log(`dense against sparse, battery: ${worst}`);
    expect(worst.error).toBeLessThan(1e-14); // measured 3e-15
  });

  test("on both sides of the size from which a sparse plan is tried", () => {
    for (const n of [ALWAYS_DENSE - 1, ALWAYS_DENSE, ALWAYS_DENSE + 1, ALWAYS_DENSE + 2]) {
      const arrows: Arrow[] = [];
      for (let i = 0; i + 1 < n; i++) arrows.push([i, i + 1, 3], [i + 1, i, 2]);
      const chain = Generator.fromArrows(n, arrows);
      const system = subchain(chain, everyState(n)).system;
      expect(finish(eliminate(system))!.constructor.name).toBe(n <= ALWAYS_DENSE ? "DenseElimination" : "SparseElimination");
      const shares = stationaryShares(chain);
      for (let i = 0; i + 1 < n; i++) expect(Math.abs(shares[i + 1] / shares[i] / 1.5 - 1)).toBeLessThan(1e-14);
    }
  });

  test("a full table above that size is eliminated as a full matrix", () => {
    const n = ALWAYS_DENSE + 10;
    const chain = Generator.fromDense(n, Float64Array.from({ length: n * n }, (_, k) => 1 + (k % 7)));
    expect(finish(eliminate(subchain(chain, everyState(n)).system))!.constructor.name).toBe("DenseElimination");
  });
});

describe("sparse elimination of 20,000 states against closed forms", () => {
  test("two independent queues: product of geometric shares", { timeout: 60_000 }, () => {
    const side = 142;
    const began = performance.now();
    const shares = stationaryShares(gridOfQueues(side, [0.7, 1.3], [1, 1]));
    const took = performance.now() - began;
    const level = (ratio: number, k: number): number => (ratio ** k * (1 - ratio)) / (1 - ratio ** side);
    const worst = new Worst();
    for (let i = 0; i < side; i++)
      for (let j = 0; j < side; j++) worst.note(shares[i * side + j], level(0.7, i) * level(1.3, j), `${i}, ${j}`);
    console.log(`grid of ${side * side} states: ${took.toFixed(0)} ms, ${worst}`);
    expect(worst.error).toBeLessThan(1e-13); // measured 2e-14
  });

  test("a closed tandem of three desks: Jackson's product form", { timeout: 60_000 }, () => {
    const customers = 199; // 20,100 states
    const rates = [1, 1.2, 0.9] as const;
    const { chain, at } = closedTandem(customers, rates);
    const began = performance.now();
    const shares = stationaryShares(chain);
    const took = performance.now() - began;
    const weight = (i: number, j: number): number =>
      rates[0] ** -i * rates[1] ** -j * rates[2] ** -(customers - i - j) * rates[2] ** customers;
    let total = 0;
    for (let i = 0; i <= customers; i++) for (let j = 0; i + j <= customers; j++) total += weight(i, j);
    const worst = new Worst();
    for (let i = 0; i <= customers; i++)
      for (let j = 0; i + j <= customers; j++) worst.note(shares[at(i, j)], weight(i, j) / total, `${i}, ${j}`);
    console.log(`closed tandem of ${chain.size} states: ${took.toFixed(0)} ms, ${worst}`);
    expect(worst.error).toBeLessThan(1e-12); // measured 3e-14; the closed form's powers carry some 1e-13
  });

  test("a walk of 20,001 levels: mean time to the end n(n + 1)", () => {
    const n = 20_000;
    const arrows: Arrow[] = [];
    for (let i = 0; i < n; i++) arrows.push([i, i + 1, 0.5]);
    for (let i = 1; i < n; i++) arrows.push([i, i - 1, 0.5]);
    const target = new Uint8Array(n + 1);
    target[n] = 1;
    const began = performance.now();
    const means = meanAbsorption(Generator.fromArrows(n + 1, arrows), target);
    console.log(`walk of ${n} levels: ${(performance.now() - began).toFixed(0)} ms, ${(Math.abs(means[0] / (n * (n + 1)) - 1)).toExponential(1)}`);
    expect(Math.abs(means[0] / (n * (n + 1)) - 1)).toBeLessThan(1e-13); // measured 4e-15
  });

  test("two hills with a valley of 2^-10000 between them", () => {
    const n = 20_000;
    const arrows: Arrow[] = [];
    for (let i = 0; i + 1 < n; i++) {
      arrows.push([i, i + 1, i < n / 2 ? 1 : 2], [i + 1, i, i < n / 2 ? 2 : 1]);
    }
    const shares = stationaryShares(Generator.fromArrows(n, arrows));
    // 10,000 halvings down and 9,999 doublings up: the right hill is half as high as the left one
    expect(Math.abs(shares[0] * 3 - 1)).toBeLessThan(1e-12);
    expect(Math.abs(shares[n - 1] * 6 - 1)).toBeLessThan(1e-12);
    expect(shares[n / 2]).toBe(0); // 2^-10000 is below the double range
    expect(shares.every((share) => share >= 0)).toBe(true);
  });
});
