import { describe, expect, test } from "vitest";
import { costElasticity, meanTimeElasticity, shareElasticity } from "../../../src/chain/elasticity";
import { Generator } from "../../../src/chain/generator";
import { maskOf, relativeError } from "../../reference/battery";

const close = (found: number, expected: number): void => expect(relativeError(found, expected), `${found} for ${expected}`).toBeLessThan(1e-13);

describe("elasticity", () => {
  test("two states: ±U for the availability, ±A for the unavailability, however small", () => {
    for (const [fail, repair] of [[1, 3], [1e-9, 1e6], [1e6, 1e-9]]) {
      const chain = Generator.fromArrows(2, [[0, 1, fail], [1, 0, repair]]);
      const [a, u] = [repair / (fail + repair), fail / (fail + repair)];
      const share = shareElasticity(chain, Uint8Array.of(1, 0));
      close(share[1], -u);
      close(share[2], u);
      close(shareElasticity(chain, Uint8Array.of(0, 1))[1], a);
    }
  });

  test("mean time of the repairable duplex: closed form", () => {
    // m = (3λ + μ)/(2λ²) with rates 2λ, λ, μ apart: m = 1/a + 1/b + μ/(ab), a = 2λ, b = λ
    for (const [a, b, mu] of [[0.002, 0.001, 0.1], [2e-9, 1e-9, 1e3]]) {
      const chain = Generator.fromArrows(3, [[0, 1, a], [1, 2, b], [1, 0, mu]]);
      const m = 1 / a + 1 / b + mu / (a * b);
      const e = meanTimeElasticity(chain, Float64Array.of(1, 0, 0), maskOf(3, [2]));
      close(e[1], -(1 / a + mu / (a * b)) / m);
      close(e[5], -(1 / b + mu / (a * b)) / m);
      close(e[3], mu / (a * b) / m);
    }
  });

  test("competing ends: the share of an absorbing state from a start", () => {
    const chain = Generator.fromArrows(4, [[0, 1, 2], [1, 2, 1], [1, 3, 3], [1, 0, 4]]);
    // P(end in 2) = 1/(1 + 3), whatever the other rates
    const e = shareElasticity(chain, maskOf(4, [2]), Float64Array.of(1, 0, 0, 0));
    expect(Math.abs(e[1])).toBeLessThan(1e-15);
    close(e[4 + 2], 0.75);
    close(e[4 + 3], -0.75);
    expect(Math.abs(e[4])).toBeLessThan(1e-15);
  });

  test("cost per time unit with arrow costs: closed form of two states", () => {
    // C = (λμ k + λ c)/(λ + μ), k paid per failure, c per time unit down
    const [l, m, k, c] = [0.01, 0.5, 700, 30];
    const chain = Generator.fromArrows(2, [[0, 1, l], [1, 0, m]]);
    const e = costElasticity(chain, Float64Array.of(0, c), Float64Array.of(0, k, 0, 0));
    close(e[1], m / (l + m)); // C ∝ λ/(λ + μ)
    close(e[2], (m * (l * k * (l + m) - (l * m * k + l * c))) / ((l + m) * (l * m * k + l * c)));
  });

  test("no answer for a share, cost or time of zero, or an endless one", () => {
    const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 2, 1], [2, 1, 1]]);
    expect(() => shareElasticity(chain, maskOf(3, [0]))).toThrow("shareIsZero");
    expect(() => costElasticity(chain, new Float64Array(3), null)).toThrow("costIsZero");
    expect(() => meanTimeElasticity(chain, Float64Array.of(0, 1, 0), maskOf(3, [1]))).toThrow("meanIsZero");
    expect(() => meanTimeElasticity(chain, Float64Array.of(0, 1, 0), maskOf(3, [0]))).toThrow("targetNotCertain");
    expect(() => shareElasticity(Generator.fromArrows(3, [[0, 1, 1], [0, 2, 1]]), maskOf(3, [1]))).toThrow("severalClosedClasses");
  });
});
