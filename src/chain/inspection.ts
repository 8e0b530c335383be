import { denseKernel } from "../numerics/method-choice";
import { load, multiplySteps, unpadded } from "../numerics/matrix-kernel";
import { communicatingClasses } from "./classes";
import { Generator, SMALLEST_RATE } from "./generator";
import { checkTimes } from "./horizon";
import { occupanciesSteps } from "./occupancy";
import { Problem } from "./problem";
import { needOneClosedClass, stationarySharesSteps } from "./stationary";
import { finish, within, type Steps } from "./steps";
import { transitionMatrixSteps } from "./transition";

/**
 * What share of the time is spent in each state when it is inspected, and put right, at fixed intervals?
 *
 * a = (1/T) ν ∫₀ᵀ exp(Qs) ds, ν the long-run distribution just after a reset: ν = ν exp(QT) R.
 *
 * @param generator - the chain between inspections, n states
 * @param resets - n × n, row-major: probability of each state left behind (column) for each state found (row); rows sum to 1
 * @param interval - T, finite, above 0, in the rates' time unit
 * @returns n long-run average shares, in state order
 * @throws `intervalNotPositive` {interval}; `severalEnds` {classes} (no answer) when the inspected chain has several
 *   closed classes; `timeNotFinite`, `horizonTooLong`, and those of `stationaryShares`
 *
 * *Method*: elimination (Grassmann, Taksar & Heyman 1985) on the chain seen at inspections, then row occupancy over one
 * interval. *Cost*: P(T), one product, n³/3, one occupancy. *Accuracy*: relative error at most 1e-13,
 * `test/unit/chain/inspection.test.ts`.
 *
 * @example inspectionShares(Generator.fromArrows(2, [[0, 1, 0.1]]), Float64Array.of(1, 0, 1, 0), 5)[0] // -Math.expm1(-0.5) / 0.5
 */
export function inspectionShares(generator: Generator, resets: Float64Array, interval: number): Float64Array {
  return finish(inspectionSharesSteps(generator, resets, interval));
}

export function* inspectionSharesSteps(generator: Generator, resets: Float64Array, interval: number): Steps<Float64Array> {
  if (!(interval > 0)) throw new Problem("intervalNotPositive", { interval });
  checkTimes(generator, [interval]);
  const n = generator.size;
  const transition = yield* within(transitionMatrixSteps(generator, interval), 0, 0.5);
  const block = denseKernel().open(n, 3);
  let seen: Float64Array;
  try {
    load(block, 0, transition);
    load(block, 1, resets);
    yield* multiplySteps(block, 2, 0, 1, 0.5);
    seen = unpadded(block, 2);
  } finally {
    block.close();
  }
  const inspected = fromOneStep(n, seen);
  needOneClosedClass(communicatingClasses(inspected), "none");
  const after = yield* within(stationarySharesSteps(inspected), 0.5, 0.7);
  const [spent] = yield* within(occupanciesSteps(generator, after, [interval]), 0.7, 1);
  return spent.map((time) => time / interval);
}

/**
 * A chain with the same long-run distribution as the one-step matrix. Only proportions count in its equations, so all
 * entries are scaled up by 2^460: a probability of 1e-280 then is a rate that `Generator` takes.
 */
function fromOneStep(n: number, matrix: Float64Array): Generator {
  const rates = matrix.map((p) => p * 2 ** 460);
  return Generator.fromDense(n, rates.map((rate) => (rate < SMALLEST_RATE ? 0 : rate)));
}
