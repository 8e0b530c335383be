/** Mathematics, distributions and finance: single values, mostly by the function library, entry by entry over tables. */
import * as formulajs from "@formulajs/formulajs";
import type { Evaluation } from "../evaluate";
import { power } from "../operators";
import { Fault, type Value } from "../value";
import { betaDistribution, betaPercentile, studentDistribution, studentPercentile, studentTwoSided } from "./beta";
import { define, defineLifted, fromLibrary, numbersIn, numberFrom, type Definition } from "./define";

type Call = (...values: unknown[]) => unknown;

/** The library keeps "NORM.DIST" as the member DIST of NORM. */
function fromFormulajs(name: string): Call {
  let found: unknown = formulajs;
  for (const part of name.split(".")) found = (found as Record<string, unknown>)[part];
  if (typeof found !== "function") throw new Error(`${name} is not in the function library`);
  return found as Call;
}

/** A library function of numbers (last letters of `takings`: l where a logical value is taken). */
function ofLibrary(name: string, signature: string, description: string, takings = "n"): Definition {
  const call = fromFormulajs(name);
  return defineLifted(name, signature, takings, description, (values) => call(...values));
}

function ofNumber(name: string, description: string, apply: (value: number) => unknown, parameter = "number"): Definition {
  return defineLifted(name, parameter, "n", description, ([value]: readonly number[]) => apply(value!));
}

const refuse = (sentence: string): Fault => new Fault("#NUM!", sentence);

/** Decimal rounding of the shortest text that names the number: 2.675 to two places is 2.68, as on paper. */
function roundBy(round: (value: number) => number): (values: readonly number[]) => number {
  return ([value = 0, digits = 0]) => {
    const places = Math.trunc(digits);
    const size = Math.abs(Number(value.toPrecision(15)));
    const shifted = shift(size, places);
    if (!Number.isFinite(shifted) || shifted >= 2 ** 53) return value;
    return Math.sign(value) * shift(round(shifted), -places);
  };
}

function shift(value: number, places: number): number {
  const [digits = "0", exponent = "0"] = value.toExponential().split("e");
  return Number(`${digits}e${Number(exponent) + places}`);
}

const toMultiple = (round: (value: number) => number) => ([value = 0, step = 1]: readonly number[]): unknown => {
  if (step === 0) return 0;
  if (value > 0 && step < 0) return refuse("A positive number cannot be rounded to a multiple of a negative one.");
  return Number((round(Number((value / step).toPrecision(15))) * step).toPrecision(15));
};

