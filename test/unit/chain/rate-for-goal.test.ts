import { describe, expect, test } from "vitest";
import { availability } from "../../../src/chain/availability";
import { Generator, type Arrow } from "../../../src/chain/generator";
import type { Problem } from "../../../src/chain/problem";
import { rateForGoal } from "../../../src/chain/rate-for-goal";
import { relativeError } from "../../reference/battery";

const up = Uint8Array.of(1, 0);
const problemOf = (ask: () => unknown): Problem => {
  try {
    ask();
  } catch (problem) {
    return problem as Problem;
  }
  throw new Error("answered");
};

describe("rate for a goal", () => {
  test("two states in the long run: μ = λ A / (1 − A)", () => {
    for (const goal of [1e-6, 0.3, 0.9, 0.999999]) {
      const rate = rateForGoal(Generator.fromArrows(2, [[0, 1, 2], [1, 0, 3]]), 1, 0, up, goal);
      expect(relativeError(rate, (2 * goal) / (1 - goal))).toBeLessThan(1e-15);
    }
  });

  test("an arrow that does not exist yet", () => {
    // up → down 1, down → repair 1, repair → up x: A = x / (2x + 1)
    const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 2, 1]]);
    expect(relativeError(rateForGoal(chain, 2, 0, Uint8Array.of(1, 0, 0), 0.25), 0.5)).toBeLessThan(1e-15);
  });

  test("competing ends from a start: a transient from-state", () => {
    // 0 → 1 at 1, 0 → 2 at x; share of 2 from start 0: x / (1 + x)
    const chain = Generator.fromArrows(3, [[0, 1, 1], [0, 2, 5]]);
    expect(relativeError(rateForGoal(chain, 0, 2, Uint8Array.of(0, 0, 1), 0.2, Float64Array.of(1, 0, 0)), 0.25)).toBeLessThan(1e-15);
    expect(() => rateForGoal(chain, 0, 2, Uint8Array.of(0, 0, 1), 0.2)).toThrow("severalClosedClasses");
  });

  test("names the reachable shares when no rate does", () => {
    // a second down state keeps the share below one half whatever the repair rate
    const chain = Generator.fromArrows(3, [[0, 1, 1], [1, 0, 1], [0, 2, 1], [2, 0, 1]]);
    const problem = problemOf(() => rateForGoal(chain, 1, 0, Uint8Array.of(1, 0, 0), 0.6));
    expect(problem.code).toBe("goalNotReached");
    expect(problem.kind).toBe("noAnswer");
    expect(relativeError(problem.details.highest as number, 0.5)).toBeLessThan(1e-11);
    expect(problem.details.lowest as number).toBeLessThan(1e-11);
  });

  test("at a time: up at 1 with repair, closed form", () => {
    // A(t) = μ/s + λ/s e^(−st), s = λ + μ
    const chain = Generator.fromArrows(2, [[0, 1, 0.5], [1, 0, 0.01]]);
    const share = (mu: number): number => mu / (0.5 + mu) + (0.5 / (0.5 + mu)) * Math.exp(-(0.5 + mu) * 3);
    const rate = rateForGoal(chain, 1, 0, up, share(2.5), Float64Array.of(1, 0), 3);
    expect(relativeError(rate, 2.5)).toBeLessThan(1e-13);
  });

  test("at a time with two solutions, the one nearer to the present rate by ratio", () => {
    // share of 2 in 0 → 1 → 2 → 3 at time 1: rises with the rate of 1 → 2, has its peak of 0.223 at 2.57 and falls to 0.149
    const chain = (x: number): Generator => Generator.fromArrows(4, [[0, 1, 3], [1, 2, x], [2, 3, 3]]);
    const [there, start] = [Uint8Array.of(0, 0, 1, 0), Float64Array.of(1, 0, 0, 0)];
    const share = (x: number): number => availability(chain(x), there, start, [1])[0];
    const find = (present: number, goal: number): number => rateForGoal(chain(present), 1, 2, there, goal, start, 1);
    const [low, high] = [find(0.1, 0.2), find(100, 0.2)];
    expect(low).toBeLessThan(2.57);
    expect(high).toBeGreaterThan(2.58);
    for (const rate of [low, high]) expect(relativeError(share(rate), 0.2)).toBeLessThan(1e-13);
    expect(find(low * 1.2, 0.2)).toBeCloseTo(low, 12);
    expect(find(high / 1.2, 0.2)).toBeCloseTo(high, 11);
    // both sides of the peak within one step of the search
    const close = share(2.55);
    expect(relativeError(share(find(2.5, close)), close)).toBeLessThan(1e-13);
    expect(problemOf(() => find(1, 0.23)).code).toBe("goalNotReached");
  });

  test("at a time, a goal no rate reaches", () => {
    const problem = problemOf(() => rateForGoal(Generator.fromArrows(2, [[0, 1, 1]]), 0, 1, Uint8Array.of(0, 1), 1, Float64Array.of(0.5, 0.5), 0));
    expect(problem.code).toBe("goalNotReached");
    expect([problem.details.lowest, problem.details.highest]).toEqual([0.5, 0.5]);
  });

  test("refuses a loop and a goal that is no share", () => {
    const chain = Generator.fromArrows(2, [[0, 1, 1], [1, 0, 1]] as Arrow[]);
    expect(() => rateForGoal(chain, 0, 0, up, 0.5)).toThrow("arrowToItself");
    for (const goal of [-0.1, 1.1, NaN]) expect(() => rateForGoal(chain, 0, 1, up, goal)).toThrow("goalOutside");
  });
});
