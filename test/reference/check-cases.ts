import { readFileSync } from "node:fs";

/**
 * The published checks as questions to the formulas, independent of who answers: the chain directly
 * (`checks-chain.test.ts`) or the built functions. States count from 1, as in a cell.
 *
 * `checks.json` holds each check's source, the figures as printed and `verified_value` (60 and 110 digits agreeing).
 */
export type Cell = number | string | boolean | null;
export type Argument = Cell | readonly (readonly Cell[])[];
/** Answers a formula as a spill; arguments in the order of the catalogue, null where omitted. */
export type Ask = (formula: string, ...args: Argument[]) => number[][];

export interface CheckCase {
  readonly id: string;
  readonly title: string;
  readonly source: string;
  readonly status: string;
  /** Asks the formulas concerned and returns figures in the order of `expected`. */
  readonly found: (ask: Ask) => number[];
  /** Verified values; `tolerance` is relative. */
  readonly expected: readonly number[];
  readonly tolerance: number;
  /** Figures as printed, with the error that their digits imply; NaN where none is printed. */
  readonly printed: readonly { readonly value: number; readonly within: number }[];
}

interface Check {
  readonly id: string;
  readonly title: string;
  readonly source: string;
  readonly status: string;
  // eslint-disable-next-line @typescript-eslint/no-explicit-any -- each check has an input of its own
  readonly input: any;
  readonly expected: Nested;
  readonly tolerance: string;
  readonly verified_value: Nested;
}
type Nested = string | null | readonly Nested[];

const checks = new Map<string, Check>(
  (JSON.parse(readFileSync(new URL("./checks.json", import.meta.url), "utf8")) as Check[]).map((check) => [check.id, check]),
);
export const checkIds: readonly string[] = [...checks.keys()];

type Matrix = number[][];
// eslint-disable-next-line @typescript-eslint/no-explicit-any -- see Check.input
type Found = (ask: Ask, input: any, input2: (id: string) => any) => number[];
interface Options {
  /** Relative tolerance against the verified value; 1e-12 unless a reason is written. */
  readonly tolerance?: number;
  /** Which verified figures are asked, by position; all when omitted. */
  readonly only?: readonly number[];
  /** A figure for an answer in words, such as 0 for "no". */
  readonly answer?: number;
  /** Only the printed digits are compared: the formula answers the exact question, the source an approximation. */
  readonly printedOnly?: boolean;
}

const cases: CheckCase[] = [];
function check(id: string, found: Found, options: Options = {}): void {
  const entry = checks.get(id)!;
  const pick = <T>(all: T[]): T[] => (options.only ? options.only.map((k) => all[k]) : all);
  const verified = pick(flatten(entry.verified_value));
  const printed = pick(flatten(entry.expected));
  cases.push({
    id,
    title: entry.title,
    source: entry.source,
    status: entry.status,
    found: (ask) => found(ask, entry.input, (other) => checks.get(other)!.input),
    expected: options.answer !== undefined ? [options.answer] : options.printedOnly ? [] : verified.map((text) => number(text)),
    tolerance: options.tolerance ?? 1e-12,
    printed: entry.status.startsWith("from memory") && !options.printedOnly
      ? []
      : printed.map((text) => ({ value: number(text), within: impliedError(text, entry.tolerance) })),
  });
}

/** "0.25", "1/20", "-21/20" as a number; NaN for words. */
export function number(text: string | number | null): number {
  if (text === null) return NaN;
  const [top, bottom] = String(text).split("/").map(Number);
  return bottom === undefined ? top : top / bottom;
}

function flatten(value: Nested): string[] {
  return Array.isArray(value) ? value.flatMap((part) => flatten(part as Nested)) : [value as string];
}