const base: readonly Definition[] = [
  ofNumber("ABS", "The number without its sign.", Math.abs),
  ofNumber("SIGN", "1, 0 or -1 by the sign.", Math.sign),
  ofNumber("SQRT", "The square root.", (value) => (value < 0 ? refuse("A negative number has no square root.") : Math.sqrt(value))),
  ofNumber("EXP", "e to the power of a number.", Math.exp),
  ofNumber("LN", "The natural logarithm.", (value) => (value <= 0 ? refuse("Only numbers above 0 have a logarithm.") : Math.log(value))),
  ofNumber("LOG10", "The logarithm to base 10.", (value) => (value <= 0 ? refuse("Only numbers above 0 have a logarithm.") : Math.log10(value))),
  defineLifted("LOG", "number, [base]", "n", "The logarithm, to base 10 unless another is given.", ([value = 0, base]: readonly number[]) => {
    if (value <= 0 || (base !== undefined && base <= 0)) return refuse("Only numbers above 0 have a logarithm.");
    if (base === 1) return new Fault("#DIV/0!");
    return base === undefined || base === 10 ? Math.log10(value) : base === 2 ? Math.log2(value) : Math.log(value) / Math.log(base);
  }),
  defineLifted("POWER", "number, power", "n", "A number to a power.", ([value = 0, exponent = 0]: readonly number[]) => power(value, exponent)),
  ofNumber("INT", "The next whole number at or below.", Math.floor),
  defineLifted("TRUNC", "number, [digits]", "n", "The number with its digits cut off.", roundBy(Math.floor)),
  defineLifted("ROUND", "number, [digits]", "n", "Rounds to a number of digits.", roundBy(Math.round)),
  defineLifted("ROUNDUP", "number, [digits]", "n", "Rounds away from 0.", roundBy(Math.ceil)),
  defineLifted("ROUNDDOWN", "number, [digits]", "n", "Rounds toward 0.", roundBy(Math.floor)),
  defineLifted("CEILING", "number, step", "n", "Rounds up to a multiple.", toMultiple(Math.ceil)),
  defineLifted("FLOOR", "number, step", "n", "Rounds down to a multiple.", toMultiple(Math.floor)),
  defineLifted("MROUND", "number, step", "n", "Rounds to the nearest multiple.", toMultiple(Math.round)),
  defineLifted("MOD", "number, divisor", "n", "What a division leaves over, with the divisor's sign.", ([value = 0, divisor = 0]: readonly number[]) =>
    divisor === 0 ? new Fault("#DIV/0!") : value - divisor * Math.floor(value / divisor),
  ),
  defineLifted("QUOTIENT", "number, divisor", "n", "The whole part of a division.", ([value = 0, divisor = 0]: readonly number[]) => (divisor === 0 ? new Fault("#DIV/0!") : Math.trunc(value / divisor))),
  define("PI", "", "The circle number.", () => Math.PI),
  ...["SIN", "COS", "TAN", "ASIN", "ACOS", "ATAN", "SINH", "COSH", "TANH", "ASINH", "ACOSH", "ATANH"].map((name) =>
    ofNumber(name, `The ${name.toLowerCase()} of a number, angles in radians.`, Math[name.toLowerCase() as "sin"]),
  ),
  defineLifted("ATAN2", "x, y", "n", "The angle of a point seen from the origin, in radians.", ([x = 0, y = 0]: readonly number[]) => (x === 0 && y === 0 ? new Fault("#DIV/0!") : Math.atan2(y, x))),
  ofNumber("RADIANS", "Degrees as radians.", (value) => (value * Math.PI) / 180),
  ofNumber("DEGREES", "Radians as degrees.", (value) => (value * 180) / Math.PI),
  define("RAND", "", "A random number from 0 up to 1.", (_, evaluation) => evaluation.sight.random()),
  defineLifted("RANDBETWEEN", "lowest, highest", "n", "A random whole number.", ([low = 0, high = 0]: readonly number[], evaluation) => {
    const least = Math.ceil(low);
    const most = Math.floor(high);
    return most < least ? refuse("The highest number lies below the lowest.") : least + Math.floor(evaluation.sight.random() * (most - least + 1));
  }),
];

