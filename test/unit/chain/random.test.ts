import { describe, expect, test } from "vitest";
import { availabilityBand, quantile } from "../../../src/chain/availability-band";
import { Generator } from "../../../src/chain/generator";
import { logarithm, Random } from "../../../src/chain/random";
import { samplePath } from "../../../src/chain/sample-path";
import { stationaryShares } from "../../../src/chain/stationary";

describe("random numbers", () => {
  test("are those of the published algorithm", () => {
    // the authors' C code transcribed to Python and run apart, seeded as the docstring says
    const first = (seed: number): number[] => {
      const random = new Random(seed);
      return [1, 2, 3, 4].map(() => random.bits());
    };
    expect(first(1)).toEqual([2908352500, 4204811091, 1078441969, 1541376796]);
    expect(first(2)).toEqual([782840344, 3101719009, 25413307, 1446593116]);
    expect(first(2 ** 40 + 5)).toEqual([3269962855, 2337859419, 1516654999, 608686018]);
    expect(first(0)).toEqual([2680347688, 2235513634, 723524369, 3010879350]);
  });

  test("never reach the ends of the unit interval", () => {
    const random = new Random(5);
    for (let k = 0; k < 20_000; k++) {
      const u = random.uniform();
      expect(u > 0 && u < 1).toBe(true);
    }
  });

  test("have the moments of their laws", () => {
    const draws = 200_000;
    const random = new Random(11);
    for (const [draw, mean, variance] of [
      [() => random.uniform(), 1 / 2, 1 / 12],
      [() => random.exponential(), 1, 1],
      [() => random.normal(), 0, 1],
      [() => random.gamma(1.5), 1.5, 1.5],
      [() => random.gamma(40.5), 40.5, 40.5],
    ] as [() => number, number, number][]) {
      let [sum, squares] = [0, 0];
      for (let k = 0; k < draws; k++) {
        const x = draw() - mean;
        sum += x;
        squares += x * x;
      }
      expect(Math.abs(sum / draws)).toBeLessThan(4 * Math.sqrt(variance / draws));
      expect(Math.abs(squares / draws / variance - 1)).toBeLessThan(0.03);
    }
  });

  test("the logarithm is within an ulp or so of the machine's", () => {
    const random = new Random(3);
    let worst = 0;
    for (let k = 0; k < 100_000; k++) {
      const x = random.uniform() * 2 ** (random.uniform() * 200 - 100);
      const exact = Math.log(x);
      worst = Math.max(worst, Math.abs(logarithm(x) - exact) / Math.max(Math.abs(exact), 1e-3));
    }
    console.log(`logarithm against Math.log: ${worst.toExponential(1)}`);
    expect(worst).toBeLessThan(5e-16); // measured 2.3e-16 relative (absolute 1e-3 · that near 1)
    expect(logarithm(1)).toBe(0);
  });
});

describe("sample path", () => {
  const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 0, 2], [1, 2, 0.5], [2, 0, 0.25]]);
  const start = Float64Array.of(1, 0, 0);

  test("starts at the start, ends before the horizon, uses existing arrows, repeats with its seed", () => {
    const path = samplePath(chain, start, 200, 7, 50_000);
    expect([path.times[0], path.states[0]]).toEqual([0, 0]);
    expect(path.times.every((time, k) => time < 200 && (k === 0 || time > path.times[k - 1]))).toBe(true);
    for (let k = 1; k < path.states.length; k++) expect(chain.rateOf(path.states[k - 1], path.states[k])).toBeGreaterThan(0);
    expect(samplePath(chain, start, 200, 7, 50_000)).toEqual(path);
    expect(samplePath(chain, start, 200, 8, 50_000)).not.toEqual(path);
  });

  test("spends the long-run shares of its time in each state", () => {
    const horizon = 40_000;
    const { times, states } = samplePath(chain, start, horizon, 1, 500_000);
    const spent = [0, 0, 0];
    times.forEach((time, k) => (spent[states[k]] += (times[k + 1] ?? horizon) - time));
    stationaryShares(chain).forEach((share, i) => expect(Math.abs(spent[i] / horizon - share)).toBeLessThan(0.02));
  });

  test("stays in an absorbing state, and at horizon 0 only starts", () => {
    expect(samplePath(Generator.fromArrows(2, [[0, 1, 1]]), Float64Array.of(1, 0), 1e9, 1, 10).states).toEqual([0, 1]);
    expect(samplePath(chain, start, 0, 1, 10)).toEqual({ times: [0], states: [0] });
  });

  test("is refused where it would be too long", () => {
    expect(() => samplePath(chain, start, 1e6, 1, 100)).toThrow("pathTooLong");
  });
});

describe("availability band", () => {
  const counts = { generator: Generator.fromArrows(2, [[0, 1, 4], [1, 0, 4]]), names: null };
  const up = Uint8Array.of(1, 0);

  test("two states: quantiles of a transformed beta law", () => {
    // 4 failures in 990 h up, 4 repairs in 10 h down: X/(X + Y) is Beta(4.5, 4.5); quantiles from mpmath at 30 digits
    const { lower, median, upper } = availabilityBand(counts, [990, 10], up, { draws: 40_000 });
    expect(Math.abs(lower - 0.9688889455750077)).toBeLessThan(3e-4); // measured 1e-4; standard error of the quantile 1.5e-4
    expect(Math.abs(median - 0.99)).toBeLessThan(1e-4);
    expect(Math.abs(upper - 0.9968325403753823)).toBeLessThan(4e-5);
  });

  test("the same seed gives the same figures, another seed others", () => {
    const band = availabilityBand(counts, [990, 10], up, { draws: 200 });
    expect(availabilityBand(counts, [990, 10], up, { draws: 200, seed: 1 })).toEqual(band);
    expect(availabilityBand(counts, [990, 10], up, { draws: 200, seed: 2 })).not.toEqual(band);
  });

  test("at a long time it is the long-run band", () => {
    const long = availabilityBand(counts, [990, 10], up, { draws: 100 });
    const at = availabilityBand(counts, [990, 10], up, { draws: 100, time: 1e5, start: Float64Array.of(1, 0) });
    expect(Math.abs(at.lower - long.lower)).toBeLessThan(1e-13);
  });

  test("refuses counts without time, broken counts and bad options", () => {
    expect(() => availabilityBand(counts, [990, 0], up)).toThrow("countsWithoutTime");
    expect(() => availabilityBand({ ...counts, generator: Generator.fromArrows(2, [[0, 1, 0.5]]) }, [1, 1], up)).toThrow("countNotWhole");
    expect(() => availabilityBand(counts, [990, 10], up, { confidence: 1 })).toThrow("notBetween");
    expect(() => availabilityBand(counts, [990, 10], up, { draws: 0 })).toThrow("notWholeNumber");
    expect(() => availabilityBand(counts, [990, 10], up, { seed: 0.5 })).toThrow("notWholeNumber");
  });

  test("quantiles of type 7", () => {
    // Hyndman & Fan 1996, definition 7: position 1 + (n − 1)p
    const values = Float64Array.of(1, 2, 4, 8);
    expect([0, 0.25, 0.5, 1].map((p) => quantile(values, p))).toEqual([1, 1.75, 3, 8]);
  });
});
