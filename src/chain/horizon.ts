import { LARGEST_MATRIX, LARGEST_WALK } from "../numerics/method-choice";
import type { Generator } from "./generator";
import { Problem } from "./problem";

/** Largest Λt that is computed: 60 squarings. Beyond it the rounding of the time itself exceeds every stay. */
export const LONGEST_HORIZON = 1e18;

/**
 * Refuses times that no answer can be computed for.
 *
 * @throws `timeNegative` {time} · `timeNotFinite` {time} · `horizonTooLong` {time, rate, jumps, limit} when time × largest
 * exit rate exceeds `LONGEST_HORIZON` · `tooMuchWork` {states} where a list too large for matrices would be walked for minutes
 */
export function checkTimes(generator: Generator, times: ArrayLike<number>): void {
  const rate = generator.largestExit();
  for (let m = 0; m < times.length; m++) {
    const time = times[m];
    if (!Number.isFinite(time)) throw new Problem("timeNotFinite", { time });
    if (time < 0) throw new Problem("timeNegative", { time });
    if (time * rate > LONGEST_HORIZON)
      throw new Problem("horizonTooLong", { time, rate, jumps: time * rate, limit: LONGEST_HORIZON });
    if (generator.size > LARGEST_MATRIX && time * rate * (generator.arrowCount + generator.size) > LARGEST_WALK)
      throw new Problem("tooMuchWork", { states: generator.size });
  }
}

/** @throws `tooManyStates` {states} where a question needs a full matrix of more states than memory holds */
export function checkMatrix(generator: Generator): void {
  if (generator.size > LARGEST_MATRIX) throw new Problem("tooManyStates", { states: generator.size });
}
