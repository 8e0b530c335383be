import { LARGEST_RATE, SMALLEST_RATE } from "./generator";
import { Problem } from "./problem";

/** A whole number from `least` up. @throws `notWholeNumber` {argument, value, least} */
export function wholeNumber(argument: string, value: number, least: number): number {
  if (!Number.isSafeInteger(value) || value < least) throw new Problem("notWholeNumber", { argument, value, least });
  return value;
}

/** A rate that may be 0 (no arrow). @throws `notRate` {argument, value} */
export function rateOrZero(argument: string, value: number): number {
  if (value === 0 || (value >= SMALLEST_RATE && value <= LARGEST_RATE)) return value;
  throw new Problem("notRate", { argument, value });
}

/** A number strictly between 0 and 1. @throws `notBetween` {argument, value, least, most} */
export function strictlyBetween(argument: string, value: number, least: number, most: number): number {
  if (!(value > least && value < most)) throw new Problem("notBetween", { argument, value, least, most });
  return value;
}

/** A number from `least` to `most`. @throws `notWithin` {argument, value, least, most} */
export function within(argument: string, value: number, least: number, most: number): number {
  if (!(value >= least && value <= most)) throw new Problem("notWithin", { argument, value, least, most });
  return value;
}
