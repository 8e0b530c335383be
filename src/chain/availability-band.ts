import { strictlyBetween, wholeNumber } from "./argument";
import { availabilityAtSteps, longRunAvailabilitySteps } from "./availability";
import type { StateSet } from "./classes";
import { checkExposure } from "./counts";
import { Generator, type Arrow } from "./generator";
import type { Named } from "./named";
import { Problem } from "./problem";
import { Random } from "./random";
import { finish, type Steps } from "./steps";

export interface AvailabilityBand {
  readonly lower: number;
  readonly median: number;
  readonly upper: number;
}

export interface BandOptions {
  /** Distribution at time 0; as in `availability`. */
  readonly start?: Float64Array;
  /** Time of the share; the long run when omitted. */
  readonly time?: number;
  /** Share of the draws inside the band, strictly between 0 and 1; 0.9 when omitted. */
  readonly confidence?: number;
  /** Whole, 1 or more; 2,000 when omitted. */
  readonly draws?: number;
  /** Whole number; 1 when omitted. */
  readonly seed?: number;
}

/**
 * How sure is an availability whose rates were estimated from counts?
 *
 * The share in `up`, long-run or at a time, when each rate is gamma distributed with shape count + ½ and rate = time observed
 * in the from-state; its quantiles at (1 − c)/2, ½ and (1 + c)/2 over the draws.
 *
 * @param counts - jumps observed, as a chain whose "rates" are the counts; arrows without a count stay absent
 * @param timeInState - n observed times
 * @param up - the states that count as up
 * @param options - see `BandOptions`
 * @returns lower, median, upper
 * @throws as `fromCounts` and `availability`; `countNotWhole` {from, to, count}; `notBetween`, `notWholeNumber`
 *
 * *Method*: Bayes with the Jeffreys prior of a Poisson rate (Jeffreys 1946 [from memory]); gamma draws by Marsaglia & Tsang 2000, in the
 * order of the arrows by row, with the generator of `random.ts`; linear quantiles (type 7 of Hyndman & Fan, Amer. Statist. 50
 * (1996) 361–365). *Cost*: one availability a draw. *Accuracy*: a two-state case against its beta-prime quantiles,
 * `test/unit/chain/availability-band.test.ts`.
 *
 * @example availabilityBand({ generator: Generator.fromArrows(2, [[0, 1, 4], [1, 0, 4]]), names: null }, [990, 10], Uint8Array.of(1, 0)).median
 * // 0.9896168914156549
 */
export function availabilityBand(
  counts: Named, timeInState: ArrayLike<number>, up: StateSet, options: BandOptions = {},
): AvailabilityBand {
  return finish(availabilityBandSteps(counts, timeInState, up, options));
}

export function* availabilityBandSteps(
  counts: Named, timeInState: ArrayLike<number>, up: StateSet, options: BandOptions = {},
): Steps<AvailabilityBand> {
  const { start, time, confidence = 0.9, draws = 2000, seed = 1 } = options;
  checkExposure(counts, timeInState);
  strictlyBetween("confidence", confidence, 0, 1);
  wholeNumber("draws", draws, 1);
  if (!Number.isSafeInteger(seed)) throw new Problem("notWholeNumber", { argument: "seed", value: seed, least: 0 });
  const arrows = [...counts.generator.arrows()];
  for (const [from, to, count] of arrows)
    if (!Number.isSafeInteger(count)) throw new Problem("countNotWhole", { from, to, count });
  const random = new Random(seed);
  const shares = new Float64Array(draws);
  for (let d = 0; d < draws; d++) {
    const drawn = arrows.map(([from, to, count]): Arrow => [from, to, random.gamma(count + 0.5) / timeInState[from]]);
    const chain = Generator.fromArrows(counts.generator.size, drawn);
    shares[d] = time === undefined
      ? finish(longRunAvailabilitySteps(chain, up, start))
      : finish(availabilityAtSteps(chain, up, start, [time]))[0];
    yield d / draws;
  }
  shares.sort();
  return {
    lower: quantile(shares, (1 - confidence) / 2),
    median: quantile(shares, 0.5),
    upper: quantile(shares, (1 + confidence) / 2),
  };
}

/** Linear interpolation at (m − 1)p between the ordered values (type 7 of Hyndman & Fan 1996). */
export function quantile(ordered: Float64Array, p: number): number {
  const place = (ordered.length - 1) * p;
  const below = Math.floor(place);
  const above = Math.min(below + 1, ordered.length - 1);
  return ordered[below] + (place - below) * (ordered[above] - ordered[below]);
}
