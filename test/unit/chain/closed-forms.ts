import { expect } from "vitest";
import { Generator, type Arrow } from "../../../src/chain/generator";
import { Problem } from "../../../src/chain/problem";

/** A machine that fails and is repaired. */
export const repairable = (failure: number, repair: number): Generator => Generator.fromArrows(2, [[0, 1, failure], [1, 0, repair]]);

/** States in a line, each left for the next at the same rate; the last is absorbing. */
export const line = (stages: number, rate: number): Generator =>
  Generator.fromArrows(stages + 1, Array.from({ length: stages }, (_, i): Arrow => [i, i + 1, rate]));

export const unit = (n: number, at: number): Float64Array => Float64Array.from({ length: n }, (_, i) => (i === at ? 1 : 0));

export const mask = (n: number, ...states: number[]): Uint8Array => Uint8Array.from({ length: n }, (_, i) => (states.includes(i) ? 1 : 0));

/** Relative agreement, 4 roundings unless said otherwise. */
export function expectNear(found: number, expected: number, tolerance = 5e-16): void {
  expect(Math.abs(found - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

export function expectProblem(ask: () => unknown, code: string, kind: "input" | "noAnswer" = "input"): Problem {
  try {
    ask();
  } catch (problem) {
    expect(problem).toBeInstanceOf(Problem);
    expect([(problem as Problem).code, (problem as Problem).kind]).toEqual([code, kind]);
    return problem as Problem;
  }
  throw new Error(`no problem; ${code} was expected`);
}
