import { rateOrZero, wholeNumber, within } from "./argument";
import { Generator, type Arrow } from "./generator";
import type { Built } from "./named";
import { Problem } from "./problem";

/** What `repairGroup` may be told beyond units, rates and crews. */
export interface RepairGroupOptions {
  /** Units that work at a time, the others stand by; all when omitted. */
  readonly running?: number;
  /** Rate at which each unit that stands by fails; 0 when omitted. */
  readonly standbyFailureRate?: number;
  /** Share b of the failure rate that is one event for the whole group, 0 to 1; 0 when omitted. */
  readonly commonCause?: number;
}

/**
 * A group of equal units that fail and are repaired: how many are down?
 *
 * With d down, r = min(running, units − d) run and s = units − d − r stand by: one more down at r(1 − b)λ + sλ_s; all down at
 * bλ while r > 0; one less down at min(d, crews)·μ.
 *
 * @param units - whole, 1 or more
 * @param failureRate - λ of a running unit
 * @param repairRate - μ of one crew
 * @param crews - units repaired at once; 0 allowed
 * @returns units + 1 states, "0 down" …
 * @throws `notWholeNumber`, `notRate`, `notWithin`, `runningAboveUnits` {running, units}
 *
 * *Method*: the machine repair model with standbys (Palm 1947, common practice) and the single-event form of the
 * beta-factor common cause (Fleming 1975, from memory). *Accuracy*: published figures in `test/reference/checks-chain.test.ts`.
 *
 * @example repairGroup(2, 0.01, 0.5, 1).generator.rateOf(0, 1) // 0.02
 */
export function repairGroup(
  units: number, failureRate: number, repairRate: number, crews: number, options: RepairGroupOptions = {},
): Built {
  const { running = units, standbyFailureRate = 0, commonCause = 0 } = options;
  wholeNumber("units", units, 1);
  rateOrZero("failureRate", failureRate);
  rateOrZero("repairRate", repairRate);
  wholeNumber("crews", crews, 0);
  wholeNumber("running", running, 1);
  if (running > units) throw new Problem("runningAboveUnits", { running, units });
  rateOrZero("standbyFailureRate", standbyFailureRate);
  within("commonCause", commonCause, 0, 1);
  const arrows: Arrow[] = [];
  for (let d = 0; d < units; d++) {
    const run = Math.min(running, units - d);
    const standby = units - d - run;
    const alone = run * (1 - commonCause) * failureRate + standby * standbyFailureRate;
    const together = commonCause * failureRate;
    if (d + 1 === units) arrows.push([d, units, alone + together]);
    else arrows.push([d, d + 1, alone], [d, units, together]);
    arrows.push([d + 1, d, Math.min(d + 1, crews) * repairRate]);
  }
  return {
    generator: Generator.fromArrows(units + 1, arrows),
    names: Array.from({ length: units + 1 }, (_, d) => `${d} down`),
  };
}