/** Half a unit of the last printed digit, a whole one where the check says so, or the relative error it names. */
function impliedError(text: string, tolerance: string): number {
  const value = Math.abs(number(text));
  const relative = /rel:?\s*([\d.e-]+)/.exec(tolerance);
  const digits = /^-?\d*\.?(\d*)(?:e([+-]?\d+))?$/i.exec(text ?? "");
  const unit = digits ? 10 ** (Number(digits[2] ?? 0) - digits[1].length) : 0;
  const rounding = (tolerance.includes("1 units") ? 1 : 0.5) * unit * (1 + 1e-9);
  return Math.max(relative ? Number(relative[1]) * value : 0, tolerance.includes("half unit") || tolerance.includes("units") || !relative ? rounding : 0, 4e-16 * value);
}

const matrix = (rows: readonly (readonly (string | number)[])[]): Matrix => rows.map((row) => row.map((entry) => number(entry)));
const row = (values: readonly (string | number)[]): Matrix => [values.map((value) => number(value))];
const states = (...numbers: number[]): Matrix => [numbers];
/** A unit-rate generator from a stochastic matrix: its off-diagonals. */
const unitRate = (p: readonly (readonly (string | number)[])[]): Matrix => matrix(p).map((r, i) => r.map((v, j) => (i === j ? 0 : v)));
const birthDeath = (ask: Ask, up: readonly (string | number)[], down: readonly (string | number)[]): Matrix =>
  ask("BIRTHDEATH", row(up), row(down));
const shares = (ask: Ask, rates: Matrix): number[] => ask("STATIONARY", rates)[0];
const last = (values: readonly number[]): number => values[values.length - 1];
const column = (spill: Matrix): number[] => spill.map(([value]) => value);
const weighted = (values: readonly number[], weight: (k: number) => number): number =>
  values.reduce((sum, value, k) => sum + value * weight(k), 0);
const diagonal = (size: number): Matrix => Array.from({ length: size }, () => new Array<number>(size).fill(0));

// A. transition probabilities
check("A01", (ask, { birth, death, t }) => ask("TRANSITION", birthDeath(ask, birth, death), number(t)).flat());
check("A02", (ask, { t }, of) => ask("TRANSITION", birthDeath(ask, of("A01").birth, of("A01").death), t).flat());
check("A06", (ask, { transition_rate, transversion_rate, t }) => {
  const [a, b] = [number(transition_rate), number(transversion_rate)]; // A, C, G, T: transitions A–G and C–T
  const p = ask("TRANSITION", [[0, b, a, b], [b, 0, b, a], [a, b, 0, b], [b, a, b, 0]], number(t));
  return [p[0][0], p[0][2], p[0][1]];
});
check("A14", (ask, { n, fail, repair, t }) => ask("DISTRIBUTION", ask("REPAIRGROUP", n, number(fail), number(repair), n), 1, t)[0]);
check("A16", (ask, { q_ij, t }) => {
  const q = number(q_ij);
  const p = ask("TRANSITION", [[0, q, q, q], [q, 0, q, q], [q, q, 0, q], [q, q, q, 0]], number(t));
  return [p[0][0], p[0][1]];
});

// B. stationary distributions and queues
for (const id of ["B01", "B02", "B04", "B05", "B06", "B07", "B11", "B12", "B14", "B15", "B17", "B18", "B21", "B42"])
  check(id, (ask, { Q }) => shares(ask, unitRate(Q)));
