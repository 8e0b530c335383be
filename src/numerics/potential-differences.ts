import { eliminateDense } from "./dense-elimination";
import type { LeakSystem, Pausable } from "./leak-system";
import { twofoldDifferences } from "./twofold-differences";

/**
 * x_j − x_i for each arrow i→j of a leak system, where M x = gain − loss (see `DenseElimination.differences`), with the
 * states taken out from the rarest to the most frequent by `weight`.
 *
 * The order is what makes small sensitivities exact: while rare states are taken out, excursions among them are short and
 * collect hardly anything of the opposite sign. In table order the long stays in frequent states come first, and what is left of
 * gain less loss after them is rounding: errors of 1e-7 to 1 on the battery, against 1e-15 to 1e-13 this way.
 *
 * First in pairs of doubles (`twofold-differences.ts`), from `rewards`; in doubles, from `gain` less `loss`, where pairs do not serve.
 *
 * *Method*: our own; the potential by state reduction is in Sonin & Thornton, SIAM J. Matrix Anal. Appl. 23 (2001) 209–224.
 * *Cost*: two dense eliminations, 2n² numbers. *Accuracy*: `test/reference/battery-elasticity.test.ts`.
 */
export function* potentialDifferences(
  system: LeakSystem, weight: Float64Array, rewards: Float64Array, gain: Float64Array, loss?: Float64Array,
): Pausable<{ differences: Float64Array; sound: boolean }> {
  const n = system.size;
  const order = Int32Array.from({ length: n }, (_, i) => i).sort((a, b) => weight[a] - weight[b] || a - b);
  const exact = yield* twofoldDifferences(system, order, rewards);
  if (exact) return { differences: exact, sound: true };
  const place = new Int32Array(n);
  order.forEach((state, k) => (place[state] = k));
  const rowStart = new Int32Array(n + 1);
  const toState = new Int32Array(system.rate.length);
  const rate = new Float64Array(system.rate.length);
  const origin = new Int32Array(system.rate.length);
  let count = 0;
  for (let k = 0; k < n; k++) {
    for (let p = system.rowStart[order[k]]; p < system.rowStart[order[k] + 1]; p++) {
      toState[count] = place[system.toState[p]];
      rate[count] = system.rate[p];
      origin[count++] = p;
    }
    rowStart[k + 1] = count;
  }
  const permuted = (values: Float64Array): Float64Array => Float64Array.from(order, (state) => values[state]);
  const elimination = yield* eliminateDense({ size: n, rowStart, toState, rate, leak: permuted(system.leak) });
  const ahead = elimination.differences(permuted(gain), loss && permuted(loss));
  const differences = new Float64Array(count);
  origin.forEach((p, at) => (differences[p] = ahead[at]));
  return { differences, sound: elimination.sound };
}
