import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { battery, referenceValue, Worst, type BatteryCase } from "../reference/battery";
import { built, HostError, loadFunctions, type HostFunction } from "../support/functions";

/**
 * The whole reference battery through the built functions, as a host calls them: tables as cells, in all their forms,
 * entry by entry. `battery.json` says how its values were made. Tolerances are the specification's; measured errors are printed.
 */

type CellTable = (number | string | null)[][];
let functions: Record<string, HostFunction>;
beforeAll(() => {
  functions = loadFunctions({ script: built() });
});

/** Below this no accuracy is promised: products leave the double range. */
const FLOOR = 1e-280;

const worst = new Map<string, Worst>();
afterAll(() => console.log([...worst].map(([quantity, one]) => `${quantity}: ${one}`).join("\n")));

function compare(quantity: string, tolerance: number, found: unknown, text: string, at: string, scale: (expected: number) => number = () => 1): void {
  const expected = referenceValue(text);
  if (!Number.isFinite(expected)) {
    expect(found, `${quantity} ${at}`).toBeInstanceOf(HostError);
    expect((found as HostError).code).toBe("#N/A");
    return;
  }
  expect(typeof found, `${quantity} ${at}: ${String((found as Error)?.message ?? found)}`).toBe("number");
  if (expected !== 0 && Math.abs(expected) < FLOOR) {
    expect(Math.abs(found as number), at).toBeLessThan(10 * FLOOR);
    return;
  }
  const one = new Worst();
  one.note(found as number, expected, at, scale(expected));
  const all = worst.get(quantity) ?? new Worst();
  all.note(found as number, expected, at, scale(expected));
  worst.set(quantity, all);
  expect(one.error, `${quantity} ${at}: ${String(found)} against ${text}`).toBeLessThanOrEqual(tolerance);
}

const logarithmic = (expected: number): number => 1 + (expected === 0 ? 0 : Math.abs(Math.log(Math.abs(expected))));

function compareRow(quantity: string, tolerance: number, found: unknown[], texts: readonly string[], at: string, scale?: (expected: number) => number): void {
  expect(found.length, `${quantity} ${at}`).toBe(texts.length);
  texts.forEach((text, j) => compare(quantity, tolerance, found[j], text, `${at} [${j}]`, scale));
}

const nameOf = (state: number): string => `S${state}`;

/** The same chain as its users write it: bare rates, names and a diagonal, or a list whose rows bring the states in order. */
const FORMS: Record<string, (c: BatteryCase) => CellTable | null> = {
  bare: (c) => square(c, c.rates.length > 0 ? "" : 0),
  named: (c) => {
    const body = square(c, 0);
    body.forEach((row, i) => (row[i] = -row.reduce<number>((sum, rate) => sum + Number(rate), 0)));
    return [["", ...row(c.n, nameOf)], ...body.map((cells, i) => [nameOf(i), ...cells])];
  },
  list: (c) => {
    if (c.n < 2) return null;
    const left = new Map(c.rates.map(([from, to, rate]) => [`${from} ${to}`, rate]));
    const rows: CellTable = row(c.n - 1, (i) => {
      const rate = left.get(`${i} ${i + 1}`);
      left.delete(`${i} ${i + 1}`);
      return [nameOf(i), nameOf(i + 1), rate ?? null];
    });
    for (const [key, rate] of left) rows.push([...key.split(" ").map((state) => nameOf(Number(state))), rate]);
    return [["from", "to", "rate"], ...rows];
  },
};

function row<T>(length: number, entry: (k: number) => T): T[] {
  return Array.from({ length }, (_, k) => entry(k));
}

function square(c: BatteryCase, blank: number | string): CellTable {
  const cells: CellTable = row(c.n, () => row(c.n, () => blank as number | string | null));
  for (const [from, to, rate] of c.rates) cells[from][to] = rate;
  return cells;
}

