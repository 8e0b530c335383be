/**
 * Random numbers that are the same on every machine: integer arithmetic modulo 2³² and the four basic operations only.
 *
 * *Method*: xoshiro128** 1.1 (Blackman & Vigna, ACM Trans. Math. Softw. 47 (2021), no. 36), its four words filled from the seed
 * by the finaliser of MurmurHash3 (Appleby 2011) over seed + k·0x9e3779b9, k = 1 … 4. The logarithm is our own, since
 * `Math.log` may differ in its last bit between machines; the square root is exact by IEEE 754.
 */
export class Random {
  private a: number;
  private b: number;
  private c: number;
  private d: number;

  /** @param seed - a whole number; its value modulo 2⁵³ counts (both halves are mixed in) */
  constructor(seed: number) {
    const high = Math.floor(seed / 2 ** 32) | 0;
    const low = mix((seed | 0) ^ mix(high + 0x85ebca6b));
    this.a = mix(low + 0x9e3779b9);
    this.b = mix(low + 2 * 0x9e3779b9);
    this.c = mix(low + 3 * 0x9e3779b9);
    this.d = mix(low + 4 * 0x9e3779b9) | 1;
  }

  /** 32 random bits, 0 … 2³² − 1. */
  bits(): number {
    const result = Math.imul(rotate(Math.imul(this.b, 5), 7), 9) >>> 0;
    const t = this.b << 9;
    this.c ^= this.a;
    this.d ^= this.b;
    this.b ^= this.c;
    this.a ^= this.d;
    this.c ^= t;
    this.d = rotate(this.d, 11);
    return result;
  }

  /** Uniform on the 2⁵² midpoints (k + ½)/2⁵²: never 0, never 1. */
  uniform(): number {
    const high = this.bits() >>> 6;
    const low = this.bits() >>> 6;
    return (high * 2 ** 26 + low + 0.5) / 2 ** 52;
  }

  /** Exponential with rate 1. */
  exponential(): number {
    return -logarithm(this.uniform());
  }

  /** Standard normal, by the polar method of Marsaglia & Bray, SIAM Rev. 6 (1964) 260–264; the second of each pair is dropped. */
  normal(): number {
    for (;;) {
      const u = 2 * this.uniform() - 1;
      const v = 2 * this.uniform() - 1;
      const s = u * u + v * v;
      if (s > 0 && s < 1) return u * Math.sqrt((-2 * logarithm(s)) / s);
    }
  }

  /**
   * Gamma with the given shape ≥ 1 and scale 1.
   *
   * *Method*: Marsaglia & Tsang, ACM Trans. Math. Softw. 26 (2000) 363–372: d = shape − 1/3, c = 1/√(9d), d·(1 + c·normal)³
   * accepted by its squeeze or its logarithmic test.
   */
  gamma(shape: number): number {
    const d = shape - 1 / 3;
    const c = 1 / Math.sqrt(9 * d);
    for (;;) {
      const x = this.normal();
      const root = 1 + c * x;
      if (root <= 0) continue;
      const v = root * root * root;
      const u = this.uniform();
      const square = x * x;
      if (u < 1 - 0.0331 * square * square) return d * v;
      if (logarithm(u) < 0.5 * square + d * (1 - v + logarithm(v))) return d * v;
    }
  }
}

/**
 * Natural logarithm of a positive normal number, within about one unit in the last place.
 *
 * x = m·2ᵏ with m from √½ to √2; ln m = 2 artanh((m − 1)/(m + 1)) by its power series, whose argument is at most 0.172.
 */
export function logarithm(x: number): number {
  let m = x;
  let k = 0;
  while (m >= 2 ** 32) [m, k] = [m / 2 ** 32, k + 32];
  while (m < 2 ** -32) [m, k] = [m * 2 ** 32, k - 32];
  while (m > Math.SQRT2) [m, k] = [m / 2, k + 1];
  while (m < Math.SQRT1_2) [m, k] = [m * 2, k - 1];
  const f = (m - 1) / (m + 1);
  const square = f * f;
  let series = 0;
  for (let j = 23; j >= 3; j -= 2) series = series * square + 1 / j;
  // ln 2 in two parts, the first with 32 bits, so that k times it is exact
  return k * LN2_HIGH + (k * LN2_LOW + 2 * (f + f * square * series));
}

const LN2_HIGH = 0.693147180369123816490;
const LN2_LOW = 1.90821492927058770002e-10;

function rotate(x: number, by: number): number {
  return (x << by) | (x >>> (32 - by));
}

/** The 32-bit finaliser of MurmurHash3. */
function mix(x: number): number {
  let h = x | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return h ^ (h >>> 16);
}
