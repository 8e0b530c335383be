import type { LeakSystem, Pausable } from "./leak-system";
import { Twofold } from "./twofold";

/** Larger systems take minutes as pairs of doubles; no table that fits a sheet's spill is larger. */
export const LARGEST_TWOFOLD = 320;

/**
 * x_j − x_i for each arrow i→j of a leak system, where M x = rewards, or, without any leak, M x = rewards − π rewards; in pairs
 * of doubles. null where the system is too large or numbers leave the range of pairs: then `potential-differences.ts` serves.
 *
 * Differences of potentials cancel in the chain itself: an elasticity of 1e-8 beside others of order 1 has lost half its digits in
 * doubles whatever the order of operations. So the whole way is carried at 31 digits: the reduction, π, the rewards less
 * their mean (as Σ_j π_j (r_i − r_j)), what an excursion collects, and the differences, formed as `DenseElimination.differences` does.
 *
 * *Method*: state reduction as in `dense-elimination.ts`, row by row, every entry one sum. *Cost*: 2n³/3 pair multiply-adds, some
 * 15 ns each. *Accuracy*: elasticities 1e-15, `test/reference/battery-elasticity.test.ts`.
 */
export function* twofoldDifferences(system: LeakSystem, order: Int32Array, rewards: Float64Array): Pausable<Float64Array | null> {
  const n = system.size;
  if (n > LARGEST_TWOFOLD) return null;
  const place = new Int32Array(n);
  order.forEach((state, k) => (place[state] = k));
  const a = new Float64Array(n * n);
  const aLow = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let p = system.rowStart[i]; p < system.rowStart[i + 1]; p++) a[place[i] * n + place[system.toState[p]]] = system.rate[p];
  const exit = new Float64Array(n);
  const exitLow = new Float64Array(n);
  const leak = new Float64Array(n);
  const leakLow = new Float64Array(n);
  const sum = new Twofold();
  const total = new Twofold();

  // below the diagonal rates to states taken out before, above it probabilities of the next later state; leak as a share
  for (let i = 0; i < n; i++) {
    const row = i * n;
    for (let j = 0; j < n; j++) {
      if (j === i) continue;
      sum.set(a[row + j]);
      for (let k = 0; k < Math.min(i, j); k++)
        if (a[row + k] !== 0 && a[k * n + j] !== 0) sum.addProduct(a[row + k], aLow[row + k], a[k * n + j], aLow[k * n + j]);
      a[row + j] = sum.high;
      aLow[row + j] = sum.low;
    }
    sum.set(system.leak[order[i]]);
    for (let k = 0; k < i; k++) if (leak[k] !== 0) sum.addProduct(a[row + k], aLow[row + k], leak[k], leakLow[k]);
    total.set(sum.high, sum.low);
    for (let j = i + 1; j < n; j++) total.add(a[row + j], aLow[row + j]);
    exit[i] = total.high;
    exitLow[i] = total.low;
    if (total.high > 0) {
      sum.divideBy(total.high, total.low);
      leak[i] = sum.high;
      leakLow[i] = sum.low;
      for (let j = i + 1; j < n; j++) {
        sum.set(a[row + j], aLow[row + j]).divideBy(exit[i], exitLow[i]);
        a[row + j] = sum.high;
        aLow[row + j] = sum.low;
      }
    }
    yield (0.5 * (i + 1)) / n;
  }

  const z = new Float64Array(n);
  const zLow = new Float64Array(n);
  const closed = exit[n - 1] === 0;
  if (closed) {
    const pi = new Float64Array(n);
    const piLow = new Float64Array(n);
    total.set(1);
    pi[n - 1] = 1;
    for (let i = n - 2; i >= 0; i--) {
      sum.set(0);
      for (let k = i + 1; k < n; k++) sum.addProduct(pi[k], piLow[k], a[k * n + i], aLow[k * n + i]);
      sum.divideBy(exit[i], exitLow[i]);
      pi[i] = sum.high;
      piLow[i] = sum.low;
      total.add(sum.high, sum.low);
    }
    for (let i = 0; i < n; i++) {
      sum.set(0);
      for (let j = 0; j < n; j++) {
        const [mine, other] = [rewards[order[i]], rewards[order[j]]];
        if (mine === other) continue;
        sum.addProduct(pi[j], piLow[j], mine, 0);
        sum.addProduct(pi[j], piLow[j], -other, 0);
      }
      sum.divideBy(total.high, total.low);
      z[i] = sum.high;
      zLow[i] = sum.low;
    }
  } else order.forEach((state, i) => (z[i] = rewards[state]));

  for (let i = 0; i < n; i++) {
    sum.set(z[i], zLow[i]);
    for (let k = 0; k < i; k++) sum.addProduct(a[i * n + k], aLow[i * n + k], z[k], zLow[k]);
    if (i === n - 1 && closed) sum.set(0);
    else sum.divideBy(exit[i], exitLow[i]);
    z[i] = sum.high;
    zLow[i] = sum.low;
  }
  const x = z.slice();
  const xLow = zLow.slice();
  if (!closed)
    for (let i = n - 2; i >= 0; i--) {
      sum.set(x[i], xLow[i]);
      for (let j = i + 1; j < n; j++) sum.addProduct(a[i * n + j], aLow[i * n + j], x[j], xLow[j]);
      x[i] = sum.high;
      xLow[i] = sum.low;
    }

  const ahead = new Float64Array(n * n); // [k][j] = x_k − x_j
  const aheadLow = new Float64Array(n * n);
  for (let k = n - 2; k >= 0; k--) {
    const row = k * n;
    for (let j = k + 1; j < n; j++) {
      sum.set(z[k], zLow[k]);
      if (leak[k] !== 0) sum.addProduct(-leak[k], -leakLow[k], x[j], xLow[j]);
      for (let l = k + 1; l < n; l++)
        if (a[row + l] !== 0 && l !== j) sum.addProduct(a[row + l], aLow[row + l], ahead[l * n + j], aheadLow[l * n + j]);
      ahead[row + j] = sum.high;
      aheadLow[row + j] = sum.low;
      ahead[j * n + k] = -sum.high;
      aheadLow[j * n + k] = -sum.low;
    }
    yield 1 - (0.5 * k) / n;
  }
  const differences = new Float64Array(system.rate.length);
  for (let i = 0; i < n; i++)
    for (let p = system.rowStart[i]; p < system.rowStart[i + 1]; p++) {
      differences[p] = ahead[place[system.toState[p]] * n + place[i]];
      if (!Number.isFinite(differences[p])) return null;
    }
  return differences;
}
