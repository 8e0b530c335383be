import { afterAll, describe, expect, test } from "vitest";
import { absorptionProbability, absorptionSd, everReached, meanAbsorption, timeBefore } from "../../src/chain/absorption";
import { intervalAvailability } from "../../src/chain/availability";
import { communicatingClasses } from "../../src/chain/classes";
import { discountedTimeBefore } from "../../src/chain/cost";
import type { Generator } from "../../src/chain/generator";
import { failureCount } from "../../src/chain/jumps";
import { stationaryShares } from "../../src/chain/stationary";
import { finish } from "../../src/chain/steps";
import { battery, generatorOf, maskOf, referenceValue, startOf, Worst, type BatteryCase } from "./battery";

/** Below this, products of rates leave the range of normal doubles and digits are lost. */
const FLOOR = 1e-280;
const printed: string[] = [];
afterAll(() => console.log(printed.join("\n")));

/** Compares one quantity with the whole battery, entry by entry, and prints its worst error beside the tolerance. */
function compare(
  quantity: string, tolerance: number,
  compute: (g: Generator, c: BatteryCase) => ArrayLike<number> | null, expected: (c: BatteryCase) => readonly string[] | undefined,
): void {
  test(`${quantity} ≤ ${tolerance}`, () => {
    const worst = new Worst();
    for (const c of battery) {
      const wanted = expected(c);
      if (!wanted) continue;
      const found = compute(generatorOf(c), c);
      if (!found) continue;
      expect(found.length).toBe(wanted.length);
      wanted.forEach((value, i) => {
        const reference = referenceValue(value);
        if (reference === 0 || reference >= FLOOR) worst.note(found[i], reference, `${c.id} [${i}]`);
        else expect(found[i], `${c.id} [${i}]`).toBeLessThan(2 * FLOOR);
      });
    }
    printed.push(`${quantity}: ${worst}, allowed ${tolerance}`);
    expect(worst.compared).toBeGreaterThan(50);
    expect(worst.error, worst.at).toBeLessThanOrEqual(tolerance);
  });
}

const targets = (c: BatteryCase): Uint8Array => maskOf(c.n, c.target);

describe("elimination against the battery", () => {
  test("classes", () => {
    for (const c of battery) {
      const { classes, closed } = communicatingClasses(generatorOf(c));
      const found = classes.filter((_, k) => closed[k]).map((members) => Array.from(members));
      expect(found, c.id).toEqual(c.expect.closed_classes);
      const transient = classes.filter((_, k) => !closed[k]).flatMap((members) => Array.from(members));
      expect(transient.sort((a, b) => a - b), c.id).toEqual(c.expect.transient);
    }
  });

  // measured errors: see the printed lines; the tolerances are those of the specification, some ten times larger
  compare("limiting shares from start", 1e-14, (g, c) => stationaryShares(g, startOf(c)), (c) => c.expect.limit);
  compare("stationary shares within the closed classes", 1e-14, (g, c) =>
    (c.expect.closed_classes as number[][]).flatMap((members) => {
      const start = new Float64Array(c.n);
      start[members[0]] = 1;
      const shares = stationaryShares(g, start);
      return members.map((state) => shares[state]);
    }) as unknown as ArrayLike<number>, (c) => c.expect.stationary.flat());
  compare("probability of ending in each class", 1e-14, (g, c) => {
    const members = c.expect.closed_classes as number[][];
    if (members.some((states) => states.length > 1)) return null;
    return absorptionProbability(g, maskOf(c.n, members.flat())).probability;
  }, (c) => c.expect.absorption.flat());
  compare("probability of ever meeting a target", 1e-14, (g, c) => everReached(g, targets(c)), (c) => c.expect.hit_prob);
  compare("mean time to a target", 1e-14, (g, c) => meanAbsorption(g, targets(c)), (c) => c.expect.hit_mean);
  compare("standard deviation of it", 1e-14, (g, c) => absorptionSd(g, targets(c)), (c) => c.expect.hit_sd);
  compare("discounted time in each state, without end", 1e-14, (g, c) =>
    finish(discountedTimeBefore(g, startOf(c), new Uint8Array(c.n), c.discount)), (c) => c.expect.discounted_inf);
  compare("expected number of jumps into a set", 1e-13, (g, c) =>
    [failureCount(g, maskOf(c.n, c.count_into).map((inside) => 1 - inside), startOf(c), c.t)], (c) => [c.expect.jumps_into_t]);
  compare("interval availability of each state", 1e-13, (g, c) =>
    Array.from({ length: c.n }, (_, j) => intervalAvailability(g, maskOf(c.n, [j]), startOf(c), [c.t])[0] * c.t),
  (c) => (c.t > 0 ? c.expect.occupancy_t : undefined));
  compare("time in each state before a target", 1e-14, (g, c) => timeBefore(g, startOf(c), targets(c)), (c) => c.expect.occupancy_before_hit);
});
