import { describe, expect, it } from "vitest";
import { distributions } from "../../../src/chain/distribution";
import { embeddingGap, generatorFromProbability } from "../../../src/chain/from-probability";
import { Generator } from "../../../src/chain/generator";
import { inspectionShares } from "../../../src/chain/inspection";
import { discountedOccupancy, occupancies } from "../../../src/chain/occupancy";
import { phasedDistributions, phasedOccupancies } from "../../../src/chain/phased";
import { settlingTime } from "../../../src/chain/settling";
import { transitionMatrix } from "../../../src/chain/transition";
import { shareElasticityAt } from "../../../src/chain/transition-derivative";
import { expectNear, expectProblem, line, mask, repairable, unit } from "./closed-forms";

describe("occupancies", () => {
  it("of a repairable machine are those of the integrated formula, from short to long", () => {
    const [a, b] = [1, 3];
    const horizons = [1e9, 1e-6, 0, 2];
    const found = occupancies(repairable(a, b), unit(2, 0), horizons);
    horizons.forEach((t, m) => {
      const s = a + b;
      const down = t < 1e-3 ? a * t * t * (1 / 2 - (s * t) / 6 + (s * t) ** 2 / 24) : (a / s) * (t + Math.expm1(-s * t) / s);
      expectNear(found[m][1], down, 1e-14);
      expectNear(found[m][0] + found[m][1], t, 1e-15);
    });
  });

  it("in absorbing states and without arrows", () => {
    const [spent] = occupancies(Generator.fromArrows(2, [[0, 1, 2]]), unit(2, 0), [1e9]);
    expectNear(spent[0], 0.5);
    expectNear(spent[1], 999999999.5);
    expect(Array.from(occupancies(Generator.fromArrows(2, []), Float64Array.of(0.25, 0.75), [8])[0])).toEqual([2, 6]);
  });

  it("discounted: (1 − e^(−rh))/r in a state that is kept, the plain one without discount", () => {
    const kept = Generator.fromArrows(1, []);
    for (const [h, r] of [[1e6, 0.1], [1e-9, 3], [5, 1e-12]])
      expectNear(discountedOccupancy(kept, unit(1, 0), h, r)[0], -Math.expm1(-r * h) / r, 5e-15);
    expect(discountedOccupancy(repairable(1, 3), unit(2, 0), 4, 0)).toEqual(occupancies(repairable(1, 3), unit(2, 0), [4])[0]);
    expectProblem(() => discountedOccupancy(kept, unit(1, 0), 1, -1), "discountNegative");
  });
});

describe("phases", () => {
  it("in order; equal phases are one longer one", () => {
    const [calm, busy] = [repairable(1, 3), repairable(5, 0.5)];
    const start = unit(2, 0);
    const ends = phasedDistributions([calm, busy], [1, 2], start);
    expect(ends[0]).toEqual(distributions(calm, start, [1])[0]);
    expect(ends[1]).toEqual(distributions(busy, ends[0], [2])[0]);
    const [, twice] = phasedDistributions([calm, calm], [1, 2], start);
    expectNear(twice[1], distributions(calm, start, [3])[0][1], 1e-15);
    const spent = phasedOccupancies([calm, calm], [1, 2], start);
    const [whole] = occupancies(calm, start, [3]);
    for (const j of [0, 1]) expectNear(spent[0][j] + spent[1][j], whole[j], 1e-15);
    expectProblem(() => phasedDistributions([calm], [-1], start), "timeNegative");
  });
});

