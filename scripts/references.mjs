/**
 * References of any chain to as many digits as wanted, by arithmetic that has nothing in common with the project's:
 *
 *   npm run references -- chain.json [digits]
 *
 * chain.json: { "n": 2, "rates": [[0, 1, 0.001], [1, 0, 0.5]], "t": 24, "start": [1, 0], "target": [1], "levels": [0.5] }
 * with states from 0; "target" and "levels" may be left out. Prints the same file with "expect" filled: P, dist_t, occupancy_t and,
 * with a target, hit_cdf_t, hit_sf_t, hit_pdf_t and hit_quantiles, as strings of 20 digits: the form of
 * test/reference/battery.json, so that a case can be added there.
 *
 * Method: exp by scaling and squaring of the Taylor series of the signed matrix, with decimal.js at twice the digits that
 * cancellation and squarings can cost; everything is computed twice, at 1× and 2× the working precision, and what does not agree
 * to 30 digits is refused.
 */
import { readFileSync } from "node:fs";
import { pathToFileURL } from "node:url";
import Decimal from "decimal.js";

/**
 * @typedef {{ n: number, rates: [number, number, number][], t: number, start: number[], target?: number[], levels?: number[] }} Chain
 * @typedef {import("decimal.js").default} Number_
 * @typedef {Number_[][]} Square
 */

/**
 * The expected values of a chain.
 * @param {Chain} chain
 * @param {number} [digits] working precision of the first pass; by default enough for the chain
 * @returns {Record<string, unknown>}
 */
export function references(chain, digits = workingDigits(chain)) {
  const [once, twice] = [digits, 2 * digits].map((precision) => compute(chain, Decimal.clone({ precision, minE: -9e15, maxE: 9e15 })));
  const difference = largestDifference(once, twice);
  if (!(difference < 1e-30)) throw new Error(`The two passes agree to ${difference.toExponential(1)} only. Ask for more digits.`);
  return /** @type {Record<string, unknown>} */ (text(twice));
}

/**
 * Digits for 60 correct ones: the entries' own smallness, and what squarings lose.
 * @param {Chain} chain
 */
function workingDigits({ n, rates, t }) {
  const smallest = rates.reduce((least, [, , rate]) => Math.min(least, rate), Infinity);
  const jumps = largestExit(n, rates) * t;
  const spread = rates.length > 0 ? Math.abs(Math.log10(largestExit(n, rates) / smallest)) : 0;
  return Math.ceil(60 + n * (1 + spread) * (jumps > 0 && jumps < 1 ? 1 - Math.log10(jumps) : 1) + 2 * Math.log10(1 + jumps));
}

/** @param {number} n @param {[number, number, number][]} rates */
function largestExit(n, rates) {
  const exits = new Array(n).fill(0);
  for (const [i, , rate] of rates) exits[i] += rate;
  return Math.max(...exits);
}

/**
 * @param {Chain} chain
 * @param {typeof Decimal} D
 */
function compute({ n, rates, t, start, target, levels }, D) {
  const zero = new D(0);
  const q = square(n, zero);
  for (const [i, j, rate] of rates) {
    q[i][j] = q[i][j].plus(exact(rate, D));
    q[i][i] = q[i][i].minus(exact(rate, D));
  }
  const begin = start.map((p) => exact(p, D));
  const time = exact(t, D);
  const p = exponential(q, time, D);
  // The integral of a row: a further row and column, exp([Q, 0; start, 0] t) has ∫ start exp(Qs) ds in its last row.
  const wide = square(n + 1, zero);
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) wide[i][j] = q[i][j];
  for (let j = 0; j < n; j++) wide[n][j] = begin[j];
  /** @type {Record<string, unknown>} */
  const found = { P: p, dist_t: times(begin, p), occupancy_t: exponential(wide, time, D)[n].slice(0, n) };
  if (target) Object.assign(found, passage(q, begin, new Set(target), time, levels ?? [], D));
  return found;
}

/**
 * @param {Square} q @param {Number_[]} begin @param {Set<number>} target @param {Number_} t @param {number[]} levels
 * @param {typeof Decimal} D
 */
function passage(q, begin, target, t, levels, D) {
  const zero = new D(0);
  const stopped = q.map((row, i) => (target.has(i) ? row.map(() => zero) : row));
  const rateIn = q.map((row, i) => (target.has(i) ? zero : sum(row.filter((_, j) => target.has(j)), D)));
  /** @param {Number_[]} row */
  const met = (row) => sum(row.filter((_, j) => target.has(j)), D);
  /** @param {Number_[]} row */
  const flow = (row) => sum(row.map((x, i) => x.times(rateIn[i])), D);
  const row = times(begin, exponential(stopped, t, D));
  const found = { hit_cdf_t: met(row), hit_sf_t: sum(row.filter((_, j) => !target.has(j)), D), hit_pdf_t: flow(row) };
  // Doubling until the level is passed, then halving to a bracket of a part in a thousand, then Newton.
  const quantiles = levels.map((level) => {
    if (met(begin).gte(exact(level, D))) return zero;
    const unit = new D(1).div(Math.max(1e-300, largestEntry(q)));
    let power = exponential(stopped, unit, D);
    const powers = [power];
    const settled = new D(10).pow(-45);
    for (let previous = zero; met(times(begin, power)).lt(exact(level, D)); powers.push(power)) {
      const now = met(times(begin, power));
      if (powers.length > 4 && now.gt(0) && now.minus(previous).div(now).abs().lt(settled)) return new D(Infinity);
      previous = now;
      power = product(power, power, D);
      if (powers.length > 2000) return new D(Infinity);
    }
    let at = begin;
    let time = zero;
    for (let k = powers.length - 2; k >= 0; k--) {
      const next = times(at, powers[k]);
      if (met(next).gte(exact(level, D))) continue;
      at = next;
      time = time.plus(unit.times(new D(2).pow(k)));
    }
    let rest = unit.div(2);
    for (let round = 0; round < 60; round++) {
      const here = times(at, exponential(stopped, rest, D));
      const step = exact(level, D).minus(met(here)).div(flow(here));
      rest = rest.plus(step);
      if (rest.lte(0)) rest = unit.div(new D(2).pow(round + 2));
      else if (step.abs().lt(time.plus(rest).times(new D(10).pow(-50)))) break;
    }
    return time.plus(rest);
  });
  return levels.length > 0 ? { ...found, hit_quantiles: quantiles } : found;
}