check("B09", (ask, { lambda, mu, K }) => shares(ask, ask("QUEUE", lambda, mu, 1, K)));
check("B13", (ask, input, of) => [ask("AVAILABILITY", unitRate(of("B12").Q), states(...input.states.map((s: number) => s + 1)))[0][0]]);
check("B25", (ask, { birth_failures, death_repairs }) => shares(ask, birthDeath(ask, birth_failures, death_repairs)));
check("B26", (ask, { working }, of) => {
  const rates = birthDeath(ask, of("B25").birth_failures, of("B25").death_repairs);
  return [ask("COSTRATE", rates, row(working))[0][0], ask("COSTRATE", rates, row([0, 0, 0.5, 1, 1]))[0][0]];
});
check("B29", (ask, { birth, death }) => shares(ask, birthDeath(ask, birth, death)));
check("B30", (ask, { lambda, mu, cases: all }) => all.map(({ c, K }: { c: number; K: number }) => last(shares(ask, ask("QUEUE", lambda, mu, c, K)))));
check("B31", (ask, { lambda, mu, K }) => {
  const queue = ask("QUEUE", lambda, mu, 1, K);
  const levels = [0, 1, 2, 3];
  return [
    ...shares(ask, queue),
    ask("COSTRATE", queue, row(levels))[0][0],
    ask("COSTRATE", queue, row(levels.map((k) => Math.max(0, k - 1))))[0][0],
    ask("COSTRATE", queue, row(levels.map((k) => (k < K ? lambda : 0))))[0][0],
  ];
});
check("B34", (ask, { cab_rate, party_rate, max_cabs }) => max_cabs.flatMap((cap: number) => {
  const waiting = 300; // parties; 0.8³⁰⁰ = 1e-29 is left out
  const n = cap + waiting;
  const rates = birthDeath(ask, new Array(n).fill(party_rate), new Array(n).fill(cab_rate)); // level = parties − cabs + cap
  const levels = Array.from({ length: n + 1 }, (_, k) => k - cap);
  return [
    ask("COSTRATE", rates, row(levels.map((k) => Math.max(0, -k))))[0][0],
    ask("COSTRATE", rates, row(levels.map((k) => Math.max(0, k))))[0][0],
  ];
}));
check("B43", (ask, { N, r, lambda_over_mu }) => shares(ask, ask("REPAIRGROUP", N, lambda_over_mu, 1, r)));
check("B45", (ask, { N, r, lambda_over_mu }) => shares(ask, ask("REPAIRGROUP", N, lambda_over_mu, 1, r)).slice(0, 13));
check("B47", (ask, { P }) => shares(ask, unitRate(P)));
check("B50", (ask, { N, up_h, repair_h, crew }) => crew.map((crews: number) =>
  ask("COSTRATE", ask("REPAIRGROUP", N, 1 / up_h, 1 / repair_h, crews), row([5, 4, 3, 2, 1, 0]))[0][0]));
check("B51", (ask, { lambda, mu }) => {
  const places = 300; // (5/6)³⁰⁰ = 2e-24 is left out; a spill ends at 315 states
  const queue = ask("QUEUE", lambda, mu, 1, places);
  const waiting = ask("COSTRATE", queue, row(Array.from({ length: places + 1 }, (_, k) => Math.max(0, k - 1))))[0][0];
  const p = shares(ask, queue);
  return [waiting / lambda, waiting, p[0], weighted(p, (k) => (k > 3 ? 1 : 0))];
});
// B35 and B37 print loads for a given blocking: the blocking at the verified load is asked and turned into a load error
for (const id of ["B35", "B37"]) {
  const { verified_value, input } = checks.get(id)!;
  const wanted: { blocking: number; servers: number; load: number }[] = id === "B35"
    ? (verified_value as string[][]).flatMap((loads, c) =>
        loads.map((load, k) => ({ blocking: number(input.blocking[c]), servers: k + 1, load: number(load) })))
    : input.cases.map((c: { blocking: string; N: number }, k: number) =>
        ({ blocking: number(c.blocking), servers: c.N, load: number((verified_value as string[])[k]) }));
  check(id, (ask) => wanted.map(({ blocking, servers, load }) => {
    const lost = last(shares(ask, ask("QUEUE", load, 1, servers, servers)));
    return load * (1 + (blocking - lost) / (lost * (servers - load + load * lost))); // one Newton step: B' = B (N/A − 1 + B)
  }));
}
check("B41", (ask, { N, cases: all }) => all.flatMap(({ X, M }: { X: string; M: number }) => {
  const load = number(X) / (1 - number(X));
  const seen = shares(ask, ask("REPAIRGROUP", N - 1, load, 1, M)); // what an arriving unit finds: one unit fewer
  const own = shares(ask, ask("REPAIRGROUP", N, load, 1, M));
  return [weighted(seen, (k) => (k >= M ? 1 : 0)), 1 - weighted(own, (k) => Math.max(0, k - M)) / N];
}));

