/** The positions and rates of the arrows that the elimination left from each state to the states eliminated before it. */
export interface BackwardRates {
  readonly size: number;
  readonly exit: Float64Array;
  /** Calls `use(k, rate)` for every k eliminated before i with a rate from i to k. */
  each(i: number, use: (k: number, rate: number) => void): void;
}

const UNIT = 2 ** 512;

/**
 * Balance x_k · exit_k = Σ_{i>k} x_i · rate_ik from the last state down, where x may pass through values far outside the
 * double range, such as the valley between two hills of a long queue. Each x is kept as mantissa · 2^(512 e) with
 * mantissas in [2⁻²⁵⁶, 2²⁵⁶); terms that are 2⁵¹² apart do not meet in a sum. Returns x divided by its sum.
 */
export function scaledShares(rates: BackwardRates): Float64Array {
  const n = rates.size;
  const mantissa = new Float64Array(n);
  const unit = new Int32Array(n);
  mantissa[n - 1] = 1;
  for (let i = n - 1; i >= 0; i--) {
    if (i < n - 1) settle(mantissa, unit, i, mantissa[i] / rates.exit[i], unit[i]);
    const x = mantissa[i];
    const e = unit[i];
    rates.each(i, (k, rate) => {
      let term = x * rate;
      let termUnit = e;
      if (term === 0) return;
      if (term < 1 / UNIT) [term, termUnit] = [term * UNIT, termUnit - 1];
      else if (term >= UNIT) [term, termUnit] = [term / UNIT, termUnit + 1];
      if (mantissa[k] === 0 || termUnit > unit[k] + 1) settle(mantissa, unit, k, term, termUnit);
      else if (termUnit === unit[k] + 1) settle(mantissa, unit, k, term + mantissa[k] / UNIT, termUnit);
      else if (termUnit === unit[k]) settle(mantissa, unit, k, mantissa[k] + term, termUnit);
      else if (termUnit === unit[k] - 1) settle(mantissa, unit, k, mantissa[k] + term / UNIT, unit[k]);
    });
  }
  let largest = -Infinity;
  for (let i = 0; i < n; i++) if (mantissa[i] > 0 && unit[i] > largest) largest = unit[i];
  let sum = 0;
  for (let i = 0; i < n; i++) {
    mantissa[i] = unit[i] < largest - 3 ? 0 : mantissa[i] * UNIT ** (unit[i] - largest);
    sum += mantissa[i];
  }
  for (let i = 0; i < n; i++) mantissa[i] /= sum;
  return mantissa;
}

function settle(mantissa: Float64Array, unit: Int32Array, at: number, value: number, e: number): void {
  while (value >= 2 ** 256) {
    value /= UNIT;
    e++;
  }
  while (value > 0 && value < 2 ** -256) {
    value *= UNIT;
    e--;
  }
  mantissa[at] = value;
  unit[at] = e;
}
