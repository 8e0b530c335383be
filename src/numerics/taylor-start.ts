import { multiplySteps, type MatrixBlock } from "./matrix-kernel";

/** Slots that `taylorStart` needs: five powers and two accumulators. */
export const TAYLOR_SLOTS = 7;

/**
 * P(h) = e^(-x) T_m(N) by Paterson and Stockmeyer's scheme (SIAM J. Comput. 2 (1973) 60–66): powers up to p, then
 * Horner's rule in N^p. N in slot 0, result in the slot returned. All terms are non-negative.
 */
export function* taylorStart(
  block: MatrixBlock,
  degree: number,
  x: number,
): globalThis.Generator<number, number, void> {
  const powers = degree <= 4 ? 2 : degree <= 9 ? 3 : degree <= 16 ? 4 : 5;
  // N^k stands in slot k − 1, for k up to `powers`; two more slots take turns as Horner's accumulator.
  for (let k = 2; k <= powers; k++) yield* multiplySteps(block, k - 1, k - 2, 0, 0);
  const c = taylorCoefficients(degree, x);
  let from = degree - powers;
  const group = (start: number, count: number): { c: number[]; slots: number[] } => {
    const coefficients: number[] = [];
    const slots: number[] = [];
    for (let k = 1; k <= count; k++) {
      coefficients.push(c[start + k]);
      slots.push(k - 1);
    }
    return { c: coefficients, slots };
  };
  let held = powers;
  let spare = powers + 1;
  const top = group(from, powers);
  block.combine(held, c[from], top.c, top.slots);
  while (from > 0) {
    from -= powers;
    yield* multiplySteps(block, spare, held, powers - 1, 0);
    const next = group(from, powers - 1);
    block.combine(spare, c[from], [1, ...next.c], [spare, ...next.slots]);
    [held, spare] = [spare, held];
  }
  return held;
}

/** e^(-x)/k! for k = 0 .. m. */
export function taylorCoefficients(degree: number, x: number): Float64Array {
  const c = new Float64Array(degree + 1);
  c[0] = Math.exp(-x);
  for (let k = 1; k <= degree; k++) c[k] = c[k - 1] / k;
  return c;
}
