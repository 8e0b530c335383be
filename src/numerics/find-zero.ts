/**
 * Where a continuous function changes sign between a and b, to the last bits of the argument.
 *
 * *Method*: Brent, Algorithms for Minimization without Derivatives (1973), ch. 4: bisection guarded by inverse quadratic
 * interpolation. `f(a)` and `f(b)` must not have the same sign.
 */
export function findZero(f: (x: number) => number, a: number, b: number, fa = f(a), fb = f(b)): number {
  let c = a;
  let fc = fa;
  let step = b - a;
  let before = step;
  for (let round = 0; round < 200; round++) {
    if (fb > 0 === fc > 0) {
      c = a;
      fc = fa;
      step = before = b - a;
    }
    if (Math.abs(fc) < Math.abs(fb)) [a, b, c, fa, fb, fc] = [b, c, b, fb, fc, fb];
    const tolerance = 2 * Number.EPSILON * Math.abs(b) + Number.MIN_VALUE;
    const half = (c - b) / 2;
    if (Math.abs(half) <= tolerance || fb === 0) return b;
    if (Math.abs(before) >= tolerance && Math.abs(fa) > Math.abs(fb)) {
      const s = fb / fa;
      let p: number;
      let q: number;
      if (a === c) {
        p = 2 * half * s;
        q = 1 - s;
      } else {
        const r = fa / fc;
        const u = fb / fc;
        p = s * (2 * half * r * (r - u) - (b - a) * (u - 1));
        q = (r - 1) * (u - 1) * (s - 1);
      }
      if (p > 0) q = -q;
      else p = -p;
      if (2 * p < Math.min(3 * half * q - Math.abs(tolerance * q), Math.abs(before * q))) {
        before = step;
        step = p / q;
      } else step = before = half;
    } else step = before = half;
    a = b;
    fa = fb;
    b += Math.abs(step) > tolerance ? step : half > 0 ? tolerance : -tolerance;
    fb = f(b);
  }
  return b;
}