// C. absorption, mean time to failure, availability
check("C01", (ask, { Q, target }) => {
  const means = column(ask("MEANABSORPTION", unitRate(Q), target));
  return [means[1], means[2], (2 * means[1] + 2 * means[2]) / 4];
});
check("C02", (ask, { Q, target }) => column(ask("MEANABSORPTION", unitRate(Q), target)).slice(1));
check("C03", (ask, { Q, target }) => {
  const rates = unitRate(Q);
  const means = column(ask("MEANABSORPTION", rates, target));
  const visits = ask("FLOWS", rates).map((flow) => flow.reduce((sum, f) => sum + f, 0));
  return [means[0], means[2], means[3], ...visits.map((v) => 1 / v), ...visits];
});
check("C04", (ask, { Q, target, avoid }) => {
  const p = ask("ABSORPTIONPROB", unitRate(Q), states(avoid, target));
  return [p[0][1], p[2][1]];
});
check("C05", (ask, { Q, target }) => column(ask("MEANABSORPTION", unitRate(Q), target)).slice(0, 3));
check("C06", (ask, { birth, death }) => {
  const rates = birthDeath(ask, birth, death);
  const visits = ask("FLOWS", rates).map((flow) => flow.reduce((sum, f) => sum + f, 0));
  return [...column(ask("MEANABSORPTION", rates, 5)).slice(0, 4), ...visits.map((v) => 1 / v)];
});
check("C07", (ask, input) => {
  const [a, b, c] = input.rates.map(number); // all up, A down, B down, C down, failed
  return column(ask("MEANABSORPTION", [[0, a, b, c, 0], [0, 0, 0, 0, b + c], [0, 0, 0, 0, a + c], [0, 0, 0, 0, a + b], [0, 0, 0, 0, 0]])).slice(0, 4);
});
check("C08", (ask, { Q, target }) => [ask("MEANABSORPTION", unitRate(Q), target)[0][0]]);
check("C11", (ask, { P }) => {
  const rates = unitRate(P);
  const p = shares(ask, rates);
  const means = p.map((_, j) => column(ask("MEANABSORPTION", rates, j + 1)));
  return [...p, ...p.flatMap((_, i) => p.map((share, j) => (i === j ? 1 / share : means[j][i])))];
});
check("C13", (ask, { lambda, mu }) => {
  const [l, m] = [number(lambda), number(mu)];
  const toTwoDown = (rates: Matrix): number => ask("MEANABSORPTION", rates, 3)[0][0];
  return [
    toTwoDown(ask("REPAIRGROUP", 2, l, m, 1)),
    toTwoDown(ask("REPAIRGROUP", 2, l, m, 1, 1)),
    toTwoDown(ask("REPAIRGROUP", 3, l, m, 1)),
  ];
});
check("C14", (ask, { lambda }) => [
  ask("MEANABSORPTION", ask("REPAIRGROUP", 3, number(lambda), 0, 0), 3)[0][0],
  ask("MEANABSORPTION", ask("REPAIRGROUP", 2, number(lambda), 0, 0), 3)[0][0],
]);
check("C15", (ask, { lambda, mu }) => [1, 2].map((crews) =>
  ask("AVAILABILITY", ask("REPAIRGROUP", 2, number(lambda), number(mu), crews), states(1, 2))[0][0]));