describe.each(Object.keys(FORMS))("the battery, tables written as %s", (form) => {
  it.each(battery.map((c) => [c.id, c] as const))("%s", (id, c) => {
    const rates = FORMS[form](c);
    if (!rates) return;
    const { n, t, expect: e } = c;
    const start = c.start.filter((p) => p > 0).length === 1 ? c.start.indexOf(1) + 1 : [c.start];
    const targets = form === "bare" ? [row(n, (i) => c.target.includes(i))] : c.target.map((state) => [form === "list" ? nameOf(state).toLowerCase() : state + 1]);
    const call = (name: string, ...args: unknown[]) => functions[name](...args);

    if (e.P) call("TRANSITION", rates, t).forEach((found: unknown[], i: number) => compareRow("TRANSITION", 4e-15, found, e.P[i], `${id} row ${i}`, logarithmic));
    compareRow("DISTRIBUTION", 4e-15, call("DISTRIBUTION", rates, start, t)[0], e.dist_t, id, logarithmic);
    compareRow("OCCUPANCY", 1e-13, call("OCCUPANCY", rates, start, t)[0], e.occupancy_t, id);

    const classes = call("CLASSES", rates) as [number, string][];
    const closed = [...new Set(classes.filter(([, kind]) => kind !== "transient").map(([one]) => one))].sort((a, b) => a - b);
    const members = closed.map((one) => row(n, (i) => i).filter((i) => classes[i][0] === one));
    expect(members).toEqual(e.closed_classes);
    for (const states of members) for (const i of states) expect(classes[i][1]).toBe(states.length === 1 ? "absorbing" : "closed");
    members.forEach((states, k) => {
      const shares = call("STATIONARY", rates, states[0] + 1)[0] as number[];
      compareRow("STATIONARY, one class", 1e-14, states.map((state) => shares[state]), e.stationary[k], id);
      row(Math.min(n, 12), (i) => {
        const [[share]] = call("AVAILABILITY", rates, states.map((state) => [state + 1]), i + 1);
        compare("AVAILABILITY, long run", 1e-14, share, e.absorption[i][k], `${id} from ${i}`);
      });
    });
    compareRow("STATIONARY, from start", 1e-14, call("STATIONARY", rates, start)[0], e.limit, id);

    compareRow("MEANABSORPTION", 1e-14, call("MEANABSORPTION", rates, targets).flat(), e.hit_mean, id);
    compareRow("ABSORPTIONSD", 1e-14, call("ABSORPTIONSD", rates, targets).flat(), e.hit_sd, id);
    const before = call("TIMEBEFORE", rates, start, targets)[0];
    if (e.occupancy_before_hit) compareRow("TIMEBEFORE", 1e-14, before, e.occupancy_before_hit, id);
    else expect(before.some((time: unknown) => time instanceof HostError)).toBe(true); // the mean is infinite
    const first = call("ABSORPTIONPROB", rates, targets) as number[][];
    compareRow("ABSORPTIONPROB, row sums", 1e-14, first.map((found) => found.reduce((sum, p) => sum + p, 0)), e.hit_prob, id);
    compare("SURVIVAL", 4e-15, call("SURVIVAL", rates, start, targets, t)[0][0], e.hit_sf_t, id, logarithmic);
    compare("REACHED", 4e-15, call("REACHED", rates, start, targets, t)[0][0], e.hit_cdf_t, id, logarithmic);
    const hazard = call("HAZARD", rates, start, targets, t)[0][0];
    if (referenceValue(e.hit_sf_t) > FLOOR) compare("HAZARD", 4e-15, hazard, e.hit_hazard_t, id, logarithmic);
    else expect(hazard).toMatchObject({ code: "#N/A" });
    compareRow("PERCENTILE", 5e-14, call("PERCENTILE", rates, start, targets, [c.levels])[0], e.hit_quantiles, id);

    const outside = row(n, (i) => [c.count_into.includes(i) ? 0 : 1]);
    if (outside.some(([up]) => up === 1)) compare("FAILURES", 1e-13, call("FAILURES", rates, outside, start, t)[0][0], e.jumps_into_t, id);
    row(form === "bare" ? Math.min(n, 12) : 1, (j) => {
      const unit = [row(n, (i) => (i === j ? 1 : 0))];
      compare("COST, discounted", 1e-13, call("COST", rates, start, t, unit, null, c.discount)[0][0], e.discounted_t[j], `${id} [${j}]`);
      const absorbing = members.some((states) => states.length === 1 && states[0] === j);
      if (!absorbing) compare("COSTUNTIL, discounted", 1e-13, call("COSTUNTIL", rates, start, unit, null, null, c.discount), e.discounted_inf[j], `${id} [${j}]`);
    });

    const [from, to] = c.deriv;
    const rate = c.rates.find(([i, j]) => i === from && j === to)?.[2];
    if (rate === undefined || form !== "bare") return;
    if (e.ddist_t)
      e.ddist_t.forEach((text: string, j: number) => {
        const p = referenceValue(e.dist_t[j]);
        if (p < FLOOR || n > 12) return;
        const elasticity = (rate * referenceValue(text)) / p;
        const found = call("ELASTICITY", rates, j + 1, start, t)[from][to];
        const size = (1 + Math.abs(Math.log(p))) * (1 + Math.abs(elasticity));
        const error = Math.abs(found - elasticity) / size;
        const all = worst.get("ELASTICITY at a time") ?? new Worst();
        all.compared++;
        if (error > all.error) Object.assign(all, { error, at: `${id} [${j}]` });
        worst.set("ELASTICITY at a time", all);
        expect(error, `${id} [${j}]: ${found} against ${elasticity}`).toBeLessThanOrEqual(2e-14);
      });
    if (e.dstationary)
      members[0].forEach((state, k) => {
        const share = referenceValue(e.stationary[0][k]);
        const elasticity = (rate * referenceValue(e.dstationary[k])) / share;
// below 1e-6 an elasticity is what a cancellation in the chain leaves of terms of order one: absolute 1e-18 there
        compare("ELASTICITY, long run", 1e-12, call("ELASTICITY", rates, state + 1)[from][to], String(elasticity), `${id} [${state}]`, (value) => Math.max(1, 1e-6 / Math.abs(value)));
      });
  });
});
