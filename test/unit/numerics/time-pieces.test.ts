import { describe, expect, it } from "vitest";
import { Generator } from "../../../src/chain/generator";
import { finish } from "../../../src/chain/steps";
import { projectOntoGeneratorRow } from "../../../src/numerics/nearest-generator";
import { chooseMethod, LARGEST_MATRIX, SMALL } from "../../../src/numerics/method-choice";
import { occupancyWeights, poissonWeights } from "../../../src/numerics/poisson";
import { NODES, principalLogarithm, WEIGHTS } from "../../../src/numerics/principal-logarithm";
import { denseOf } from "../../../src/numerics/rows";
import { binaryDigits, Squarings } from "../../../src/numerics/squarings";
import { JumpWalk } from "../../../src/numerics/uniformization";
import { expectNear, line, repairable, unit } from "../chain/closed-forms";
import { kernels } from "./kernels";

describe("Poisson weights", () => {
  it("are e^(−x) x^k/k!, in the far tail too", () => {
    for (const mean of [1e-12, 0.5, 7, 300]) {
      const { first, weights } = poissonWeights(mean);
      let sum = 0;
      for (let k = 0; k < weights.length; k++) {
        let log = -mean + (first + k) * Math.log(mean);
        for (let j = 2; j <= first + k; j++) log -= Math.log(j);
        if (log > -600) expect(Math.abs(Math.log(weights[k]) - log)).toBeLessThan(1e-12 * (1 + Math.abs(log)));
        sum += weights[k];
      }
      expectNear(sum, 1, 1e-15);
      expect(weights[weights.length - 1]).toBeLessThan(1e-299);
    }
  });

  it("from the mode of a million on, nothing overflows and the first two moments hold", () => {
    const { first, weights } = poissonWeights(1e6);
    let mean = 0;
    let square = 0;
    weights.forEach((w, k) => {
      mean += w * (first + k);
      square += w * (first + k - 1e6) ** 2;
    });
    expectNear(mean, 1e6, 1e-13);
    expectNear(square, 1e6, 1e-10);
  });

  it("of no time are all in no jump", () => {
    expect(poissonWeights(0)).toEqual({ first: 0, weights: Float64Array.of(1) });
  });

  it("of occupancies sum to the time, and are t e^(−x) Σ x^j/(j + 1)! …", () => {
    for (const [mean, time] of [[1e-9, 3], [2, 0.5], [500, 7]]) {
      const { weights } = occupancyWeights(mean, time);
      expectNear(weights.reduceRight((a, b) => a + b, 0), time, 5e-14); // measured 1.1e-14
      expectNear(weights[0], (time * -Math.expm1(-mean)) / mean, 1e-14);
    }
  });
});

describe("binary digits of a time", () => {
  it("make it up again, highest first", () => {
    for (const [time, step] of [[10, 1], [7.25, 1], [0.3, 1], [1e12, 1e-3], [3, 0.1], [2 ** 53 - 1, 1], [2 ** 49 - 1 / 16, 1]]) {
      const { powers, rest } = binaryDigits(time, step);
      let sum = rest;
      powers.forEach((power, k) => {
        if (k > 0) expect(power).toBeLessThan(powers[k - 1]);
        sum += step * 2 ** power;
      });
      expectNear(sum, time, 1e-15);
      expect(rest >= 0 && rest < step).toBe(true);
    }
  });
});

describe("stored squarings", () => {
  it("are the powers of the first, and one for all when nothing changes any more", () => {
    for (const kernel of kernels) {
      const squarings = finish(Squarings.open(denseOf(repairable(1, 3)), kernel, 100));
      const early = finish(squarings.matrix(1))[1];
      expectNear(early, -0.25 * Math.expm1(-8 * squarings.step), 1e-15);
      const late = finish(squarings.matrix(60));
      expect(squarings.isSettled).toBe(true);
      expect(late).toBe(finish(squarings.matrix(squarings.top)));
      expectNear(late[1], 0.25, 1e-15);
    }
  });
});

describe("the choice of a method", () => {
  it("walks few jumps and takes many through the matrix; a full table crosses near Λt = n", () => {
    for (const n of [5, 20, 60, 200]) {
      const crossing = Math.max(n, 32);
      expect(chooseMethod(n, n * (n - 1), crossing * 1.01, 1)).toBe("matrix");
      if (n >= 20) expect(chooseMethod(n, 2 * n, 8, 1)).toBe("row");
    }
  });

  it("walks a sparse chain far, a larger one as long as that is cheaper, and beyond the memory always", () => {
    expect(chooseMethod(SMALL, 2 * SMALL, SMALL + 1, 1)).toBe("matrix");
    expect(chooseMethod(SMALL + 1, 2 * SMALL, 2 * SMALL, 1)).toBe("row");
    expect(chooseMethod(SMALL + 1, 2 * SMALL, 1e8, 1)).toBe("matrix");
    expect(chooseMethod(LARGEST_MATRIX, 2 * LARGEST_MATRIX, 1e9, 1)).toBe("matrix");
    expect(chooseMethod(LARGEST_MATRIX + 1, 2 * LARGEST_MATRIX, 1e9, 1)).toBe("row");
  });
});

