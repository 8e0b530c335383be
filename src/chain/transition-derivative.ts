import { denseKernel } from "../numerics/method-choice";
import { denseOf, rowsAt } from "../numerics/rows";
import { TransitionDerivative } from "../numerics/transition-derivative";
import type { StateSet } from "./classes";
import type { Generator } from "./generator";
import { checkMatrix, checkTimes } from "./horizon";
import { Problem } from "./problem";
import { finish, type Steps } from "./steps";

/**
 * By how many percent does the share in these states at that time change for one percent more of each rate?
 *
 * e_ij = (q_ij / s) · ds/dq_ij, s = Σ_{k ∈ up} p_k(time)
 *
 * @param generator - the chain, n states
 * @param up - the states whose share is asked
 * @param start - n probabilities that sum to 1
 * @param time - finite, 0 or more, in the rates' time unit
 * @returns n × n, row-major, rows from, columns to; 0 where there is no arrow
 * @throws `shareIsZero` (no answer)
 * @throws `timeNegative`, `timeNotFinite`, `horizonTooLong`, `tooManyStates` above 1,000 states
 *
 * *Method*: one run in dual numbers an arrow, Al-Mohy & Higham 2009 with the derivative of the row repair (ours), see
 * `numerics/transition-derivative.ts`. *Cost*: arrows · 2 products a squaring of P(t). *Accuracy*: absolute error at most
 * 2e-14 (1 + |ln s|)(1 + |e|), `test/reference/battery-time.test.ts`.
 *
 * @example shareElasticityAt(Generator.fromArrows(2, [[0, 1, 2]]), Uint8Array.of(1, 0), Float64Array.of(1, 0), 3)[1] // -6
 */
export function shareElasticityAt(
  generator: Generator,
  up: StateSet,
  start: Float64Array,
  time: number,
): Float64Array {
  return finish(shareElasticityAtSteps(generator, up, start, time));
}

export function* shareElasticityAtSteps(
  generator: Generator,
  up: StateSet,
  start: Float64Array,
  time: number,
): Steps<Float64Array> {
  checkMatrix(generator);
  checkTimes(generator, [time]);
  const n = generator.size;
  const elasticities = new Float64Array(n * n);
  const [row] = yield* rowsAt(generator, start, [time]);
  const share = row.reduce((sum, p, j) => sum + (up[j] ? p : 0), 0);
  if (share === 0) throw new Problem("shareIsZero", {}, "noAnswer");
  if (generator.largestExit() * time === 0) return elasticities;
  const derivative = yield* TransitionDerivative.open(denseOf(generator), time, denseKernel());
  try {
    let done = 0;
    for (const [from, to, rate] of generator.arrows()) {
      const d = yield* derivative.along(from, to);
      let change = 0;
      for (let i = 0; i < n; i++) {
        if (start[i] === 0) continue;
        let inUp = 0;
        for (let j = 0; j < n; j++) if (up[j]) inUp += d[i * n + j];
        change += start[i] * inUp;
      }
      elasticities[from * n + to] = (rate / share) * change;
      yield ++done / generator.arrowCount;
    }
    return elasticities;
  } finally {
    derivative.close();
  }
}
