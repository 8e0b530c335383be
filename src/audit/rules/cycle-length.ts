import { read } from "../../table/read";
import { nameKey } from "../../table/cell";
import { readBody, roundingBand, type Body } from "../body";
import { bodySpan, type Rule } from "../context";
import { kindOf } from "../kind";

const CYCLES = [2, 3, 4, 6, 12, 13, 24, 26, 52, 365];

/**
 * A long cycle's probabilities cut into short ones the wrong way (mistake 9): divided by the number of cycles, or by the root of each
 * entry. Needs both tables: this one (short cycle) and another of the workbook (long cycle) with the same states. Judged by the
 * short table multiplied by itself, which would have to give the long one.
 */
export const cycleLength: Rule = (context) => {
  if (context.kind !== "probability") return [];
  for (const other of context.options.others ?? []) {
    const reading = read(other.cells);
    if (!reading.layout || reading.layout.size !== context.layout.size || reading.layout.form === "list") continue;
    if (!sameNames(context.layout.names, reading.layout.names)) continue;
    const long = readBody(other.cells, reading.layout);
    if (kindOf(long) !== "probability") continue;
    for (const cycles of CYCLES) {
      const way = dividedBy(context.body, long, cycles) ? "divided" : rootOf(context.body, long, cycles) ? "root" : null;
      if (!way) continue;
      const gap = powerGap(context.body, long, cycles);
      // hardly any two jumps in a long cycle, or no more than the rounding of the short table: nothing worth a stop
      if (gap <= Math.max(0.0005, (cycles * roundingBand([...context.body.values])) / context.body.values.length)) continue;
      return [{ code: "cycleLength", severity: "stop", span: bodySpan(context), details: { way, cycles, where: other.where, gap } }];
    }
  }
  return [];
};

function sameNames(a: readonly string[] | null, b: readonly string[] | null): boolean {
  return !a || !b || a.every((name, k) => nameKey(name) === nameKey(b[k]));
}

/** Off the diagonal, every entry of the short table is the long one's divided by the number of cycles. */
function dividedBy(short: Body, long: Body, cycles: number): boolean {
  return offDiagonal(short, long, (s, l) => Math.abs(s * cycles - l) <= Math.max(1e-6 * l, cycles * roundingBand([s])));
}

/** Every entry, or every diagonal entry, of the short table is the root of the long one's. */
function rootOf(short: Body, long: Body, cycles: number): boolean {
  const near = (s: number, l: number): boolean => Math.abs(s - l ** (1 / cycles)) <= Math.max(1e-6, roundingBand([s]));
  const n = short.size;
  let told = 0;
  for (let i = 0; i < n; i++) {
    const l = long.values[i * n + i];
    if (l <= 0 || l >= 1) continue;
    if (!near(short.values[i * n + i], l)) return false;
    told++;
  }
  return told >= 2 || (told >= 1 && offDiagonal(short, long, near));
}

function offDiagonal(short: Body, long: Body, agree: (s: number, l: number) => boolean): boolean {
  let told = 0;
  for (let at = 0; at < short.values.length; at++) {
    if (at % (short.size + 1) === 0) continue;
    const [s, l] = [short.values[at], long.values[at]];
    if (s === 0 && l === 0) continue;
    if (!(s > 0 && l > 0) || !agree(s, l)) return false;
    told++;
  }
  return told >= 2;
}

/** Largest difference between the short table's power and the long table. */
function powerGap(short: Body, long: Body, cycles: number): number {
  const n = short.size;
  let power = short.values;
  for (let k = 1; k < cycles; k++) {
    const next = new Float64Array(n * n);
    for (let i = 0; i < n; i++)
      for (let m = 0; m < n; m++) for (let j = 0; j < n; j++) next[i * n + j] += power[i * n + m] * short.values[m * n + j];
    power = next;
  }
  return power.reduce((most, value, at) => Math.max(most, Math.abs(value - long.values[at])), 0);
}
