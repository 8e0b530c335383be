import { describe, expect, test } from "vitest";
import { Generator, type Arrow } from "../../../src/chain/generator";
import { stationaryShares } from "../../../src/chain/stationary";
import { finish } from "../../../src/chain/steps";
import { subchain } from "../../../src/chain/subchain";
import { eliminateDense } from "../../../src/numerics/dense-elimination";
import { eliminate, LARGEST_DENSE } from "../../../src/numerics/elimination";
import { eliminationOrder } from "../../../src/numerics/elimination-order";
import { findZero } from "../../../src/numerics/find-zero";
import type { LeakSystem } from "../../../src/numerics/leak-system";
import { scaledShares } from "../../../src/numerics/scaled-flow";
import { planElimination } from "../../../src/numerics/sparse-elimination";
import { strongComponents } from "../../../src/numerics/strong-components";
import { gridOfQueues } from "../../support/chains";

const systemOf = (chain: Generator): LeakSystem => subchain(chain, Int32Array.from({ length: chain.size }, (_, i) => i)).system;
const star = (n: number): Generator => Generator.fromArrows(n, Array.from({ length: n - 1 }, (_, i): Arrow => [0, i + 1, 1]));

describe("order of elimination", () => {
  test("every state once, whatever the graph", () => {
    for (const chain of [gridOfQueues(13, [1, 1], [1, 1]), star(50), Generator.fromArrows(5, []), Generator.fromArrows(1, [])]) {
      const { size, rowStart, toState } = chain;
      expect([...finish(eliminationOrder(size, rowStart, toState))!].sort((a, b) => a - b)).toEqual(Array.from({ length: size }, (_, i) => i));
    }
  });

  test("no fill where none is needed: a star, a row", () => {
    for (const chain of [star(200), Generator.fromArrows(200, Array.from({ length: 199 }, (_, i): Arrow => [i, i + 1, 1]))])
      expect(finish(planElimination(systemOf(chain), Infinity))!.up.length).toBe(199);
  });

  test("little fill on a grid: below 8 n log₂ n, as nested dissection has", () => {
    // George & Liu 1981 give 31/4 n log₂ n for nested dissection of a square grid [from memory]
    for (const side of [20, 60, 100]) {
      const n = side * side;
      const plan = finish(planElimination(systemOf(gridOfQueues(side, [1, 1], [1, 1])), Infinity))!;
      expect(plan.up.length).toBeLessThan(7.75 * n * Math.log2(n));
    }
  });

  test("a plan that passes its limit is given up", () => {
    expect(finish(planElimination(systemOf(gridOfQueues(20, [1, 1], [1, 1])), 100))).toBeNull();
  });

  test("thousands of states without structure are refused instead of hanging", () => {
    // an expander: each state leads to 6 others all over the table; above the dense limit the plan's work passes its bound
    const n = LARGEST_DENSE * 4;
    const arrows = new Map<number, Arrow>();
    for (let i = 0; i < n; i++)
      for (let k = 1; k <= 6; k++) {
        const j = (i * (2 * k + 1) + 7919 * k) % n;
        if (j !== i) arrows.set(i * n + j, [i, j, 1]);
      }
    const system = systemOf(Generator.fromArrows(n, arrows.values()));
    expect(finish(eliminate(system))).toBeNull();
  });
});

describe("dense elimination", () => {
  test("sizes around the block of four", () => {
    for (let n = 1; n <= 13; n++) {
      // a ring with a leak of 1 at each state: all rates 2 forward; x = mean time 1 everywhere
      const ring = Generator.fromArrows(n, n === 1 ? [] : Array.from({ length: n }, (_, i): Arrow => [i, (i + 1) % n, 2]));
      const system = { ...systemOf(ring), leak: new Float64Array(n).fill(1) };
      const elimination = finish(eliminateDense(system));
      for (const x of elimination.solve(new Float64Array(n).fill(1))) expect(Math.abs(x - 1)).toBeLessThan(1e-15);
      for (const x of elimination.solveTransposed(new Float64Array(n).fill(1))) expect(Math.abs(x - 1)).toBeLessThan(1e-15);
    }
  });

  test("tells when rates are too far apart", () => {
    // state 0 passes on to 1 with a probability below the smallest double
    const system = systemOf(Generator.fromArrows(3, [[0, 1, 1e-150], [0, 2, 1e150], [1, 0, 1e-150], [2, 0, 1e-150]]));
    expect(finish(eliminateDense({ ...system, leak: Float64Array.of(0, 0, 0) })).sound).toBe(true);
    const broken = { size: 2, rowStart: Int32Array.of(0, 1, 2), toState: Int32Array.of(1, 0), rate: Float64Array.of(0, 1), leak: new Float64Array(2) };
    expect(finish(eliminateDense(broken)).sound).toBe(false);
  });
});

describe("shares beyond the double range", () => {
  test("two hills of equal height with a valley of 1e-900", () => {
    // exits 1; rate from i to i − 1 gives x_{i−1} = x_i · rate: down by 1e-3 300 times, up by 1e3 300 times
    const size = 601;
    const shares = scaledShares({
      size,
      exit: new Float64Array(size).fill(1),
      each: (i, use) => { if (i > 0) use(i - 1, i > 300 ? 1e-3 : 1e3); },
    });
    expect(Math.abs(shares[0] / shares[600] - 1)).toBeLessThan(1e-12);
    expect(shares[300]).toBe(0);
  });
});

describe("shares of a full table with a valley beyond the double range", () => {
  test("as in a sparse one", () => {
    const n = 161; // below the size from which sparse elimination is tried
    const arrows: Arrow[] = [];
    for (let i = 0; i + 1 < n; i++) arrows.push([i, i + 1, i < 80 ? 1 : 1e5], [i + 1, i, i < 80 ? 1e5 : 1]);
    const shares = stationaryShares(Generator.fromArrows(n, arrows));
    expect(Math.abs(shares[0] / shares[n - 1] - 1)).toBeLessThan(1e-12);
    expect(shares[80]).toBe(0); // 1e-400
    expect(Math.abs(shares.reduce((a, b) => a + b, 0) - 1)).toBeLessThan(1e-14);
  });
});

describe("strong components", () => {
  test("numbers go against the arrows", () => {
    const { component, count } = strongComponents(4, Int32Array.of(0, 1, 2, 3, 3), Int32Array.of(1, 0, 3));
    expect(count).toBe(3);
    expect(component[0]).toBe(component[1]);
    expect(component[2]).toBeGreaterThan(component[3]);
  });
});

describe("find zero", () => {
  test("to the last bits, on smooth, flat and kinked functions", () => {
    expect(Math.abs(findZero((x) => x * x - 2, 0, 2) - Math.SQRT2)).toBeLessThan(4e-16);
    expect(Math.abs(findZero((x) => Math.cos(x), 0, 3) - Math.PI / 2)).toBeLessThan(1e-15);
    expect(Math.abs(findZero((x) => (x - 0.3) ** 9, 0, 1) - 0.3)).toBeLessThan(1e-2);
    expect(Math.abs(findZero((x) => (x < 0.7 ? -1 : 1), 0, 1) - 0.7)).toBeLessThan(1e-15);
    expect(findZero((x) => x, 0, 1)).toBe(0);
  });
});
