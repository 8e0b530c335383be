/** 2^27 + 1: splits a double into two halves whose products are exact. */
const SPLITTER = 134217729;

/**
 * A sum held as an unevaluated pair of doubles, high + low: about 31 significant digits.
 *
 * *Method*: exact sums and products of two doubles by Knuth and by Dekker (Numer. Math. 18 (1971) 224–242), carried on as pairs.
 * Halves of numbers beyond 1e299 overflow, errors of products below 1e-292 are lost: the pair is then not finite, or no better
 * than a double.
 */
export class Twofold {
  high = 0;
  low = 0;

  set(high: number, low = 0): this {
    this.high = high;
    this.low = low;
    return this;
  }

  add(high: number, low = 0): void {
    const sum = this.high + high;
    const part = sum - this.high;
    const rest = this.high - (sum - part) + (high - part) + (this.low + low);
    this.high = sum + rest;
    this.low = rest - (this.high - sum);
  }

  addProduct(a: number, aLow: number, b: number, bLow: number): void {
    const product = a * b;
    let half = SPLITTER * a;
    const a1 = half - (half - a);
    const a2 = a - a1;
    half = SPLITTER * b;
    const b1 = half - (half - b);
    const b2 = b - b1;
    this.add(product, a1 * b1 - product + a1 * b2 + a2 * b1 + a2 * b2 + (a * bLow + aLow * b));
  }

  divideBy(divisor: number, divisorLow: number): void {
    const quotient = this.high / divisor;
    this.addProduct(-quotient, 0, divisor, divisorLow);
    const rest = this.high / divisor;
    this.high = quotient + rest;
    this.low = rest - (this.high - quotient);
  }
}