const ofTheLibrary: readonly Definition[] = [
  ofLibrary("CEILING.MATH", "number, [step], [mode]", "Rounds up to a multiple."),
  ofLibrary("FLOOR.MATH", "number, [step], [mode]", "Rounds down to a multiple."),
  ofLibrary("EVEN", "number", "Rounds away from 0 to an even number."),
  ofLibrary("ODD", "number", "Rounds away from 0 to an odd number."),
  ofLibrary("FACT", "number", "The factorial."),
  ofLibrary("COMBIN", "number, chosen", "The number of ways to choose."),
  ofLibrary("PERMUT", "number, chosen", "The number of ways to choose in order."),
  ofLibrary("GAMMA", "number", "The gamma function."),
  ofLibrary("GAMMALN", "number", "The logarithm of the gamma function."),
  ofLibrary("ERF", "lower, [upper]", "The error function."),
  ofLibrary("ERFC", "number", "One minus the error function."),
  ofLibrary("BASE", "number, base, [length]", "A number written to another base."),
  ofLibrary("DECIMAL", "text, base", "The number that digits to another base stand for.", "tn"),
  ofLibrary("NORM.DIST", "x, mean, deviation, cumulative", "The normal distribution.", "nnnl"),
  ofLibrary("NORM.INV", "probability, mean, deviation", "A percentile of the normal distribution."),
  ofLibrary("NORM.S.DIST", "z, cumulative", "The standard normal distribution.", "nl"),
  ofLibrary("NORM.S.INV", "probability", "A percentile of the standard normal distribution."),
  ofLibrary("LOGNORM.DIST", "x, mean, deviation, cumulative", "The lognormal distribution.", "nnnl"),
  ofLibrary("EXPON.DIST", "x, rate, cumulative", "The exponential distribution.", "nnl"),
  ofLibrary("WEIBULL.DIST", "x, shape, scale, cumulative", "The Weibull distribution.", "nnnl"),
  ofLibrary("GAMMA.DIST", "x, shape, scale, cumulative", "The gamma distribution.", "nnnl"),
  ofLibrary("GAMMA.INV", "probability, shape, scale", "A percentile of the gamma distribution."),
  defineLifted("BETA.DIST", "x, alpha, beta, cumulative, [lowest], [highest]", "nnnlnn", "The beta distribution.", betaDistribution),
  defineLifted("BETA.INV", "probability, alpha, beta, [lowest], [highest]", "n", "A percentile of the beta distribution.", betaPercentile),
  ofLibrary("CHISQ.DIST", "x, degrees, cumulative", "The chi-square distribution.", "nnl"),
  ofLibrary("CHISQ.DIST.RT", "x, degrees", "The upper tail of the chi-square distribution."),
  ofLibrary("CHISQ.INV", "probability, degrees", "A percentile of the chi-square distribution."),
  ofLibrary("CHISQ.INV.RT", "probability, degrees", "An upper percentile of the chi-square distribution."),
  defineLifted("T.DIST", "x, degrees, cumulative", "nnl", "Student's distribution.", studentDistribution),
  defineLifted("T.INV", "probability, degrees", "n", "A percentile of Student's distribution.", studentPercentile),
  defineLifted("T.INV.2T", "probability, degrees", "n", "A two-sided percentile of Student's distribution.", studentTwoSided),
  ofLibrary("POISSON.DIST", "events, mean, cumulative", "The Poisson distribution.", "nnl"),
  ofLibrary("BINOM.DIST", "successes, trials, probability, cumulative", "The binomial distribution.", "nnnl"),
  ofLibrary("PMT", "rate, periods, present, [future], [at start]", "The payment of each period."),
  ofLibrary("PV", "rate, periods, payment, [future], [at start]", "The present value."),
  ofLibrary("FV", "rate, periods, payment, [present], [at start]", "The future value."),
  ofLibrary("NPER", "rate, payment, present, [future], [at start]", "The number of periods."),
  ofLibrary("RATE", "periods, payment, present, [future], [at start]", "The interest of each period."),
  define("NPV", "rate, payment, [more]...", "The present value of payments at the ends of periods.", netPresent),
  define("IRR", "payments, [guess]", "The interest at which the payments balance.", (values, evaluation) => {
    const payments = numbersIn(values.slice(0, 1), evaluation);
    const guess = numberFrom(values[1], evaluation, 0.1);
    if (payments instanceof Fault) return payments;
    if (guess instanceof Fault) return guess;
    const found = fromFormulajs("IRR")(payments, guess);
    return typeof found === "number" ? fromLibrary(balanced(payments, found)) : fromLibrary(found);
  }),
  define("GCD", "number, [more]...", "The greatest common divisor.", ofWhole("GCD")),
  define("LCM", "number, [more]...", "The least common multiple.", ofWhole("LCM")),
];

function ofWhole(name: string): (values: readonly Value[], evaluation: Evaluation) => Value {
  return (values, evaluation) => {
    const numbers = numbersIn(values, evaluation);
    if (numbers instanceof Fault) return numbers;
    return numbers.some((entry) => entry < 0) ? refuse("A negative number has none.") : fromLibrary(fromFormulajs(name)(...numbers.map(Math.trunc)));
  };
}

/** The library's answer is good to ten digits; Newton's steps on the net present value give the others. */
function balanced(payments: readonly number[], start: number): number {
  let rate = start;
  for (let step = 0; step < 5; step++) {
    const value = payments.reduce((sum, payment, index) => sum + payment / (1 + rate) ** index, 0);
    const slope = payments.reduce((sum, payment, index) => sum - (index * payment) / (1 + rate) ** (index + 1), 0);
    const next = rate - value / slope;
    if (!Number.isFinite(next)) return rate;
    rate = next;
  }
  return rate;
}

function netPresent(values: readonly Value[], evaluation: Evaluation): Value {
  const rate = numberFrom(values[0], evaluation, 0);
  const payments = numbersIn(values.slice(1), evaluation);
  if (rate instanceof Fault) return rate;
  return payments instanceof Fault ? payments : fromLibrary(payments.reduce((total, payment, index) => total + payment / (1 + rate) ** (index + 1), 0));
}

export const mathematics: readonly Definition[] = [...base, ...ofTheLibrary];
