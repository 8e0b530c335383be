import { describe, expect, test } from "vitest";
import { Generator, type Arrow } from "../../../src/chain/generator";
import { quasiStationary } from "../../../src/chain/quasi-stationary";
import { maskOf, relativeError, Worst } from "../../reference/battery";

describe("quasi-stationary shares", () => {
  test("a walk between two targets: sines, closed form", () => {
    // rates 1 both ways on 1 … n, targets 0 and n + 1: α = 2(1 − cos(π/(n+1))), x_k ∝ sin(kπ/(n+1)) (common practice)
    const worst = new Worst();
    for (const n of [1, 2, 5, 20, 100, 300]) {
      const arrows: Arrow[] = [];
      for (let k = 1; k <= n; k++) arrows.push([k, k - 1, 1], [k, k + 1, 1]);
      const { shares, decayRate } = quasiStationary(Generator.fromArrows(n + 2, arrows), maskOf(n + 2, [0, n + 1]));
      const angle = Math.PI / (n + 1);
      worst.note(decayRate, 4 * Math.sin(angle / 2) ** 2, `decay ${n}`);
      let sum = 0;
      for (let k = 1; k <= n; k++) sum += Math.sin(Math.min(k, n + 1 - k) * angle);
      for (let k = 1; k <= n; k++) worst.note(shares[k], Math.sin(Math.min(k, n + 1 - k) * angle) / sum, `share ${k} of ${n}`);
    }
    console.log(`quasi-stationary sines: ${worst}`);
    expect(worst.error, worst.at).toBeLessThan(1e-12); // measured 4e-14
  });

  test("a rare target: decay rate to the last digits", () => {
    // two states up/down with a target at 1e-30 from down: α ≈ π_down · 1e-30 with the shares of the pair
    const chain = Generator.fromArrows(3, [[0, 1, 0.001], [1, 0, 0.1], [1, 2, 1e-30]]);
    const { shares, decayRate } = quasiStationary(chain, maskOf(3, [2]));
    expect(relativeError(decayRate, 1e-30 / 101)).toBeLessThan(1e-15);
    expect(relativeError(shares[0], 100 / 101)).toBeLessThan(1e-15);
  });

  test("equal stages in a row: all in the last one (a defective matrix)", () => {
    const chain = Generator.fromArrows(4, [[0, 1, 2], [1, 2, 2], [2, 3, 2]]);
    expect(quasiStationary(chain, maskOf(4, [3]))).toEqual({ shares: Float64Array.of(0, 0, 1, 0), decayRate: 2 });
  });

  test("fast stages on the way do not matter", () => {
    const chain = Generator.fromArrows(4, [[0, 1, 5], [1, 2, 1], [2, 1, 1], [2, 3, 1]]);
    const { shares, decayRate } = quasiStationary(chain, maskOf(4, [3]));
    // 1 ⇄ 2 at 1, ended from 2 at 1: α = (3 − √5)/2, shares (1 − α)⁻¹ : 1 … golden section
    expect(relativeError(decayRate, (3 - Math.sqrt(5)) / 2)).toBeLessThan(1e-15);
    expect(relativeError(shares[1] / shares[2], (1 + Math.sqrt(5)) / 2)).toBeLessThan(1e-15);
    expect([shares[0], shares[3]]).toEqual([0, 0]);
  });

  test("no answer where the limit depends on the start", () => {
    // a slow stage before a fast one: from the fast one the limit is its own
    expect(() => quasiStationary(Generator.fromArrows(3, [[0, 1, 1], [1, 2, 3]]), maskOf(3, [2]))).toThrow("limitDependsOnStart");
    expect(() => quasiStationary(Generator.fromArrows(3, [[0, 2, 1], [1, 2, 3]]), maskOf(3, [2]))).toThrow("limitDependsOnStart");
    // two equally slow states side by side
    expect(() => quasiStationary(Generator.fromArrows(3, [[0, 2, 1], [1, 2, 1]]), maskOf(3, [2]))).toThrow("limitDependsOnStart");
    expect(() => quasiStationary(Generator.fromArrows(4, [[0, 1, 1], [1, 2, 2], [2, 3, 3]]), maskOf(4, [3]))).toThrow("limitDependsOnStart");
  });

  test("a class from which no target can be met keeps its stationary shares", () => {
    const chain = Generator.fromArrows(4, [[0, 1, 1], [0, 3, 1], [1, 2, 1], [2, 1, 3]]);
    expect(quasiStationary(chain, maskOf(4, [3]))).toEqual({ shares: Float64Array.of(0, 0.75, 0.25, 0), decayRate: 0 });
  });

  test("refuses targets only", () => {
    expect(() => quasiStationary(Generator.fromArrows(1, []), Uint8Array.of(1))).toThrow("onlyTargets");
  });
});
