import { SCHEMES } from "./taylor-scheme";

/**
 * How far to expand and how often to square: the cheapest (m, s) for which the truncated series is exact to rounding in
 * every entry, the smallest included.
 *
 * P(t) = (e^(-x) T_m(N))^(2^s), N = (Q + ΛI)h, h = t/2^s, x = Λh, T_m an evaluation that agrees with the exponential series up to order m.
 */
export interface TaylorPlan {
  readonly order: number;
  readonly squarings: number;
}

/** Truncation is kept below this many bits, a quarter of the rounding error of one operation. */
const TRUNCATION_BITS = 55;

/**
 * @param size number of states
 * @param jumps Λt, the expected number of jumps of the uniformized chain
 * @param spread Λ ÷ smallest rate where every rate off the diagonal is positive, else Infinity
 *
 * Two limits hold together. (a) x^m/(m+1)! ≤ 2^-55: the first omitted term against the diagonal (less what a scheme has of it).
 * (b) for entries reached by k jumps: of the ways to place k jumps into 2^s steps, those with more than m in one step are
 * the omitted part, at most C(k, m+1)/2^(sm) of the whole. A path has at most n − 1 jumps without loops and r in loops,
 * whose weight against the loop-free path is at most X^r/r!, X = Λt. Where X is beyond 4n, (a) asks for more squarings
 * than (b) and X = 4n serves. The graph's distance must not stand for n − 1: a slow direct arrow beside a fast detour gave
 * errors of 1e-9. Where every pair has an arrow, the milder x^m/(m+1)! · Λ/q_min ≤ 2^-55 replaces (b): nothing is
 * smaller than its own arrow's term.
 */
export function planTaylor(size: number, jumps: number, spread: number): TaylorPlan {
  const jumpBits = Math.log2(jumps);
  const spreadBits = Math.log2(spread);
  let best: TaylorPlan = { order: 0, squarings: 0 };
  let bestCost = Infinity;
  // Highest order first: of two plans that cost the same, the one with fewer squarings.
  for (let k = SCHEMES.length - 1; k >= 0; k--) {
    const { order, products } = SCHEMES[k];
    const byNorm = Math.max(0, Math.ceil(jumpBits - X_LIMIT_BITS[k]));
    if (products + byNorm >= bestCost) continue;
    const bySpread = Math.ceil(jumpBits - X_LIMIT_BITS[k] + spreadBits / order);
    let squarings = byNorm;
    if (bySpread > byNorm) {
      const byPaths = Math.ceil((TRUNCATION_BITS + pathBits(size, jumps, order)) / order);
      squarings = Math.max(byNorm, Math.min(byPaths, bySpread));
    }
    if (products + squarings < bestCost) {
      bestCost = products + squarings;
      best = { order, squarings };
    }
  }
  return best;
}

/** log2 of the largest C(n − 1 + r, m + 1) · min(1, X^r/r!) over r; −Infinity when no path exceeds m jumps. */
function pathBits(size: number, jumps: number, order: number): number {
  const loops = Math.min(jumps, 4 * size);
  const loopBits = Math.log2(loops);
  let largest = -Infinity;
  // X^r/r! ≥ 1 up to r = X at least, and the binomial only grows: the largest is further on.
  for (let r = Math.floor(loops); ; r++) {
    const weight = r * loopBits - log2Factorial(r);
    const bits = log2Binomial(size - 1 + r, order + 1) + Math.min(0, weight);
    if (bits >= largest) largest = bits;
    else if (weight < 0) return largest;
    if (weight < -1100) return largest;
  }
}

function log2Binomial(k: number, m: number): number {
  return k < m ? -Infinity : log2Factorial(k) - log2Factorial(m) - log2Factorial(k - m);
}

const log2Factorials: number[] = [0];

function log2Factorial(k: number): number {
  for (let j = log2Factorials.length; j <= k; j++) log2Factorials.push(log2Factorials[j - 1] + Math.log2(j));
  return log2Factorials[k];
}

/** log2 of the largest x with omitted · x^m/(m+1)! ≤ 2^-55, for each scheme. */
const X_LIMIT_BITS = SCHEMES.map(({ order, omitted }) => (log2Factorial(order + 1) - TRUNCATION_BITS - Math.log2(omitted)) / order);
