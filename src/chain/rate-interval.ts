import { poissonMeanAt } from "../numerics/poisson-tail";
import { strictlyBetween, wholeNumber } from "./argument";
import { Problem } from "./problem";

export interface RateInterval {
  readonly lower: number;
  readonly estimate: number;
  readonly upper: number;
}

/** The tails are sums of about √k terms: beyond this many events they would hold a cell for seconds. */
const MOST_EVENTS = 1e12;

/**
 * How sure is a rate that was estimated from so many events in so much time?
 *
 * With confidence c, α = 1 − c, k events in exposure T: lower = χ²(α/2; 2k) / 2T, estimate = k/T, upper = χ²(1 − α/2; 2k + 2) / 2T.
 * No event: lower 0 and the one-sided upper bound −ln(α)/T. Watch ended at the last event: 2k degrees on both sides.
 *
 * @param count - events, whole, 0 to 1e12
 * @param exposure - time observed, above 0
 * @param confidence - strictly between 0 and 1
 * @param failureTruncated - whether the watch ended at the last event
 * @returns lower, estimate, upper
 * @throws `notWholeNumber`, `exposureNotPositive` {exposure}, `notBetween`, `notWithin`, `noEventToEndAt`
 *
 * *Method*: Garwood, Biometrika 28 (1936) 437–442; the chi-square points as Poisson means, `numerics/poisson-tail.ts`.
 * *Accuracy*: 1e-14 against mpmath, and the published factors F02, F03, F05, in `test/unit/chain/rate-interval.test.ts`.
 *
 * @example rateInterval(2, 800).upper // 0.007869742027339987
 */
export function rateInterval(count: number, exposure: number, confidence = 0.9, failureTruncated = false): RateInterval {
  if (count > MOST_EVENTS) throw new Problem("notWithin", { argument: "count", value: count, least: 0, most: MOST_EVENTS });
  wholeNumber("count", count, 0);
  if (!(exposure > 0 && exposure < Infinity)) throw new Problem("exposureNotPositive", { exposure });
  strictlyBetween("confidence", confidence, 0, 1);
  const outside = 1 - confidence;
  if (count === 0) {
    if (failureTruncated) throw new Problem("noEventToEndAt");
    return { lower: 0, estimate: 0, upper: -Math.log(outside) / exposure };
  }
  return {
    lower: poissonMeanAt("upper", count, outside / 2) / exposure,
    estimate: count / exposure,
    upper: poissonMeanAt("lower", failureTruncated ? count - 1 : count, outside / 2) / exposure,
  };
}
