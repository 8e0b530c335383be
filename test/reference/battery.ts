import { readFileSync } from "node:fs";
import { Generator, type Arrow } from "../../src/chain/generator";

/**
 * The reference battery: 87 chains whose values were computed with mpmath at 110 and 220 digits by two algorithms each.
 * `battery.json` says in `fields` what each value is. Values are strings of 20 digits; "inf" is infinite.
 */
export interface BatteryCase {
  readonly id: string;
  readonly n: number;
  readonly rates: readonly Arrow[];
  readonly t: number;
  readonly start: readonly number[];
  readonly target: readonly number[];
  readonly count_into: readonly number[];
  readonly discount: number;
  readonly deriv: readonly [number, number];
  readonly levels: readonly number[];
  // eslint-disable-next-line @typescript-eslint/no-explicit-any -- the shape differs from value to value
  readonly expect: Readonly<Record<string, any>>;
}

const file = JSON.parse(readFileSync(new URL("./battery.json", import.meta.url), "utf8")) as { cases: BatteryCase[] };

export const battery: readonly BatteryCase[] = file.cases;

export const generatorOf = (c: BatteryCase): Generator => Generator.fromArrows(c.n, c.rates);

export const startOf = (c: BatteryCase): Float64Array => Float64Array.from(c.start);

/** Mask of n states. */
export function maskOf(n: number, states: readonly number[]): Uint8Array {
  const mask = new Uint8Array(n);
  for (const state of states) mask[state] = 1;
  return mask;
}

/** A reference value; "inf" is infinite, values outside the double range read as 0. */
export const referenceValue = (text: string): number => (text === "inf" ? Infinity : Number(text));

/** |found − expected| / |expected|; 0 when equal, infinite when only one of them is 0, infinite or not a number. */
export function relativeError(found: number, expected: number): number {
  if (Object.is(found, expected) || found === expected) return 0;
  const error = Math.abs(found - expected) / Math.abs(expected);
  return Number.isFinite(error) ? error : Infinity;
}

/** Collects the largest relative error of a quantity and where it was met. */
export class Worst {
  error = 0;
  at = "";
  compared = 0;

  note(found: number, expected: number, at: string, scale = 1): void {
    const error = relativeError(found, expected) / scale;
    this.compared++;
    if (!(error <= this.error)) {
      this.error = error;
      this.at = at;
    }
  }

  /** The same for a value whose size says nothing about it: |found − expected| / scale. Returns this one's error. */
  absolute(found: number, expected: number, at: string, scale: number): number {
    const error = Math.abs(found - expected) / scale;
    this.compared++;
    if (!(error <= this.error)) {
      this.error = error;
      this.at = at;
    }
    return error;
  }

  toString(): string {
    return `${this.error.toExponential(1)} (${this.at || "exact"}; ${this.compared} values)`;
  }
}