check("C16", (ask, _, of) => {
  const { lambda, mu } = of("C15");
  const table = column(ask("UPDOWN", ask("REPAIRGROUP", 2, number(lambda), number(mu), 1), states(1, 2)).map((r) => [last(r)]));
  return [table[2], table[3], table[4]];
});
check("C17", (ask, { mttf_h, mttr_h, cases: all }) => all.map(({ groups, size }: { groups: number; size: number }) =>
  ask("MEANABSORPTION", ask("REPAIRGROUP", size, 1 / mttf_h, 1 / mttr_h, 1), 3)[0][0] / groups), { printedOnly: true });
check("C20", (ask, { lambda_D, DC, beta, beta_D, T1_h, MTTR_h }) => DC.map((coverage: string) => {
  // undetected failures wait for the test, detected ones are repaired; a common cause fails both channels as one.
  // 1 both work  2 one undetected  3 one detected  4 both undetected  5 one of each  6 both detected
  const [undetected, detected] = [(1 - number(coverage)) * number(lambda_D), number(coverage) * number(lambda_D)];
  const [b, d, mend] = [number(beta), number(beta_D), 1 / MTTR_h];
  const rates = [
    [0, 2 * (1 - b) * undetected, 2 * (1 - d) * detected, b * undetected, 0, d * detected],
    [0, 0, 0, undetected, detected, 0],
    [mend, 0, 0, 0, undetected, detected],
    [0, 0, 0, 0, 0, 0],
    [0, mend, 0, 0, 0, 0],
    [mend, 0, 0, 0, 0, 0],
  ];
  const resets = diagonal(6);
  for (const [found, left] of [[0, 0], [1, 0], [2, 2], [3, 0], [4, 2], [5, 5]]) resets[found][left] = 1;
  const time = ask("INSPECTION", rates, resets, T1_h)[0];
  return time[3] + time[4] + time[5];
}), { printedOnly: true });
check("C22", (ask, { N }) => {
  const levels = Array.from({ length: N }, (_, k) => k);
  const up = levels.map((i) => (2 * i * (N - i)) / N);
  const means = column(ask("MEANABSORPTION", birthDeath(ask, up, levels.map((i) => i + 1)), 1));
  return [means[1], means[N]];
});
check("C23", (ask) => {
  // 1 (2,1)  2 (1,2)  3 (1,1)  4 (0,3)  5 (0,2)  6 (0,1)  ends: 7 (2,0)  8 (1,0)  9 (0,0); susceptible, infective
  const list: Cell[][] = [
    ["2,1", "2,0", 1], ["2,1", "1,2", 4 / 3], ["1,2", "1,1", 2], ["1,2", "0,3", 4 / 3], ["1,1", "1,0", 1],
    ["1,1", "0,2", 2 / 3], ["0,3", "0,2", 3], ["0,2", "0,1", 2], ["0,1", "0,0", 1],
  ];
  return ask("ABSORPTIONPROB", list)[0];
});

// D. cohorts: rates only; the yearly cohorts are powers of a matrix, not chains in continuous time (see `unmapped`)
check("D01", (ask, { counts }) => {
  // shares of jumps and stays: a count table with one time unit a case reads the same off FROMCOUNTS
  const rows = matrix(counts);
  const totals = rows.map((r) => r.reduce((sum, v) => sum + v, 0));
  const moves = [...rows.map((r, i) => r.map((v, j) => (i === j ? 0 : v))), [0, 0, 0, 0]];
  const rates = ask("FROMCOUNTS", moves, row([...totals, 1]));
  return rows.flatMap((_, i) => rates[i].map((v, j) => (i === j ? 1 - rates[i].reduce((sum, w, k) => sum + (k === i ? 0 : w), 0) : v)));
});
check("D11", (ask, { events, person_years }) => [
  ask("RATEINTERVAL", events, person_years)[0][1],
  ask("REACHED", [[0, events / person_years], [0, 0]], 1, 2, 1)[0][0],
]);
check("D14", (ask, { mu01, mu02, t }) => ask("DISTRIBUTION", [[0, number(mu01), number(mu02)], [0, 0, 0], [0, 0, 0]], 1, t)[0]);