describe("inspection at fixed intervals", () => {
  it("hidden failures found and put right at each inspection: (1 − e^(−λT))/λT", () => {
    // Average availability of a periodically tested component; e.g. IEC 61508-6 annex B gives its first term 1 − λT/2.
    for (const [rate, interval] of [[0.1, 5], [1e-9, 8760], [1e-12, 1]]) {
      const x = rate * interval;
      const [up, down] = inspectionShares(Generator.fromArrows(2, [[0, 1, rate]]), Float64Array.of(1, 0, 1, 0), interval);
      expectNear(up, -Math.expm1(-x) / x, 1e-14);
      if (x < 1e-4) expectNear(down, x / 2 - (x * x) / 6, 1e-11);
    }
  });

  it("resets that change nothing leave the long-run shares; several closed classes have no answer", () => {
    const shares = inspectionShares(repairable(1, 3), Float64Array.of(1, 0, 0, 1), 0.7);
    expectNear(shares[0], 0.75, 1e-14);
    const cut = Generator.fromArrows(2, []);
    expectProblem(() => inspectionShares(cut, Float64Array.of(1, 0, 0, 1), 1), "severalEnds", "noAnswer");
    expectProblem(() => inspectionShares(cut, Float64Array.of(1, 0, 0, 1), 0), "intervalNotPositive");
  });

  it("probabilities of 1e-200 between inspections still join the classes", () => {
    const rare = Generator.fromArrows(2, [[0, 1, 1e-140]]);
    const [, down] = inspectionShares(rare, Float64Array.of(1, 0, 1 - 2 ** -53, 2 ** -53), 1e-60);
    expectNear(down, 0.5e-200, 1e-13);
  });
});

describe("settling", () => {
  it("of a repairable machine: largest distance max(a, b)/(a + b) e^(−(a + b)t)", () => {
    for (const tolerance of [0.5, 0.1, 0.01, 1e-6, 1e-15, 1e-60, 1e-300])
      expectNear(settlingTime(repairable(1, 3), tolerance), Math.log(0.75 / tolerance) / 4, 2e-15);
  });

  it("0 when every start is within the tolerance already", () => {
    expect(settlingTime(repairable(1, 3), 0.75)).toBe(0);
    expect(settlingTime(repairable(1, 3), 0.7499)).toBeGreaterThan(0);
    expect(settlingTime(Generator.fromArrows(3, []), 0.01)).toBe(0);
    expectProblem(() => settlingTime(repairable(1, 3), 0), "toleranceOutside");
    expectProblem(() => settlingTime(repairable(1, 3), 1), "toleranceOutside");
  });

  it("of chains that cannot be diagonalised, and of slow ones", () => {
    // Five equal stages: the distance is what has not passed, Σ_{k<5} e^(−t) t^k/k!.
    for (const tolerance of [0.01, 1e-12, 1e-100, 1e-250]) {
      const t = settlingTime(line(5, 1), tolerance);
      let term = Math.exp(-t);
      let sum = term;
      for (let k = 1; k < 5; k++) sum += term *= t / k;
      expectNear(sum, tolerance, 3e-14 * (10 - Math.log(tolerance)));
    }
    const slow = Generator.fromArrows(3, [[0, 1, 1e6], [1, 0, 1e6], [1, 2, 1e-9]]);
    expectNear(settlingTime(slow, 0.1), Math.log(10) / 0.5e-9, 1e-6);
    // all but 1e-6 is over in a millionth, the rest stays 1e12 times as long
    const plateau = Generator.fromArrows(3, [[0, 2, 1e6], [0, 1, 1], [1, 2, 1e-6]]);
    for (const tolerance of [1e-3, 1e-12, 1e-100]) expectNear(settlingTime(plateau, tolerance), -Math.log(tolerance) * 1e6, 1e-14);
  });
});

