import { expm, inv, lusolve, matrix, multiply, subset, index, type Matrix } from "mathjs";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

/**
 * Every value of the example sheets against a second calculation that shares nothing with the product: matrix
 * exponential, solver and inverse of mathjs, closed forms, finite differences, and printed tables where named. A shown
 * number must be the reference rounded to the digits shown.
 */
type Rows = number[][];
const rows = (m: Matrix): Rows => m.toArray() as Rows;

/** A generator from its rates off the diagonal. */
function generator(rates: Rows): Rows {
  return rates.map((row, i) => row.map((rate, j) => (i === j ? -row.reduce((sum, r, k) => (k === i ? sum : sum + r), 0) : rate)));
}
const power = (q: Rows, time: number): Rows => rows(expm(matrix(q.map((row) => row.map((v) => v * time)))) as Matrix);

/** Integral of exp(Qs) from 0 to t, the corner block of the exponential of [[Q, I], [0, 0]] (Van Loan 1978, theorem 1). */
function integral(q: Rows, time: number): Rows {
  const n = q.length;
  const big = [...q.map((row, i) => [...row, ...row.map((_, j) => (i === j ? 1 : 0))]), ...q.map(() => new Array<number>(2 * n).fill(0))];
  return power(big, time).slice(0, n).map((row) => row.slice(n));
}
const solve = (a: Rows, b: number[]): number[] => (lusolve(matrix(a), matrix(b)) as Matrix).toArray().map((v) => (v as number[])[0]!);
const inverse = (a: Rows): Rows => rows(inv(matrix(a)) as Matrix);
const dot = (a: number[], b: number[]): number => a.reduce((sum, v, i) => sum + v * b[i]!, 0);
const across = (v: number[], m: Rows): number[] => m[0]!.map((_, j) => v.reduce((sum, x, i) => sum + x * m[i]![j]!, 0));

function stationary(q: Rows): number[] {
  const a = q.map((_, i) => q.map((row) => row[i]!));
  a[0] = q.map(() => 1);
  return solve(a, q.map((_, i) => (i === 0 ? 1 : 0)));
}
/** Rates among the states that are no targets. */
const without = (q: Rows, targets: number[]): { at: number[]; q: Rows } => {
  const at = q.map((_, i) => i).filter((i) => !targets.includes(i));
  return { at, q: rows(subset(matrix(q), index(at, at)) as unknown as Matrix) };
};
const negative = (q: Rows): Rows => q.map((row) => row.map((v) => -v));
const meanTimes = (q: Rows, targets: number[]): number[] => {
  const rest = without(q, targets);
  const times = solve(negative(rest.q), rest.at.map(() => 1));
  return q.map((_, i) => (rest.at.includes(i) ? times[rest.at.indexOf(i)]! : 0));
};
/** Percent change for one percent more of a rate, by central differences. */
function elasticity(rates: Rows, answer: (q: Rows) => number): Rows {
  return rates.map((row, i) =>
    row.map((rate, j) => {
      if (i === j || rate === 0) return 0;
      const at = (factor: number): number => answer(generator(rates.map((r, a) => r.map((v, b) => (a === i && b === j ? v * factor : v)))));
      return (at(1.0001) - at(0.9999)) / 0.0002 / at(1);
    }),
  );
}