/**
 * exp(q t): Taylor to the working precision at norm below 1/1024, then squarings.
 * @param {Square} q @param {Number_} t @param {typeof Decimal} D
 * @returns {Square}
 */
function exponential(q, t, D) {
  const n = q.length;
  const norm = t.times(largestEntry(q) * n);
  const squarings = norm.lte(0) ? 0 : Math.max(0, Math.ceil(Math.log2(norm.toNumber())) + 10);
  const small = q.map((row) => row.map((x) => x.times(t).div(new D(2).pow(squarings))));
  let term = square(n, new D(0)).map((row, i) => row.map((_, j) => new D(i === j ? 1 : 0)));
  let total = term;
  for (let k = 1; ; k++) {
    term = product(term, small, D).map((row) => row.map((x) => x.div(k)));
    if (k > n && term.every((row, i) => row.every((x, j) => x.isZero() || x.abs().lt(total[i][j].abs().times(new D(10).pow(-D.precision)))))) break;
    total = total.map((row, i) => row.map((x, j) => x.plus(term[i][j])));
    if (k > 20 * D.precision) throw new Error("The series does not end.");
  }
  for (let s = 0; s < squarings; s++) total = product(total, total, D);
  return total;
}

/**
 * A double as the binary number that it is; decimal.js by itself would take its shortest decimal form.
 * @param {number} x @param {typeof Decimal} D
 */
function exact(x, D) {
  let halvings = 0;
  for (; !Number.isInteger(x); x *= 2) halvings++;
  return new D(x).div(new D(2).pow(halvings));
}

/** @param {Square} a @param {Square} b @param {typeof Decimal} D @returns {Square} */
function product(a, b, D) {
  const n = a.length;
  return a.map((row) =>
    Array.from({ length: n }, (_, j) => {
      let total = new D(0);
      for (let k = 0; k < n; k++) if (!row[k].isZero() && !b[k][j].isZero()) total = total.plus(row[k].times(b[k][j]));
      return total;
    }),
  );
}

/** @param {Number_[]} row @param {Square} matrix */
function times(row, matrix) {
  return matrix[0].map((_, j) => row.reduce((total, x, i) => total.plus(x.times(matrix[i][j])), row[0].times(0)));
}

/** @param {Number_[]} values @param {typeof Decimal} D @returns {Number_} */
function sum(values, D) {
  return values.reduce((total, x) => total.plus(x), new D(0));
}

/** @param {number} n @param {Number_} value @returns {Square} */
function square(n, value) {
  return Array.from({ length: n }, () => new Array(n).fill(value));
}

/** @param {Square} q */
function largestEntry(q) {
  return Math.max(0, ...q.flat().map((x) => Math.abs(x.toNumber())));
}

/** @param {unknown} one @param {unknown} other @returns {number} */
function largestDifference(one, other) {
  if (one instanceof Decimal || Decimal.isDecimal(one)) {
    const [a, b] = [new Decimal(/** @type {Number_} */ (one)), new Decimal(/** @type {Number_} */ (other))];
    if (!a.isFinite() || !b.isFinite()) return a.equals(b) ? 0 : Infinity;
    return a.equals(b) ? 0 : a.minus(b).div(b).abs().toNumber();
  }
  const [a, b] = [Object.values(/** @type {object} */ (one)), Object.values(/** @type {object} */ (other))];
  return a.reduce((largest, value, k) => Math.max(largest, largestDifference(value, b[k])), 0);
}

/** @param {unknown} value @returns {unknown} */
function text(value) {
  if (Decimal.isDecimal(value)) return value.isFinite() ? value.toSignificantDigits(20).toString() : "inf";
  if (Array.isArray(value)) return value.map(text);
  return Object.fromEntries(Object.entries(/** @type {object} */ (value)).map(([key, part]) => [key, text(part)]));
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  const [file, digits] = process.argv.slice(2);
  if (!file) throw new Error("Name a file with a chain; the head of scripts/references.mjs says what it holds.");
  /** @type {Chain} */
  const chain = JSON.parse(readFileSync(file, "utf8"));
  console.log(JSON.stringify({ ...chain, expect: references(chain, digits ? Number(digits) : undefined) }, null, 1));
}
