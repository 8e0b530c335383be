import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { distributionsSteps } from "../../../src/chain/distribution";
import { hazardSteps, survivalSteps } from "../../../src/chain/first-passage";
import { Generator, type Arrow } from "../../../src/chain/generator";
import { inspectionSharesSteps } from "../../../src/chain/inspection";
import { discountedOccupancySteps, occupanciesSteps } from "../../../src/chain/occupancy";
import { percentilesSteps } from "../../../src/chain/percentile";
import { phasedOccupanciesSteps } from "../../../src/chain/phased";
import { settlingTimeSteps } from "../../../src/chain/settling";
import type { Steps } from "../../../src/chain/steps";
import { transitionMatrixSteps } from "../../../src/chain/transition";
import { shareElasticityAtSteps } from "../../../src/chain/transition-derivative";
import { WORK_BETWEEN_PAUSES, type MatrixKernel } from "../../../src/numerics/matrix-kernel";
import { denseKernel } from "../../../src/numerics/method-choice";
import { JumpWalk } from "../../../src/numerics/uniformization";
import { mask, unit } from "./closed-forms";

/**
 * No question holds the thread for long: what is counted is work, not time. A multiply-add of a matrix product takes at most half a
 * nanosecond in the slower kernel, an arrow of a walk one and a half: both bounds are some 20 ms.
 */
const MOST_PRODUCTS = 1.1 * WORK_BETWEEN_PAUSES;
const MOST_ARROWS = 1.3e7;

let products = 0;
let arrows = 0;
const kernel = denseKernel() as { -readonly [K in keyof MatrixKernel]: MatrixKernel[K] };
const { open } = kernel;
const { jump } = JumpWalk.prototype;

beforeAll(() => {
  kernel.open = (size, count) => {
    const block = open(size, count);
    const { multiply } = Object.getPrototypeOf(block) as typeof block;
    block.multiply = (...args) => {
      products += (args[4] - args[3]) * size * size;
      multiply.apply(block, args);
    };
    return block;
  };
  JumpWalk.prototype.jump = function (this: JumpWalk) {
    jump.call(this);
    arrows += this.workPerJump;
  };
});
afterAll(() => {
  kernel.open = open;
  JumpWalk.prototype.jump = jump;
});

/** Runs to the end and checks what was done between any two pauses, and that progress stays within 0 to 1. */
function expectPauses<T>(steps: Steps<T>, fewest: number): T {
  let pauses = 0;
  for (;;) {
    products = 0;
    arrows = 0;
    const step = steps.next();
    expect(products).toBeLessThanOrEqual(MOST_PRODUCTS);
    expect(arrows).toBeLessThanOrEqual(MOST_ARROWS);
    if (step.done) {
      expect(pauses).toBeGreaterThanOrEqual(fewest);
      return step.value;
    }
    expect(step.value >= 0 && step.value <= 1).toBe(true);
    pauses++;
  }
}

/** A ring with shortcuts, its rates spread over so many orders of magnitude. */
function ring(n: number, orders = 4): Generator {
  return Generator.fromArrows(n, Array.from({ length: n }, (_, i): Arrow[] => [
    [i, (i + 1) % n, 10 ** (i % (orders + 1))],
    [i, (i + 7) % n, 0.5],
  ]).flat());
}

describe("long questions give way", () => {
  const n = 350;
  const chain = ring(n);
  const start = unit(n, 0);
  const targets = mask(n, n - 1);
  const large = ring(20_000, 0);

  it.each<[string, () => Steps<unknown>, number]>([
    ["transitionMatrix", () => transitionMatrixSteps(chain, 1), 20],
    ["distributions", () => distributionsSteps(chain, start, [1, 2.5, 1000]), 20],
    ["survival", () => survivalSteps(chain, start, targets, [1000]), 20],
    ["hazard", () => hazardSteps(chain, start, targets, [1000]), 20],
    ["percentiles", () => percentilesSteps(chain, start, targets, [0.1, 0.999]), 20],
    ["occupancies", () => occupanciesSteps(chain, start, [1000]), 20],
    ["discountedOccupancy", () => discountedOccupancySteps(chain, start, 1000, 0.1), 20],
    ["phasedOccupancies", () => phasedOccupanciesSteps([ring(150), ring(150)], [100, 100], unit(150, 0)), 10],
    ["settlingTime", () => settlingTimeSteps(ring(100), 0.01), 10],
    ["inspectionShares", () => inspectionSharesSteps(ring(150), Float64Array.from({ length: 150 * 150 }, (_, k) => (k % 150 === 0 ? 1 : 0)), 10), 5],
    ["shareElasticityAt", () => shareElasticityAtSteps(ring(65), mask(65, 64), unit(65, 0), 0.1), 130],
    ["distributions in a long list", () => distributionsSteps(large, unit(20_000, 0), [1500]), 1],
    ["percentiles in a long list", () => percentilesSteps(large, unit(20_000, 0), mask(20_000, 1000), [0.5]), 0],
  ])("%s", (_, ask, fewest) => {
    expectPauses(ask(), fewest);
  });
});