describe("the example sheets", () => {
  let site: Site;
  let opened: OpenPage;
  let sheet: PracticePage;
  let cells: ReadonlyMap<string, string>;

  beforeAll(async () => {
    site = await openSite();
    opened = await site.open({ viewport: { width: 2000, height: 1900 } });
    sheet = await new PracticePage(opened.page).ready();
  });
  afterAll(async () => {
    expect(opened.errors).toEqual([]);
    await site.close();
  });

  /** Opens a sheet and reads everything it shows. */
  const look = async (name: string): Promise<void> => {
    await sheet.sheet(name);
    await sheet.ready();
    const found = await opened.page.evaluate(() =>
      [...document.querySelectorAll<HTMLElement>(".cell")].filter((cell) => cell.textContent !== "").map((cell) => {
        const [, row, column] = /^r(\d+)c(\d+)$/.exec(cell.id)!;
        return [`${String.fromCharCode(65 + Number(column))}${Number(row) + 1}`, cell.textContent!] as const;
      }),
    );
    cells = new Map(found);
    expect(found.filter(([, text]) => text.startsWith("#")).map(([address]) => address), `errors on ${name}`).toEqual(name === "Two quarters" ? ["E11"] : []);
  };
  const place = (address: string): [number, number] => {
    const [, letter, digits] = /^([A-Z])(\d+)$/.exec(address)!;
    return [Number(digits), letter!.charCodeAt(0) - 65];
  };
  const text = (row: number, column: number): string => cells.get(`${String.fromCharCode(65 + column)}${row}`) ?? "";
  /** The shown number is the value rounded to the digits shown. */
  const shows = (address: string, value: number): void => {
    const shown = cells.get(address) ?? "";
    const [mantissa, exponent] = shown.split("E");
    const decimals = mantissa!.split(".")[1]?.length ?? 0;
    const half = 0.5 * 10 ** (Number(exponent ?? 0) - decimals);
    expect(Math.abs(Number(shown) - value), `${address} shows ${shown}, reference ${value}`).toBeLessThanOrEqual(half * (1 + 1e-6) + 1e-12);
    expect(shown, address).not.toBe("");
  };
  /** A block of numbers from an address on. */
  const block = (address: string, values: Rows): void => {
    const [row, column] = place(address);
    values.forEach((line, r) => line.forEach((value, c) => shows(`${String.fromCharCode(65 + column + c)}${row + r}`, value)));
  };
  const words = (address: string, values: string[][]): void => {
    const [row, column] = place(address);
    expect(values.map((line, r) => line.map((_, c) => text(row + r, column + c)))).toEqual(values);
  };
  const column = (values: number[]): Rows => values.map((v) => [v]);

  it("A: where the gate drives will be", async () => {
    await look("Gate drives");
    const q = generator([[0, 0.08, 0], [0, 0, 0.05], [0.5, 0, 0]]);
    words("A10", [["", "Good", "Fair", "Worn"]]);
    words("A11", [["Good"], ["Fair"], ["Worn"]]);
    block("B11", power(q, 6));
    const shares = [3, 6, 12, 24].map((time) => power(q, time)[0]!);
    block("B17", shares);
    block("E17", column(shares.map((share) => 12 * share[2]!)));
    block("A24", [stationary(q)]);
  });

  it("B: how long until the pit floods", async () => {
    await look("Standby pump");
    const q = generator([[0, 0.01, 0.0005, 0], [0.2, 0, 0.012, 0], [0, 0.4, 0, 0.05], [0, 0, 0, 0]]);
    const rest = without(q, [3]);
    const expected = inverse(negative(rest.q));
    const means = meanTimes(q, [3]);
    block("B11", column(means));
    const second = expected.map((row) => 2 * dot(row, means.slice(0, 3)));
    block("C11", column([...second.map((m2, i) => Math.sqrt(m2 - means[i]! ** 2)), 0]));
    // First of "Both fit" and "Flooded": from One fit and None fit by the two linear equations.
    const [one, none] = solve([[0.212, -0.012], [-0.4, 0.45]], [0.2, 0]) as [number, number];
    block("B18", [[1, 0], [one, 1 - one], [none, 1 - none], [0, 1]]);
    for (const [i, time] of [30, 365, 1825, 3650].entries()) {
      const p = power(q, time)[0]!;
      shows(`B${24 + i}`, 1 - p[3]!);
      shows(`C${24 + i}`, p[3]!);
      shows(`D${24 + i}`, (p[2]! * 0.05) / (1 - p[3]!));
    }
    for (const [address, fraction] of [["B29", 0.1], ["B30", 0.5]] as const) {
      const shown = Number(cells.get(address));
      expect(power(q, shown - 0.06)[0]![3]!).toBeLessThan(fraction);
      expect(power(q, shown + 0.06)[0]![3]!).toBeGreaterThan(fraction);
    }
    block("A34", [[...expected[0]!, 0]]);
    const late = power(rest.q, 4000)[0]!;
    const total = late.reduce((a, b) => a + b);
    const shares = late.map((v) => v / total);
    block("A38", [[...shares, 0, shares[2]! * 0.05]]);
  });

  it("C: what ten years cost, seasons, inspections", async () => {
    await look("Cost horizon");
    const rates = [[0, 0.15, 0.01], [0.4, 0, 0.1], [1.5, 0, 0]];
    const q = generator(rates);
    const changes = [[0, 0, 20], [35, 0, 25], [80, 0, 0]];
    const flow = [2, 9, 60].map((cost, i) => cost + dot(rates[i]!, changes[i]!));
    const ten = integral(q, 10)[0]!;
    // Discounting at 3 % is leaving at rate 0.03 for a place that costs nothing.
    const discounted = integral(q.map((row, i) => row.map((v, j) => (i === j ? v - 0.03 : v))), 10)[0]!;
    shows("E9", dot(discounted, flow));
    shows("E10", dot(ten, flow));
    const before = inverse(negative(without(q, [2]).q))[0]!;
    shows("E11", dot(before, flow.slice(0, 2)));
    shows("E12", dot(stationary(q), flow));
    shows("E13", ten[0]! * 0.01 + ten[1]! * 0.1);
    block("B16", [1, 5, 10].map((time) => integral(q, time)[0]!));
    block("B22", rates.map((row, i) => row.map((rate) => ten[i]! * rate)));
    const summer = generator([[0, 0.05, 0.01], [0.7, 0, 0.05], [2.5, 0, 0]]);
    const winter = generator([[0, 0.25, 0.01], [0.1, 0, 0.15], [0.5, 0, 0]]);
    const half = power(summer, 0.5)[0]!;
    block("A39", [[0.5, ...half], [1, ...across(half, power(winter, 0.5))]]);
    block("A44", [integral(summer, 0.5)[0]!, across(half, integral(winter, 0.5))]);
    // Shares just after an inspection repeat from one to the next.
    const cycle = rows(multiply(matrix(power(q, 0.5)), matrix([[1, 0, 0], [1, 0, 0], [0, 0, 1]])));
    const after = stationary(cycle.map((row, i) => row.map((v, j) => v - (i === j ? 1 : 0))));
    block("A49", [across(after, integral(q, 0.5)).map((v) => v / 0.5)]);
  });

  it("D: people for the call desk", async () => {
    await look("Call desk");
    for (const [i, people] of [3, 4, 5, 6].entries()) {
      // Balance of neighbouring levels: p(k+1) = p(k) · 34 / (10 · min(k+1, people)).
      const levels = [1];
      for (let k = 1; k <= 12; k += 1) levels.push((levels[k - 1]! * 34) / (10 * Math.min(k, people)));
      const total = levels.reduce((a, b) => a + b);
      const full = levels[12]! / total;
      block(`B${8 + i}`, [[1 - full, levels.slice(0, people).reduce((a, b) => a + b) / total, 34 * full]]);
    }
    const rates = [[0, 0.01, 0.002], [0.25, 0, 0.02], [0.5, 0, 0]];
    const q = generator(rates);
    const pi = stationary(q);
    const failures = pi[0]! * 0.002 + pi[1]! * 0.02;
    const up = pi[0]! + pi[1]!;
    words("A20", [["availability"], ["unavailability"], ["failures per time unit"], ["mean up time"], ["mean down time"], ["mean time between failures"], ["mean time to first failure"]]);
    block("B20", column([up, pi[2]!, failures, up / failures, pi[2]! / failures, 1 / failures, meanTimes(q, [2])[0]!]));
    shows("E28", (integral(q, 8)[2]![0]! + integral(q, 8)[2]![1]!) / 8);
    block("E29", [[1, 2, 4].map((time) => 1 - power(q, time)[2]![2]!)]);
    block("B33", rates.map((row, i) => row.map((rate) => pi[i]! * rate)));
  });

  it("E: which rate of the belt matters, and how sure it is", async () => {
    await look("Baggage belt");
    const rates = [[0, 0.05, 0.01], [0.5, 0, 0.1], [1.2, 0, 0]];
    const available = (q: Rows): number => 1 - stationary(q)[2]!;
    block("B11", elasticity(rates, available));
    block("B17", elasticity(rates, (q) => meanTimes(q, [2])[0]!));
    block("B23", elasticity(rates, (q) => dot(stationary(q), [0, 40, 900])));
    const goal = Number(cells.get("E27"));
    const at = (rate: number): number => available(generator([rates[0]!, rates[1]!, [rate, 0, 0]]));
    expect(at(goal - 6e-5)).toBeLessThan(0.99);
    expect(at(goal + 6e-5)).toBeGreaterThan(0.99);
    // The band by other draws: gamma by the method of Marsaglia and Tsang (2000), from a generator of the test's own.
    let seed = 12345;
    const uniform = (): number => ((seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0) + 0.5) / 4294967296;
    const normal = (): number => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
    const gamma = (shape: number): number => {
      const d = shape - 1 / 3;
      for (;;) {
        const x = normal();
        const v = (1 + x / Math.sqrt(9 * d)) ** 3;
        if (v > 0 && Math.log(uniform()) < 0.5 * x * x + d - d * v + d * Math.log(v)) return d * v;
      }
    };
    const draws = Array.from({ length: 8000 }, () => {
      const g = (count: number, days: number): number => gamma(count + 0.5) / days;
      const [a, b, c, d, e] = [g(15, 310), g(3, 310), g(12, 30), g(3, 30), g(6, 5)] as [number, number, number, number, number];
      // Stationary shares of the three states in closed form, by cutting the graph around Slips and around Stands.
      const slips = a / (c + d);
      const stands = (b + slips * d) / e;
      return (1 + slips) / (1 + slips + stands);
    }).sort((x, y) => x - y);
    for (const [address, quantile, tolerance] of [["E35", 0.05, 2e-3], ["F35", 0.5, 1e-3], ["G35", 0.95, 1e-3]] as const) {
      expect(Math.abs(Number(cells.get(address)) - draws[Math.floor(quantile * draws.length)]!), address).toBeLessThan(tolerance);
    }
  });

  it("F: crews for the pumps, and tables from parts", async () => {
    await look("Pump crews");
    const group = (crew: number): Rows => {
      const rates = Array.from({ length: 6 }, () => new Array<number>(6).fill(0));
      for (let down = 0; down < 5; down += 1) {
        rates[down]![down + 1]! += (5 - down) * 0.025 * 0.95;
        rates[down]![5]! += 0.025 * 0.05;
        rates[down + 1]![down]! += Math.min(down + 1, crew) * 0.2;
      }
      return generator(rates);
    };
    block("B9", column([1, 2, 3].map((crew) => stationary(group(crew))[0]! + stationary(group(crew))[1]!)));
    block("B15", group(2));
    const list = [[-2, 2, 0], [1.5, -1.6, 0.1], [0.8, 0, -0.8]];
    words("E23", [["", "Idle", "Pumping", "Blocked"]]);
    block("F24", list);
    block("B31", list);
    block("G31", [[-0.4, 0.4, 0], [1, -1.2, 0.2], [0, 1.1, -1.1]]);
    block("B36", [[-3, 3, 0], [2, -5, 3], [0, 2, -2]]);
    const valve = [[-0.5, 0.5], [1, -1]];
    words("A42", [["Idle + Shut"], ["Idle + Open"], ["Pumping + Shut"], ["Pumping + Open"], ["Blocked + Shut"], ["Blocked + Open"]]);
    block("B42", list.flatMap((row, i) => valve.map((v, a) => row.flatMap((rate, j) => v.map((turn, b) => (a === b ? rate : 0) + (i === j ? turn : 0))))));
    words("A51", [["Idle"], ["Pumping"], ["Blocked (1 of 3)"], ["Blocked (2 of 3)"], ["Blocked (3 of 3)"]]);
    block("B51", [[-2, 2, 0, 0, 0], [1.5, -1.6, 0.1, 0, 0], [0, 0, -2.4, 2.4, 0], [0, 0, 0, -2.4, 2.4], [2.4, 0, 0, 0, -2.4]]);
    const pi = stationary(list);
    const out = (0.1 * pi[1]!) / (pi[0]! + pi[1]!);
    block("B59", [[-out, out], [0.8, -0.8]]);
  });

  it("G: rates from inspections, counts and a log", async () => {
    await look("Bridges");
    const shown = [11, 12, 13].map((row) => ["B", "C", "D"].map((letter) => Number(cells.get(`${letter}${row}`))));
    const year = power(shown, 1);
    // Rates shown with four decimals give the yearly shares back to within their rounding.
    [[0.9, 0.09, 0.01], [0.05, 0.85, 0.1], [0.2, 0.05, 0.75]].forEach((row, i) => row.forEach((share, j) => expect(Math.abs(year[i]![j]! - share)).toBeLessThan(1.5e-4)));
    expect(Number(cells.get("E15"))).toBeLessThan(1e-14);
    block("B24", [[-0.1, 18 / 200, 2 / 200], [5 / 90, -14 / 90, 9 / 90], [4 / 20, 1 / 20, -5 / 20]]);
    // Up 40 + 67 + 8 and 75 + 40 days with 3 failures; down 3 + 2 and 5 days with 3 repairs.
    block("F30", [[-3 / 230, 3 / 230], [3 / 10, -3 / 10]]);
    // Chi-square points 1.635 (5 %, 6 degrees) and 15.507 (95 %, 8 degrees): NIST/SEMATECH e-Handbook, table 1.3.6.7.4.
    block("E39", [[1.635 / 2 / 230, 3 / 230, 15.507 / 2 / 230]]);
  });

  it("H: what moved between two quarters", async () => {
    await look("Two quarters");
    words("A10", [["Loading", "Away", "0.9", "0.7", "0.778"], ["Away", "Loading", "0", "0.02", "#N/A"]]);
    expect(cells.get("B13")).toMatch(/^[0-9A-Z]{8}$/);
    expect(cells.get("C13")).toMatch(/^[0-9A-Z]{8}$/);
    expect(cells.get("B13")).not.toBe(cells.get("C13"));
    expect(cells.get("A16")).toMatch(/^(ok|note)/);
    words("A21", [["Waiting", "1", "closed"], ["Loading", "1", "closed"], ["Away", "1", "closed"]]);
    const q = generator([[0, 1.2, 0], [0.1, 0, 0.7], [0.25, 0.02, 0]]);
    block("G22", [[0, 1, 0], [0.1 / 0.8, 0, 0.7 / 0.8], [0.25 / 0.27, 0.02 / 0.27, 0]]);
    block("B27", column([1 / 1.2, 1 / 0.8, 1 / 0.27]));
    const pi = stationary(q);
    const distance = (time: number): number => Math.max(...power(q, time).map((row) => row.reduce((sum, p, j) => sum + Math.abs(p - pi[j]!), 0) / 2));
    const settled = Number(cells.get("I27"));
    expect(distance(settled + 0.006)).toBeLessThanOrEqual(0.01);
    expect(distance(settled - 0.006)).toBeGreaterThan(0.01);
    // A possible history: along arrows only, in time order, from the start to before the horizon.
    words("A32", [["0.000", "Waiting"]]);
    const arrows: Record<string, string[]> = { Waiting: ["Loading"], Loading: ["Waiting", "Away"], Away: ["Waiting", "Loading"] };
    for (let row = 33; text(row, 0) !== ""; row += 1) {
      expect(Number(text(row, 0))).toBeGreaterThan(Number(text(row - 1, 0)));
      expect(Number(text(row, 0))).toBeLessThan(8);
      expect(arrows[text(row - 1, 1)]).toContain(text(row, 1));
    }
    expect(text(33, 0)).not.toBe("");
  });

  it("Plan: the season of chiller 2", async () => {
    await look("Plan");
    const q = generator([[0, 0.02, 0.004, 0, 0.0027], [0.1, 0, 0.015, 0, 0], [0, 0, 0, 0.5, 0], [0.25, 0, 0, 0, 0], [0.07, 0, 0, 0, 0]]);
    const days = [1, 7, 30, 90, 153];
    words("A9", [["2027-05-02"], ["2027-05-08"], ["2027-05-31"], ["2027-07-30"], ["2027-10-01"]]);
    block("C9", days.map((day) => power(q, day)[0]!));
    block("H9", column(days.map((day) => power(q, day)[0]![0]! + power(q, day)[0]![1]!)));
    const stopped = q.map((row, i) => (i === 2 ? row.map(() => 0) : row));
    block("I9", column(days.map((day) => 1 - power(stopped, day)[0]![2]!)));
    block("C17", [stationary(q)]);
    shows("H17", stationary(q)[0]! + stationary(q)[1]!);
    block("B20", column(meanTimes(q, [2])));
    block("C28", [30, 153].map((day) => integral(q, day)[0]!.map((v) => 24 * v)));
  });
});