describe("a walk jump by jump", () => {
  it("reaches states in the order of jumps, and touches no other", () => {
    const walk = new JumpWalk(line(10_000, 1), unit(10_001, 5000));
    for (let k = 1; k <= 300; k++) {
      walk.jump();
      expect(walk.active).toBe(k + 1);
      expect(walk.order[k]).toBe(5000 + k);
    }
    // All rates equal: after k jumps it is in the k-th state for certain.
    expect(Array.from(walk.now.slice(0, 301))).toEqual(Array.from({ length: 301 }, (_, k) => (k === 300 ? 1 : 0)));
    expect(walk.complete).toBe(false);
  });

  it("stays where there are no arrows, and keeps a sum of 1 over thousands of jumps", () => {
    const still = new JumpWalk(Generator.fromArrows(2, []), Float64Array.of(0.25, 0.75));
    still.jump();
    expect([...still.now.slice(0, 2), still.complete]).toEqual([0.25, 0.75, true]);
    const walk = new JumpWalk(Generator.fromArrows(3, [[0, 1, 0.3], [1, 2, 0.7], [2, 0, 0.11], [0, 2, 1e-9]]), unit(3, 0));
    for (let k = 0; k < 16_000; k++) walk.jump();
    expectNear(walk.now.slice(0, 3).reduce((a, b) => a + b, 0), 1, 3e-16);
  });
});

describe("the principal logarithm", () => {
  it("its Gauss rule integrates the powers up to 19 exactly", () => {
    for (let k = 0; k < 20; k++) {
      const integral = NODES.reduce((sum, x, i) => sum + WEIGHTS[i] * x ** k, 0);
      expectNear(integral, 1 / (k + 1), 1e-15);
    }
    expect(NODES.reduce((sum, x, i) => sum + WEIGHTS[i] * x ** 20, 0)).not.toBe(1 / 21);
  });

  it("of a rotation is its angle; beyond a half turn it is the short way round", () => {
    for (const [angle, expected] of [[1, 1], [3, 3], [3.5, 3.5 - 2 * Math.PI]]) {
      const turn = Float64Array.of(Math.cos(angle), -Math.sin(angle), Math.sin(angle), Math.cos(angle));
      const logarithm = finish(principalLogarithm(2, turn))!;
      [0, -expected, expected, 0].forEach((value, k) => expect(Math.abs(logarithm[k] - value)).toBeLessThan(2e-14)); // measured 6e-15
    }
  });

  it("of a matrix that cannot be diagonalised", () => {
    const logarithm = finish(principalLogarithm(3, Float64Array.of(0.5, 1, 0, 0, 0.5, 1, 0, 0, 0.5)))!;
    // log(½ I + N) = ln ½ I + 2N − 2N²
    [Math.log(0.5), 2, -2, 0, Math.log(0.5), 2, 0, 0, Math.log(0.5)].forEach((value, k) =>
      expect(Math.abs(logarithm[k] - value)).toBeLessThan(2e-15));
  });

  it("is not there for an eigenvalue of 0 or below, and is 0 for I", () => {
    expect(finish(principalLogarithm(2, Float64Array.of(0, 1, 1, 0)))).toBeNull();
    expect(finish(principalLogarithm(2, Float64Array.of(1, 0, 1, 0)))).toBeNull();
    expect(Array.from(finish(principalLogarithm(2, Float64Array.of(1, 0, 0, 1)))!)).toEqual([0, 0, 0, 0]);
  });
});

describe("the nearest generator row", () => {
  const project = (row: number[], diagonal: number): number[] => {
    const values = Float64Array.from(row);
    projectOntoGeneratorRow(values, diagonal);
    return Array.from(values);
  };

  it("leaves a generator row as it is", () => {
    expect(project([0.25, -0.75, 0.5], 1)).toEqual([0.25, -0.75, 0.5]);
    expect(project([0, 0, 0], 0)).toEqual([0, 0, 0]);
  });

  it("is at the least distance: no nearby generator row is nearer", () => {
    const row = [-0.2, -1, 0.5, 0.7];
    const found = project(row, 1);
    expect(found.every((value, j) => j === 1 || value >= 0)).toBe(true);
    expect(Math.abs(found.reduce((a, b) => a + b, 0))).toBeLessThan(1e-16);
    const distance = (candidate: readonly number[]): number => candidate.reduce((sum, value, j) => sum + (value - row[j]) ** 2, 0);
    for (const j of [0, 2, 3])
      for (const step of [1e-4, -1e-4]) {
        const other = found.map((value, k) => (k === j ? value + step : k === 1 ? value - step : value));
        if (other[j] >= 0) expect(distance(other)).toBeGreaterThan(distance(found));
      }
  });
});