// E. phase-type distributions
const moments = (ask: Ask, rates: Matrix, start: readonly number[], target: number): [number, number] => {
  const means = column(ask("MEANABSORPTION", rates, target));
  const sds = column(ask("ABSORPTIONSD", rates, target));
  const mean = weighted(means.slice(0, start.length), (k) => start[k]);
  return [mean, weighted(means.slice(0, start.length).map((m, k) => m * m + sds[k] * sds[k]), (k) => start[k])];
};
check("E07", (ask, { phases, rate }) => {
  const rates = ask("STAGES", [[0, rate / phases], [0, 0]], 1, phases);
  const [mean, second] = moments(ask, rates, [1], phases + 1);
  return [mean, second, second / mean ** 2 - 1];
}, { only: [0, 1, 3] });
check("E09", (ask, { mean, cv2 }) => {
  const [mu1, p, mu2] = [2 / mean, 1 / (2 * cv2), 1 / (mean * cv2)];
  const [first, second] = moments(ask, [[0, p * mu1, (1 - p) * mu1], [0, 0, mu2], [0, 0, 0]], [1], 3);
  return [mu1, p, mu2, first, second / first ** 2 - 1];
});
check("E10", (ask, { k }) => {
  const [p, rate] = (checks.get("E10")!.verified_value as string[]).map(number);
  const rates = birthDeath(ask, new Array(k).fill(rate), new Array(k).fill(0));
  const [mean, second] = moments(ask, rates, [1 - p, p], k + 1);
  return [mean, second / mean ** 2 - 1];
}, { only: [2, 3] });

// F. estimation
check("F02", (ask, { r, confidence }) => r.flatMap((failures: number) => {
  const [[lower, estimate, upper]] = ask("RATEINTERVAL", failures, 1, confidence);
  return [estimate / upper, estimate / lower];
}));
check("F03", (ask, { hours, failures }) => {
  const [[lower, estimate, upper]] = ask("RATEINTERVAL", failures, hours, 0.9);
  return [1 / estimate, 1 / upper, 1 / lower];
});
check("F05", (ask, { hours, confidence }) => confidence.map((c: string) => ask("RATEINTERVAL", 0, hours, number(c))[0][2]));
const firms = (ask: Ask): Matrix => {
  const log: Cell[][] = [["firm", "month", "rating"]];
  for (let k = 1; k <= 10; k++) log.push([`a${k}`, 0, "A"]);
  for (let k = 1; k <= 10; k++) log.push([`b${k}`, 0, "B"]);
  log.push(["b1", 6, "D"], ["b2", 2, "A"], ["a1", 1, "B"]); // rows in any order
  return ask("FROMLOG", log, 12).map((r) => r.map((v) => 12 * v));
};
check("F06", (ask) => {
  const rates = firms(ask);
  return [rates[0][1], rates[1][0], rates[1][2]];
});
check("F07", (ask) => ask("TRANSITION", firms(ask), 1).slice(0, 2).flat());
const ratings = (input: { P_offdiag: string[][] }): Matrix => matrix(input.P_offdiag).map((r, i) =>
  r.map((v, j) => (i === j ? 1 - r.reduce((sum, w, k) => sum + (k === i ? 0 : w), 0) : v)));
