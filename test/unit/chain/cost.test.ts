import { describe, expect, test } from "vitest";
import { availability, intervalAvailability, upDown } from "../../../src/chain/availability";
import { costOver, costRate, costUntil } from "../../../src/chain/cost";
import { Generator } from "../../../src/chain/generator";
import { failureCount, flows, holdingTimes, jumpChain, jumpCounts } from "../../../src/chain/jumps";
import { maskOf, relativeError } from "../../reference/battery";

const [fail, repair] = [0.01, 0.2];
const pair = Generator.fromArrows(2, [[0, 1, fail], [1, 0, repair]]);
const fromUp = Float64Array.of(1, 0);
const up = Uint8Array.of(1, 0);
const close = (found: number, expected: number, tolerance = 1e-13): void =>
  expect(relativeError(found, expected), `${found} for ${expected}`).toBeLessThan(tolerance);

describe("costs", () => {
  const s = fail + repair;
  // time down over [0, h] from up: λ/s (h − (1 − e^(−sh))/s)
  const timeDown = (h: number): number => (fail / s) * (h + Math.expm1(-s * h) / s);

  test("over a horizon: state costs, arrow costs, both", () => {
    close(costOver(pair, fromUp, 24, Float64Array.of(0, 30), null, 0), 30 * timeDown(24));
    const failures = fail * (24 - timeDown(24));
    close(costOver(pair, fromUp, 24, Float64Array.of(0, 0), Float64Array.of(9, 700, 0, 9), 0), 700 * failures);
    close(costOver(pair, fromUp, 24, Float64Array.of(-1, 30), Float64Array.of(0, 700, 0, 0), 0), 30 * timeDown(24) - (24 - timeDown(24)) + 700 * failures);
    expect(costOver(pair, fromUp, 0, Float64Array.of(5, 30), null, 0)).toBe(0);
  });

  test("over a horizon at a discount", () => {
    const r = 0.05;
    // down share at s: λ/s (1 − e^(−s·)), discounted: λ/s ((1 − e^(−rh))/r − (1 − e^(−(r+s)h))/(r + s))
    const expected = (fail / s) * (-Math.expm1(-r * 24) / r + Math.expm1(-(r + s) * 24) / (r + s));
    close(costOver(pair, fromUp, 24, Float64Array.of(0, 1), null, r), expected);
  });

  test("until a target the jump that meets it is paid", () => {
    close(costUntil(pair, fromUp, Float64Array.of(2, 0), maskOf(2, [1]), Float64Array.of(0, 700, 0, 0), 0), 2 / fail + 700);
    close(costUntil(pair, fromUp, Float64Array.of(2, 0), maskOf(2, [1]), Float64Array.of(0, 700, 0, 0), 0.03), (2 + fail * 700) / (fail + 0.03));
    expect(costUntil(pair, Float64Array.of(0, 1), Float64Array.of(2, 5), maskOf(2, [1]), null, 0)).toBe(0);
  });

  test("without end it needs a discount; a chance never to meet the target needs one too", () => {
    expect(() => costUntil(pair, fromUp, Float64Array.of(2, 0), new Uint8Array(2), null, 0)).toThrow("targetNotCertain");
    close(costUntil(pair, fromUp, Float64Array.of(0, 1), new Uint8Array(2), null, 0.05), fail / (0.05 * (0.05 + s)));
    const fork = Generator.fromArrows(3, [[0, 1, 1], [0, 2, 1]]);
    expect(() => costUntil(fork, Float64Array.of(1, 0, 0), Float64Array.of(1, 1, 1), maskOf(3, [1]), null, 0)).toThrow("targetNotCertain");
    // 1 a unit in 0 and in 2 for good, discounted at 0.1
    close(costUntil(fork, Float64Array.of(1, 0, 0), Float64Array.of(1, 1, 1), maskOf(3, [1]), null, 0.1), (1 + 1 / 0.1) / 2.1);
  });

  test("in the long run", () => {
    close(costRate(pair, Float64Array.of(0, 30), Float64Array.of(0, 700, 0, 0)), (fail * 30 + fail * repair * 700) / s);
  });
});

describe("jumps and availability", () => {
  test("counts and flows are time × rate, the diagonal 0", () => {
    const counts = jumpCounts(pair, fromUp, 24);
    close(counts[1], 0.23082432256617167935); // published check H14: λμT/s + λ²/s² (1 − e^(−sT))
    expect([counts[0], counts[3]]).toEqual([0, 0]);
    close(failureCount(pair, up, fromUp, 24), counts[1]);
    close(flows(pair)[1], (fail * repair) / (fail + repair));
  });

  test("next states and mean stays", () => {
    const chain = Generator.fromArrows(3, [[0, 1, 3], [0, 2, 1], [1, 0, 2]]);
    expect([...jumpChain(chain)]).toEqual([0, 0.75, 0.25, 1, 0, 0, 0, 0, 1]);
    expect([...holdingTimes(chain)]).toEqual([0.25, 0.5, Infinity]);
  });

  test("a small unavailability keeps its digits when asked as such", () => {
    const rare = Generator.fromArrows(2, [[0, 1, 1e-12], [1, 0, 1e8]]);
    close(availability(rare, Uint8Array.of(0, 1)), 1e-20, 1e-15);
    close(availability(rare, Uint8Array.of(0, 1), fromUp, [1])[0], 1e-20, 1e-13);
  });

  test("at times, in any order, and over intervals", () => {
    const at = (t: number): number => (repair + fail * Math.exp(-(fail + repair) * t)) / (fail + repair);
    availability(pair, up, fromUp, [5, 0, 24]).forEach((share, k) => close(share, at([5, 0, 24][k])));
    expect(intervalAvailability(pair, up, Float64Array.of(0.25, 0.75), [0])[0]).toBe(0.25);
    close(intervalAvailability(pair, up, fromUp, [24])[0], 0.96176801069238199731); // published check H13
  });

  test("the seven figures, and those that do not exist", () => {
    const figures = upDown(pair, up);
    close(figures.meanUpTime, 1 / fail);
    close(figures.meanDownTime, 1 / repair);
    close(figures.meanTimeToFirstFailure, 1 / fail);
    expect(upDown(pair, up, Float64Array.of(0, 1)).meanTimeToFirstFailure).toBe(0);
    const never = upDown(Generator.fromArrows(2, [[1, 0, 1]]), up);
    expect(never).toEqual({
      availability: 1, unavailability: 0, failureRate: 0, meanUpTime: Infinity, meanDownTime: NaN,
      meanTimeBetweenFailures: Infinity, meanTimeToFirstFailure: Infinity,
    });
    const open = upDown(Generator.fromArrows(3, [[0, 1, 1], [0, 2, 1]]), Uint8Array.of(1, 1, 0));
    expect([open.availability, open.failureRate, open.meanTimeToFirstFailure]).toEqual([NaN, NaN, Infinity]);
    expect(upDown(pair, new Uint8Array(2)).meanTimeToFirstFailure).toBeNaN();
  });
});
