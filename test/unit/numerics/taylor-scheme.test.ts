import { describe, expect, it } from "vitest";
import { SCHEMES, TAYLOR_SLOTS, taylorCoefficients, taylorStart, type TaylorScheme } from "../../../src/numerics/taylor-scheme";
import { load, unpadded } from "../../../src/numerics/matrix-kernel";
import { kernels } from "./kernels";

/** An exact number m · 2^e: what every double is, and every sum and product of doubles. */
type Dyadic = { readonly m: bigint; readonly e: number };

function dyadic(x: number): Dyadic {
  let e = 0;
  for (; !Number.isInteger(x); x *= 2) e--;
  return { m: BigInt(x), e };
}

function plus(a: Dyadic, b: Dyadic): Dyadic {
  const e = Math.min(a.e, b.e);
  return { m: (a.m << BigInt(a.e - e)) + (b.m << BigInt(b.e - e)), e };
}

function times(a: readonly Dyadic[], b: readonly Dyadic[]): Dyadic[] {
  const product = Array.from({ length: a.length + b.length - 1 }, () => dyadic(0));
  a.forEach((x, i) => b.forEach((y, j) => (product[i + j] = plus(product[i + j], { m: x.m * y.m, e: x.e + y.e }))));
  return product;
}

function combine(coefficients: readonly number[], polynomials: readonly (readonly Dyadic[])[]): Dyadic[] {
  const length = Math.max(1, ...coefficients.map((_, i) => polynomials[i].length));
  const sum = Array.from({ length }, () => dyadic(0));
  coefficients.forEach((c, i) => times([dyadic(c)], polynomials[i]).forEach((x, k) => (sum[k] = plus(sum[k], x))));
  return sum;
}

/** The coefficients of the scheme's polynomial, exactly. */
function coefficientsOf({ factors, sum }: TaylorScheme): Dyadic[] {
  const one = [dyadic(1)];
  const powers: Dyadic[][] = [[dyadic(0), dyadic(1)], [dyadic(0), dyadic(0), dyadic(1)]];
  for (const [left, right] of factors) powers.push(times(combine(left, powers), combine(right, [one, ...powers])));
  return combine(sum, [one, ...powers]);
}

/** coefficient · k! − 1 as a number. */
function relativeDifference(coefficient: Dyadic | undefined, k: number): number {
  if (!coefficient) return -1;
  let factorial = 1n;
  for (let j = 2n; j <= BigInt(k); j++) factorial *= j;
  const scale = 1n << BigInt(-coefficient.e);
  return Number(((coefficient.m * factorial - scale) << 80n) / scale) / 2 ** 80;
}

describe.each(SCHEMES.map((s) => [s.order, s] as const))("evaluation scheme of order %i", (order, scheme) => {
  it("has no negative coefficient", () => {
    for (const c of [...scheme.factors.flat(2), ...scheme.sum]) expect(c).toBeGreaterThanOrEqual(0);
  });

  it("multiplies out to 1/k! within a rounding error up to its order; beyond it, to 0 to 2/k!", () => {
    const coefficients = coefficientsOf(scheme);
    // Largest found: 0.63 · 2^-53 (order 8).
    for (let k = 0; k <= order; k++) expect(Math.abs(relativeDifference(coefficients[k], k))).toBeLessThan(2 ** -53);
    for (let k = order + 1; k <= 2 ** scheme.products; k++)
      expect(Math.abs(relativeDifference(coefficients[k], k))).toBeLessThanOrEqual(1);
    expect(Math.abs(relativeDifference(coefficients[order + 1], order + 1))).toBeGreaterThan(1e-3);
    // What is left out, at the largest x that the plan allows; terms beyond the degree are left out whole.
    const x = order === 21 ? 2.07 : 0.5;
    let left = 0;
    for (let k = order + 1, ratio = 1; k < 60; ratio *= x / ++k)
      left += ratio * Math.abs(k < coefficients.length ? relativeDifference(coefficients[k], k) : 1);
    expect(left).toBeLessThanOrEqual(scheme.omitted * (scheme.omitted === 1 ? 1.2 : 1));
  });

  it("is evaluated as written, in as many products as it says", () => {
    for (const kernel of kernels) {
      const block = kernel.open(3, TAYLOR_SLOTS);
      let products = 0;
      const { multiply } = block;
      block.multiply = (...args) => {
        products++;
        multiply.apply(block, args);
      };
      const nilpotent = Float64Array.of(0.25, 2, 0, 0, 0.25, 3, 0, 0, 0.25);
      load(block, 0, nilpotent);
      const steps = taylorStart(block, order, 0.5);
      let step = steps.next();
      while (!step.done) step = steps.next();
      const found = unpadded(block, step.value);
      expect(products).toBe(scheme.products);
      // exp(¼ I + B) e^(−½), B strictly upper: e^(−¼) (I + B + B²/2), up to the truncation.
      const e = Math.exp(-0.25);
      const truncation = 4 * 0.25 ** (order - 1) / [1, 1, 2, 6, 24, 120, 720, 5040, 40320, 362880][Math.min(9, order - 1)];
      [e, 2 * e, 3 * e, 0, e, 3 * e, 0, 0, e].forEach((value, k) =>
        expect(Math.abs(found[k] - value)).toBeLessThanOrEqual(value * (truncation + 1e-15)),
      );
      delete (block as Partial<typeof block>).multiply;
      block.close();
    }
  });
});

describe("Taylor coefficients", () => {
  it("are e^(−x)/k!", () => {
    const c = taylorCoefficients(5, 1);
    [1, 1, 2, 6, 24, 120].forEach((factorial, k) => expect(c[k]).toBeCloseTo(Math.exp(-1) / factorial, 16));
  });
});
