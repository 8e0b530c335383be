/**
 * Exact tails of the Poisson distribution and their inverses, to about 1e-15 relative: sums of positive terms from the
 * boundary outward, no 1 − F.
 */

/** ln k! − (k + ½) ln k + k − ½ ln 2π for k = 0 … 15 (0 stands in for k = 0), from mpmath at 40 digits. */
const STIRLING_ERROR = [
  0, 0.0810614667953272582, 0.0413406959554092941, 0.0276779256849983391,
  0.0207906721037650931, 0.0166446911898211922, 0.013876128823070748, 0.0118967099458917701,
  0.0104112652619720965, 0.00925546218271273292, 0.00833056343336287126, 0.00757367548795184079,
  0.00694284010720952987, 0.00640899418800420707, 0.00595137011275884774, 0.00555473355196280137,
];

/**
 * ln k! − ln(√(2πk) kᵏ e⁻ᵏ).
 *
 * *Method*: Loader, Fast and accurate computation of binomial probabilities (2000), § 2; series 1/12k − 1/360k³ + … above 15.
 */
export function stirlingError(k: number): number {
  if (k < STIRLING_ERROR.length) return STIRLING_ERROR[k];
  const s = 1 / (k * k);
  return (1 / 12 - s * (1 / 360 - s * (1 / 1260 - s * (1 / 1680 - s * (1 / 1188 - (s * 691) / 360360))))) / k;
}

/** k · D(x/k) with D(r) = r − 1 − ln r, without the cancellation near r = 1 (Loader 2000, § 3). */
function deviance(k: number, x: number): number {
  const v = (x - k) / (x + k);
  if (Math.abs(v) < 0.1) {
    // k ln(k/x) + x − k = (x − k)v − 2k Σ_{j≥1} v^(2j+1)/(2j+1)
    let power = v;
    let sum = (x - k) * v;
    for (let j = 1; j < 40; j++) {
      power *= v * v;
      const next = sum - (2 * k * power) / (2 * j + 1);
      if (next === sum) break;
      sum = next;
    }
    return sum;
  }
  return k * Math.log(k / x) + x - k;
}

/** P(N = k) for N Poisson with mean x > 0. */
export function poissonMass(k: number, x: number): number {
  if (k === 0) return Math.exp(-x);
  return Math.exp(-stirlingError(k) - deviance(k, x)) / Math.sqrt(2 * Math.PI * k);
}

/** P(N ≥ k), for x < k + 1. */
export function poissonUpper(k: number, x: number): number {
  let term = 1;
  let sum = 1;
  for (let j = k + 1; term > sum * 1e-17; j++) {
    term *= x / j;
    sum += term;
  }
  return poissonMass(k, x) * sum;
}

/** P(N ≤ k), for x > k. */
export function poissonLower(k: number, x: number): number {
  let term = 1;
  let sum = 1;
  for (let j = k; j > 0 && term > sum * 1e-17; j--) {
    term *= j / x;
    sum += term;
  }
  return poissonMass(k, x) * sum;
}

/**
 * The mean x at which P(N ≥ k) = probability (`side` "upper", k ≥ 1), or P(N ≤ k) = probability ("lower"); half the chi-square
 * point with 2k or 2k + 2 degrees of freedom. For probability ≤ ½.
 *
 * *Method*: Newton on ln x and the log of the tail from the cube-root start of Wilson & Hilferty 1931; the tail is log-concave
 * in ln x, so the steps settle from one side. *Accuracy*: 1e-14 against mpmath, `test/unit/chain/rate-interval.test.ts`.
 */
export function poissonMeanAt(side: "upper" | "lower", k: number, probability: number): number {
  if (side === "lower" && k === 0) return -Math.log(probability);
  const shape = side === "upper" ? k : k + 1;
  const z = normalPoint(probability) * (side === "upper" ? 1 : -1);
  let x = shape * Math.max(1 - 1 / (9 * shape) + z / (3 * Math.sqrt(shape)), 0.01) ** 3;
  for (let round = 0; round < 100; round++) {
    const tail = side === "upper" ? poissonUpper(k, x) : poissonLower(k, x);
    const slope = (x * poissonMass(shape - 1, x)) / tail;
    const step = (Math.log(probability) - Math.log(tail)) / (side === "upper" ? slope : -slope);
    const bounded = Math.max(-2, Math.min(2, step));
    x *= Math.exp(bounded);
    if (Math.abs(step) < 2e-15) break;
  }
  return x;
}

/** A standard normal point to three digits, as a start only (Abramowitz & Stegun 26.2.23); for p ≤ ½, ≤ 0. */
function normalPoint(p: number): number {
  const t = Math.sqrt(-2 * Math.log(p));
  return -(t - (2.515517 + 0.802853 * t + 0.010328 * t * t) / (1 + 1.432788 * t + 0.189269 * t * t + 0.001308 * t ** 3));
}
