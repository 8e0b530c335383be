import { rateOrZero } from "./argument";
import { Generator, type Arrow } from "./generator";
import type { Built } from "./named";
import { Problem } from "./problem";

/**
 * A chain of levels 0…k that moves one level up or down.
 *
 * @param upRates - k rates, the first from level 0 to 1; 0 = no arrow
 * @param downRates - k rates, the first from level 1 to 0; 0 = no arrow
 * @returns k + 1 states, "level 0" …
 * @throws `unequalLengths` {up, down}; `notRate` {argument, value}
 *
 * @example birthDeath([2, 1], [3, 6]).generator.rateOf(2, 1) // 6
 */
export function birthDeath(upRates: ArrayLike<number>, downRates: ArrayLike<number>): Built {
  const k = upRates.length;
  if (downRates.length !== k) throw new Problem("unequalLengths", { up: k, down: downRates.length });
  const arrows: Arrow[] = [];
  for (let level = 0; level < k; level++) {
    arrows.push([level, level + 1, rateOrZero("upRates", upRates[level])]);
    arrows.push([level + 1, level, rateOrZero("downRates", downRates[level])]);
  }
  return {
    generator: Generator.fromArrows(k + 1, arrows),
    names: Array.from({ length: k + 1 }, (_, level) => `level ${level}`),
  };
}
