import { describe, expect, it } from "vitest";
import { Generator } from "../../../src/chain/generator";
import { percentiles } from "../../../src/chain/percentile";
import { finish } from "../../../src/chain/steps";
import { LARGEST_WALK } from "../../../src/numerics/method-choice";
import { passageQuantiles } from "../../../src/numerics/passage-quantile";
import { reached, survival } from "../../../src/chain/first-passage";
import { expectNear, expectProblem, line, mask, unit } from "./closed-forms";

describe("percentiles of a first passage", () => {
  it("of one exponential stay are −ln(1 − fraction)/rate, from 1e-300 to next to 1", () => {
    const chain = Generator.fromArrows(2, [[0, 1, 2]]);
    const fractions = [0, 1e-300, 1e-30, 0.1, 0.5, 0.9, 1 - 2 ** -52];
    const { times, everReached } = percentiles(chain, unit(2, 0), mask(2, 1), fractions);
    expect(everReached).toBe(1);
    fractions.forEach((f, m) => expectNear(times[m], -Math.log1p(-f) / 2, 2e-15));
  });

  it("turn round: the fraction met by the percentile is the fraction asked", () => {
    for (const stages of [1, 3, 30]) {
      const chain = line(stages, 5);
      const [start, target] = [unit(stages + 1, 0), mask(stages + 1, stages)];
      for (const fraction of [1e-12, 0.01, 0.5, 0.99, 1 - 1e-12]) {
        const [time] = percentiles(chain, start, target, [fraction]).times;
        if (fraction < 0.6) expectNear(reached(chain, start, target, [time])[0], fraction, 1e-13);
        else expectNear(survival(chain, start, target, [time])[0], 1 - fraction, 1e-13);
      }
    }
  });

  it("infinite from the probability of ever meeting a target on, finite just below", () => {
    // To the target with probability ¼, else to a state that is never left.
    const chain = Generator.fromArrows(3, [[0, 1, 1], [0, 2, 3]]);
    const { times, everReached } = percentiles(chain, unit(3, 0), mask(3, 1), [0.2, 0.25 - 1e-12, 0.25, 0.3]);
    expect(everReached).toBe(0.25);
    expectNear(times[0], -Math.log1p(-0.8) / 4, 5e-15);
    expectNear(times[1], -Math.log(4e-12) / 4, 1e-5);
    expect(Array.from(times.slice(2))).toEqual([Infinity, Infinity]);
  });

  it("0 for what starts in a target; never where none can be reached", () => {
    const chain = Generator.fromArrows(2, [[0, 1, 1]]);
    expect(percentiles(chain, Float64Array.of(0.25, 0.75), mask(2, 1), [0.75, 0]).times).toEqual(Float64Array.of(0, 0));
    const back = percentiles(chain, unit(2, 1), mask(2, 0), [0, 0.5]);
    expect([back.everReached, ...back.times]).toEqual([0, 0, Infinity]);
  });

  it("refuses fractions outside 0 to below 1", () => {
    const chain = Generator.fromArrows(2, [[0, 1, 1]]);
    for (const fraction of [-0.1, 1, NaN]) expectProblem(() => percentiles(chain, unit(2, 0), mask(2, 1), [fraction]), "fractionOutside");
  });

  it("of a large chain are found by walking, with the same answer", () => {
    const stages = 2000;
    const chain = line(stages, 1);
    const { times } = percentiles(chain, unit(stages + 1, 0), mask(stages + 1, stages), [0.5]);
    // Median of a gamma distribution with shape a: a − 1/3 + 8/(405 a) + O(a⁻²) (Choi, Proc. AMS 121 (1994) 245–251, from memory).
    expectNear(times[0], stages - 1 / 3 + 8 / (405 * stages), 1e-10);
  });

  it("gives up a walk that would take minutes", () => {
    const ring = Generator.fromArrows(4, [[0, 1, 1e9], [1, 2, 1e9], [2, 0, 1e9], [0, 3, 1e-9]]);
    const values = { met: unit(4, 3), yet: Float64Array.of(1, 1, 1, 0), flow: Float64Array.of(1e-9, 0, 0, 0) };
    const ask = (largestWalk: number, level: number): number[] | null =>
      finish(passageQuantiles(ring, unit(4, 0), values, [{ value: "met", level }], { method: "row", largestWalk }));
    expect(ask(1e6, 0.5)).toBeNull();
    expect(ask(1e6, 1e-20)).toHaveLength(1);
    expect(LARGEST_WALK).toBe(1e11);
  });
});
