import { rateOrZero, wholeNumber } from "./argument";
import { birthDeath } from "./birth-death";
import type { Built } from "./named";
import { Problem } from "./problem";

/**
 * A service desk with a limited number of places: M/M/c/K in Kendall's notation.
 *
 * From j present: an arrival at `arrivalRate` while j < places (else it is lost), an end of service at min(j, servers) ·
 * `serviceRate`.
 *
 * @param arrivalRate - arrivals per time unit
 * @param serviceRate - services one server ends per time unit while busy
 * @param servers - whole, 1 or more
 * @param places - whole, those in service counted
 * @returns places + 1 states, "0 present" …
 * @throws `placesBelowServers` {places, servers}; `notWholeNumber`, `notRate`
 *
 * @example stationaryShares(queue(2, 1, 1, 1).generator) // [0.3333333333333333, 0.6666666666666666]
 */
export function queue(arrivalRate: number, serviceRate: number, servers: number, places: number): Built {
  rateOrZero("arrivalRate", arrivalRate);
  rateOrZero("serviceRate", serviceRate);
  wholeNumber("servers", servers, 1);
  wholeNumber("places", places, 1);
  if (places < servers) throw new Problem("placesBelowServers", { places, servers });
  const arrivals = new Float64Array(places).fill(arrivalRate);
  const services = arrivals.map((_, j) => Math.min(j + 1, servers) * serviceRate);
  return {
    generator: birthDeath(arrivals, services).generator,
    names: Array.from({ length: places + 1 }, (_, j) => `${j} present`),
  };
}