check("F09", (ask, _, of) => {
  const p = ratings(of("F08"));
  const again = ask("TRANSITION", ask("FROMPROBABILITY", p, 1), 1);
  const gaps = p.flatMap((r, i) => r.map((v, j) => Math.abs(v - again[i][j])));
  return [ask("EMBEDDINGGAP", p, 1)[0][0], gaps.reduce((sum, gap) => sum + gap, 0) / gaps.length];
}, { tolerance: 1e-9 }); // differences of nearly equal numbers: 1e-16 in 4e-4
check("F10", (ask, { P }) => [ask("EMBEDDINGGAP", matrix(P), 1)[0][0] > 1e-4 ? 0 : 1], { answer: 0 });
check("F11", (ask, { P }) => {
  const rates = ask("FROMPROBABILITY", matrix(P), 1);
  return [rates[0][1], rates[1][0]];
});
check("F12", (ask) => {
  const [one, both] = [(4 * Math.PI) / Math.sqrt(3), (2 * Math.PI) / Math.sqrt(3)];
  const a = ask("TRANSITION", [[0, one, 0], [0, 0, one], [one, 0, 0]], 1);
  const b = ask("TRANSITION", [[0, both, both], [both, 0, both], [both, both, 0]], 1);
  return [a.flatMap((r, i) => [r[i], b[i][i]]).reduce((worst, v) => (Math.abs(v - a[0][0]) > Math.abs(worst - a[0][0]) ? v : worst), a[0][0])];
});

// G. numerical torture cases that are chains
check("G18", (ask, { Q, t }) => {
  const rates = unitRate(Q);
  const p = ask("TRANSITION", rates, t);
  const decay = ask("QUASISTATIONARY", rates, 4, true);
  return [p[0][1], p[0][2], -last(decay[decay.length - 1])];
});
check("G19", (ask, { t }) => {
  const p = ask("TRANSITION", diagonal(4).map((r, i) => r.map((_, j) => (i === j ? 0 : 1))), t);
  return [p[0][0], p[0][1]];
});
check("G20", (ask, { birth, t }) => {
  const p = ask("TRANSITION", birthDeath(ask, birth, new Array(4).fill(0)), number(t));
  return [p[0][4], p[0][3]];
});
check("G22", (ask, { mean, k_from }) => [
  ask("REACHED", birthDeath(ask, new Array(k_from).fill(1), new Array(k_from).fill(0)), 1, k_from + 1, mean)[0][0],
]);
check("G24", (ask, { mean, k }) => {
  const steps = 860;
  const list = Array.from({ length: steps }, (_, i): Cell[] => [`n${i}`, `n${i + 1}`, 1]);
  const p = ask("DISTRIBUTION", list, 1, mean)[0];
  return k.map((level: number) => p[level]);
}, { tolerance: 4e-13 }); // target 4e-15 · (1 + |ln p|)

// H. rewards and occupancy
check("H01", (ask, { horizon, transition }, of) => {
  const rates = unitRate(of("B01").Q);
  const [from, to] = transition;
  return [ask("JUMPS", rates, ask("STATIONARY", rates), horizon)[from - 1][to - 1]];
});
check("H02", (ask, _, of) => [ask("COSTRATE", unitRate(of("B02").Q), row([0, 2, 2, 2]))[0][0]]);
check("H03", (ask, { reward }, of) => {
  const rates = unitRate(of("B11").Q);
  return [ask("COSTRATE", rates, row(reward))[0][0], ask("AVAILABILITY", rates, states(1, 2))[0][0]];
});
check("H04", (ask) => {
  const accepted = (lambda: number, mu: number, servers: number, places: number): number => {
    const queue = ask("QUEUE", lambda, mu, servers, places);
    return ask("COSTRATE", queue, row(Array.from({ length: places + 1 }, (_, k) => (k < places ? lambda : 0))))[0][0];
  };
  // the queues of B14, B15 and B17; that of the third figure is not among the checks
  return [accepted(20, 10, 1, 2), accepted(20, 10, 2, 4), accepted(5, 4, 1, 4)];
}, { only: [0, 1, 3] });
check("H06", (ask, _, of) => [1.5 * last(shares(ask, unitRate(of("B21").Q)))]);
check("H07", (ask, { jump, mean_stay, pay }) => {
  const rates = matrix(jump).map((r, i) => r.map((v) => v / mean_stay[i]));
  return [...shares(ask, rates), ask("COSTRATE", rates, row(pay))[0][0]];
});
check("H09", (ask, { policy1, policy2 }) => [policy1, policy2].flatMap(({ Q, reward }) => {
  const rates = unitRate(Q);
  const gain = ask("COSTRATE", rates, row(reward))[0][0];
  return [gain, ask("COSTUNTIL", rates, 1, row(reward.map((r: number) => r - gain)), 2)[0][0]];
}));
check("H10", (ask, { alpha }, of) => [of("H09").policy1, of("H09").policy2].flatMap(({ Q, reward }) =>
  [1, 2].map((start) => ask("COSTUNTIL", unitRate(Q), start, row(reward), null, null, number(alpha))[0][0])));