describe("rates from a table of probabilities", () => {
  it("two states: the closed logarithm", () => {
    const { generator, exact } = generatorFromProbability(2, Float64Array.of(0.8, 0.2, 0, 1), 1);
    expect(exact).toBe(true);
    expect([...generator.arrows()].map(([i, j]) => [i, j])).toEqual([[0, 1]]);
    expectNear(generator.rateOf(0, 1), -Math.log(0.8), 1e-15);
  });

  it("round trip: rates, their table, the same table again", () => {
    const chains = [repairable(0.3, 0.4), line(6, 0.5), Generator.fromArrows(4, [[0, 1, 0.1], [1, 2, 0.2], [2, 0, 0.3], [1, 3, 0.001], [3, 1, 2]])];
    for (const chain of chains)
      for (const period of [0.25, 1, 3]) {
        const p = transitionMatrix(chain, period);
        const { generator, exact } = generatorFromProbability(chain.size, p, period);
        expect(exact).toBe(true);
        expect(embeddingGap(chain.size, p, period)).toBeLessThan(1e-14);
        for (const [i, j, rate] of chain.arrows()) expectNear(generator.rateOf(i, j), rate, 1e-12);
        expect(generator.arrowCount).toBe(chain.arrowCount);
      }
  });

  it("rates that the logarithm cannot see are taken from their own entries", () => {
    const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 0, 1], [0, 2, 1e-20], [2, 0, 1]]);
    const p = transitionMatrix(chain, 0.5);
    const { generator } = generatorFromProbability(3, p, 0.5);
    expectNear(generator.rateOf(0, 2), 1e-20, 1e-6);
    expect(embeddingGap(3, p, 0.5)).toBeLessThan(1e-14);
  });

  it("a table that no rates explain: the nearest generator row by row, and the gap it leaves", () => {
    // 1 to 3 only through 2, yet never in one period: p₁₃ = 0 is impossible with rates.
    const p = Float64Array.of(0.5, 0.5, 0, 0, 0.5, 0.5, 0.5, 0, 0.5);
    const { generator, exact } = generatorFromProbability(3, p, 1);
    expect(exact).toBe(false);
    expect(generator.rateOf(0, 2)).toBe(0);
    expect(embeddingGap(3, p, 1)).toBeGreaterThan(1e-3);
  });

  it("no answer where an eigenvalue is negative or zero", () => {
    expectProblem(() => generatorFromProbability(2, Float64Array.of(0.2, 0.8, 0.8, 0.2), 1), "noRealLogarithm", "noAnswer");
    expectProblem(() => generatorFromProbability(2, Float64Array.of(0.5, 0.5, 0.5, 0.5), 1), "noRealLogarithm", "noAnswer");
    expectProblem(() => generatorFromProbability(2, Float64Array.of(1, 0, 0, 1), 0), "periodNotPositive");
    expect(generatorFromProbability(2, Float64Array.of(1, 0, 0, 1), 1).generator.arrowCount).toBe(0);
  });
});

describe("elasticities at a time", () => {
  it("of one exponential stay: −λt for what is left, λt/(e^(λt) − 1) for what has passed", () => {
    const chain = Generator.fromArrows(2, [[0, 1, 2]]);
    for (const t of [1e-9, 0.5, 3, 100]) {
      expectNear(shareElasticityAt(chain, mask(2, 0), unit(2, 0), t)[1], -2 * t, 1e-14);
      expectNear(shareElasticityAt(chain, mask(2, 1), unit(2, 0), t)[1], (2 * t) / Math.expm1(2 * t), 1e-13 * (1 + 2 * t) * Math.exp(Math.min(700, 2 * t)));
    }
  });

  it("0 at time 0 and where there is no arrow, refused when the share is 0", () => {
    const chain = repairable(1, 3);
    expect(Array.from(shareElasticityAt(chain, mask(2, 0), unit(2, 0), 0))).toEqual([0, 0, 0, 0]);
    expect(() => shareElasticityAt(chain, mask(2, 1), unit(2, 0), 0)).toThrow("shareIsZero");
    expect(shareElasticityAt(chain, mask(2, 0), unit(2, 0), 1)[0]).toBe(0);
  });

  it("all together: the sum over all rates is the elasticity with respect to time", () => {
    const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 2, 2], [2, 0, 0.5], [1, 0, 4]]);
    const [start, up, t] = [unit(3, 0), mask(3, 2), 0.8];
    const sum = shareElasticityAt(chain, up, start, t).reduce((a, b) => a + b, 0);
    const [row] = distributions(chain, start, [t]);
    const slope = 2 * row[1] - 0.5 * row[2];
    expectNear(sum, (t * slope) / row[2], 1e-13);
  });
});
