import { describe, expect, it } from "vitest";
import { distributions } from "../../../src/chain/distribution";
import { Generator } from "../../../src/chain/generator";
import { LONGEST_HORIZON } from "../../../src/chain/horizon";
import { transitionMatrix } from "../../../src/chain/transition";
import { LARGEST_MATRIX } from "../../../src/numerics/method-choice";
import { expectNear, expectProblem, line, repairable, unit } from "./closed-forms";

describe("transition probabilities", () => {
  it("of a repairable machine are those of the textbook formula", () => {
    // p₀₁(t) = a/(a + b) (1 − e^(−(a + b)t)); e.g. Ross, Introduction to Probability Models, ch. 6 (from memory).
    for (const [a, b, t] of [[1, 3, 0.5], [1e-9, 1e6, 1e-7], [1e-9, 1e6, 1e5], [5, 2, 1e-12]]) {
      const p = transitionMatrix(repairable(a, b), t);
      expectNear(p[1], (-a / (a + b)) * Math.expm1(-(a + b) * t), 2e-15);
      expectNear(p[2], (-b / (a + b)) * Math.expm1(-(a + b) * t), 2e-15);
      expect(p[0] + p[1]).toBe(1);
      expect(p[2] + p[3]).toBe(1);
    }
  });

  it("down a line of equal stages are Poisson, the smallest too (this chain cannot be diagonalised)", () => {
    const x = 0.001;
    const p = transitionMatrix(line(40, 1), x);
    let term = Math.exp(-x);
    for (let k = 0; k < 40; k++) {
      if (k > 0) term *= x / k;
      expectNear(p[k], term, 4e-15 * (1 + Math.abs(Math.log(term))));
    }
    expect(p[39]).toBeLessThan(1e-160);
    for (let k = 1; k < 41; k++) expect(p[k * 41]).toBe(0);
  });

  it("are the identity at time 0 and without arrows", () => {
    expect(Array.from(transitionMatrix(repairable(2, 3), 0))).toEqual([1, 0, 0, 1]);
    expect(Array.from(transitionMatrix(Generator.fromArrows(2, []), 1e300))).toEqual([1, 0, 0, 1]);
    expect(Array.from(transitionMatrix(Generator.fromArrows(1, []), 5))).toEqual([1]);
  });

  it("refuses times that are negative, not numbers or too long, and takes the longest", () => {
    const chain = repairable(1, 1);
    expectProblem(() => transitionMatrix(chain, -1), "timeNegative");
    expectProblem(() => transitionMatrix(chain, NaN), "timeNotFinite");
    expectProblem(() => transitionMatrix(chain, Infinity), "timeNotFinite");
    const { details } = expectProblem(() => transitionMatrix(chain, LONGEST_HORIZON * 2), "horizonTooLong");
    expect(details).toEqual({ time: 2e18, rate: 1, jumps: 2e18, limit: 1e18 });
    expect(Array.from(transitionMatrix(chain, LONGEST_HORIZON))).toEqual([0.5, 0.5, 0.5, 0.5]);
  });

  it("refuses more states than memory holds as a full matrix, and walks of minutes", () => {
    expectProblem(() => transitionMatrix(line(LARGEST_MATRIX, 1), 1), "tooManyStates");
    expectProblem(() => distributions(line(LARGEST_MATRIX, 1), unit(LARGEST_MATRIX + 1, 0), [1e9]), "tooMuchWork");
    expect(transitionMatrix(line(LARGEST_MATRIX - 1, 1), 0)).toHaveLength(LARGEST_MATRIX ** 2);
  });

  it("takes rates at both ends of what a table may hold", () => {
    const p = transitionMatrix(repairable(1e150, 1e-150), 1e-150);
    expectNear(p[0], Math.exp(-1), 1e-15);
    expect(p.every((value) => value >= 0 && value <= 1)).toBe(true);
  });

  it("a leak of 1e-18 a step is not lost while the rest has long settled", () => {
    // From {0, 1}, mixing at rate 1, to 2 at rate 1e-17: the mean stay is 2e17.
    const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 0, 1], [1, 2, 1e-17]]);
    expectNear(transitionMatrix(chain, 1e17)[2], -Math.expm1(-0.5), 1e-14);
  });
});

describe("distributions", () => {
  it("come in the order of the times given, whatever it is", () => {
    const chain = repairable(1, 3);
    const times = [5, 0, 1, 0.25, 1];
    const found = distributions(chain, unit(2, 0), times);
    times.forEach((t, m) => expectNear(found[m][1], -0.25 * Math.expm1(-4 * t), 1e-15));
    expect(found[2]).toEqual(found[4]);
  });

  it("are those of the example", () => {
    const found = distributions(Generator.fromArrows(2, [[0, 1, 2]]), Float64Array.of(1, 0), [0, 1]);
    expect(Array.from(found[0])).toEqual([1, 0]);
    expectNear(found[1][0], Math.exp(-2));
    expectNear(found[1][1], -Math.expm1(-2));
  });

  it("short times beside long ones keep entries that many jumps lead to", () => {
    const n = 61;
    const chain = line(60, 1);
    const [late, early] = distributions(chain, unit(n, 0), [5000, 2]);
    expectNear(late[60], 1, 1e-15);
    let term = Math.exp(-2);
    for (let k = 1; k < 60; k++) term *= 2 / k;
    expectNear(early[59], term, 1e-13);
  });

  it("of a large chain need no full table", () => {
    const n = 50_000;
    const chain = line(n - 1, 1);
    const [row] = distributions(chain, unit(n, 100), [30]);
    expect(row.slice(0, 100).every((p) => p === 0)).toBe(true);
    let term = Math.exp(-30);
    for (let k = 1; k <= 200; k++) term *= 30 / k;
    expectNear(row[300], term, 1e-13);
  });
});