check("H13", (ask, { lambda, mu, T }) => {
  const rates = [[0, number(lambda)], [number(mu), 0]];
  return [ask("INTERVALAVAILABILITY", rates, 1, 1, T)[0][0], ask("AVAILABILITY", rates, 1, 1, T)[0][0]];
});
check("H14", (ask, _, of) => {
  const { lambda, mu, T } = of("H13");
  return [ask("FAILURES", [[0, number(lambda)], [number(mu), 0]], 1, 1, T)[0][0]];
});

// I. sensitivity
check("I03", (ask, { P }) => {
  // from dπ_k/dq_ij = π_i (Z_jk − Z_ik), taken along arrows from state 1, and Σ_k row of Z = 1, π Z = π
  const rates = unitRate(P);
  const p = shares(ask, rates);
  const ahead = (i: number, j: number, k: number): number => (ask("ELASTICITY", rates, k + 1)[i][j] * p[k]) / (rates[i][j] * p[i]);
  const second = p.map((_, k) => ahead(0, 1, k)); // Z_2k − Z_1k
  const third = p.map((_, k) => ahead(0, 2, k)); // Z_3k − Z_1k
  const first = p.map((share, k) => share - p[1] * second[k] - p[2] * third[k]);
  return [...first, ...first.map((z, k) => z + second[k]), ...first.map((z, k) => z + third[k])];
});
check("I04", (ask, _, of) => {
  const rates = unitRate(of("I03").P);
  return [shares(ask, rates).reduce((sum, share, j) => sum + share * ask("MEANABSORPTION", rates, j + 1)[0][0], 0)];
});
check("I09", (ask, { lambda, mu }) => {
  const [l, m] = [number(lambda), number(mu)];
  const rates = ask("REPAIRGROUP", 2, l, m, 1);
  const mean = ask("MEANABSORPTION", rates, 3)[0][0];
  const e = ask("MEANTIMEELASTICITY", rates, 1, 3);
  return [((e[0][1] + e[1][2]) * mean) / l, (e[1][0] * mean) / m];
});

export const checkCases: readonly CheckCase[] = cases;

/** Checks without a counterpart among the formulas, and why. */
export const unmapped: Readonly<Record<string, string>> = {
  A10: "powers of a yearly matrix: discrete time, and its rounded entries have no generator",
  B48: "eigenvalues are not asked by any formula",
  D02: "yearly cohort, powers of a matrix that no generator reproduces (D07)",
  D03: "sums over yearly cycles of D02",
  D04: "sums over yearly cycles of D02",
  D06: "sums over yearly cycles of D02",
  D07: "the logarithm itself is not an answer of any formula: FROMPROBABILITY gives the nearest generator",
  D08: "yearly cohort, powers of a matrix",
  D09: "sums over yearly cycles of D08",
  D10: "ratios of D09",
  F08: "the distance of the logarithm to the generator is not asked by any formula; its generator is, in F09",
  G02: "exponential of a matrix that is no generator",
  G05: "exponential of a matrix that is no generator",
  G09: "exponential of a matrix that is no generator",
  G17: "logarithm of a matrix that is no stochastic matrix",
  G25: "exponential of a matrix that is no generator",
};
