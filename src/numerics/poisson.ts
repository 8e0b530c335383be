/** Weights of the numbers of jumps `first`, `first + 1`, …; outside they are below 1e-300 of the largest and left out. */
export interface JumpWeights {
  readonly first: number;
  readonly weights: Float64Array;
}

/** Relative size at which the Poisson weights are cut: no entry above 1e-280 can miss what lies beyond. */
const CUT = 1e-300;

/**
 * Pr(K = k) for K Poisson with the given mean, from the mode outward by w(k±1) = w(k)·mean/(k+1) or ·k/mean, then divided
 * by their sum, smallest first.
 *
 * No factorial and no logarithm is taken, so nothing overflows or cancels; the relative error of a weight grows with
 * its distance from the mode only. Fox & Glynn (CACM 31 (1988) 440–445) start the same way but cut both tails by total
 * mass; entries that only the tail feeds would be lost there (4e-6 relative measured on small entries).
 */
export function poissonWeights(mean: number): JumpWeights {
  if (mean === 0) return { first: 0, weights: Float64Array.of(1) };
  const mode = Math.floor(mean);
  const left: number[] = [];
  for (let k = mode, w = 1; k > 0 && w > CUT; k--) left.push((w *= k / mean));
  const right: number[] = [];
  for (let k = mode + 1, w = 1; w > CUT; k++) right.push((w *= mean / k));
  const weights = new Float64Array(left.length + 1 + right.length);
  weights.set(left.reverse());
  weights[left.length] = 1;
  weights.set(right, left.length + 1);
  const total = sumFromEnds(weights, left.length);
  for (let k = 0; k < weights.length; k++) weights[k] /= total;
  return { first: mode - left.length, weights };
}

/**
 * Weights of the occupancy integral over a time in which `mean` jumps are expected, Λ = mean/time:
 * ∫₀ᵗ Pr(K(s) = k) ds = Pr(K(t) > k)/Λ = Σ_(j ≥ k) w(j) t/(j + 1), k = 0, 1, …
 * Summed from the far end, so each keeps its relative accuracy; in the last form also where Pr(K > k) is below the double range.
 */
export function occupancyWeights(mean: number, time: number): JumpWeights {
  const { first, weights } = poissonWeights(mean);
  const tails = new Float64Array(first + weights.length);
  let tail = 0;
  for (let k = tails.length - 1; k >= 0; k--) {
    if (k >= first) tail += (weights[k - first] * time) / (k + 1);
    tails[k] = tail;
  }
  return { first: 0, weights: tails };
}

function sumFromEnds(values: Float64Array, peak: number): number {
  let left = 0;
  for (let k = 0; k < peak; k++) left += values[k];
  let right = 0;
  for (let k = values.length - 1; k > peak; k--) right += values[k];
  return left + right + values[peak];
}
