import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { call } from "../unit/functions/tables";

/** Laws that tie the formulas to each other, on seeded chains whose rates span nine powers of ten. */
fc.configureGlobal({ seed: 20_260_101, numRuns: 30 });

type Table = (number | string)[][];
const names = (n: number): string[] => Array.from({ length: n }, (_, i) => `S${i + 1}`);
const range = <T>(n: number, entry: (i: number) => T): T[] => Array.from({ length: n }, (_, i) => entry(i));
const sum = (values: readonly number[]): number => values.reduce((a, b) => a + b, 0);

const rate = fc.double({ min: -5, max: 4, noNaN: true }).map((power) => Number((10 ** power).toPrecision(6)));
/** Irreducible: a ring of arrows and more of them. */
const chain = fc.integer({ min: 2, max: 6 }).chain((n) =>
  fc.tuple(fc.array(rate, { minLength: n * n, maxLength: n * n }), fc.array(fc.boolean(), { minLength: n * n, maxLength: n * n })).map(([rates, kept]) =>
    range(n, (i) => range(n, (j): number | string => (i === j ? "" : j === (i + 1) % n || kept[i * n + j] ? rates[i * n + j] : 0))),
  ),
);
const time = fc.double({ min: -4, max: 3, noNaN: true }).map((power) => 10 ** power);

/** Equal entry by entry, relative to the entry. */
function near(found: unknown, expected: unknown, tolerance: number, scale = 0): void {
  const [left, right] = [[found].flat(3), [expected].flat(3)] as number[][];
  expect(left.length).toBe(right.length);
  left.forEach((value, k) => expect(Math.abs(value - right[k]), `${value} against ${right[k]} at ${k}`).toBeLessThanOrEqual(tolerance * Math.max(Math.abs(right[k]), scale)));
}

const times = (a: number[][], b: number[][]): number[][] => a.map((row) => b[0].map((_, j) => sum(row.map((x, k) => x * b[k][j]))));
const arrowsOf = (table: Table): [number, number, number][] => table.flatMap((row, i) => row.flatMap((x, j): [number, number, number][] => (i !== j && Number(x) > 0 ? [[i, j, Number(x)]] : [])));
const listOf = (table: Table): Table => {
  const found = arrowsOf(table);
  const ring = range(table.length - 1, (i) => found.find(([from, to]) => from === i && to === i + 1)!);
  return [...ring, ...found.filter((arrow) => !ring.includes(arrow))].map(([i, j, x]) => [`S${i + 1}`, `S${j + 1}`, x]);
};
const law = (text: string, check: (table: Table, t: number) => void): void => it(text, () => fc.assert(fc.property(chain, time, check)));

describe("position", () => {
  law("P(s + t) = P(s) P(t), rows sum to 1, and a row is the distribution from its state", (table, t) => {
    const [p, twice] = [call("TRANSITION", table, t), call("TRANSITION", table, 2 * t)];
    near(times(p, p), twice, 1e-12);
    near(twice.map(sum), twice.map(() => 1), 1e-14);
    near(call("DISTRIBUTION", table, 2, t)[0], p[1], 1e-12);
  });
  law("the long run is left alone by time and balances every flow", (table, t) => {
    const shares = call("STATIONARY", table);
    near(call("DISTRIBUTION", table, shares, t), shares, 1e-12);
    const flows = call("FLOWS", table) as number[][];
    near(range(table.length, (i) => sum(flows[i])), range(table.length, (i) => sum(flows.map((row) => row[i]))), 1e-12);
    near(call("INSPECTION", table, table.map((row) => row.map(() => "")), t), shares, 1e-12);
  });
  law("phases of the same table are one stretch of time", (table, t) => {
    near(call("PHASED", [...table, ...table], [[t, 2 * t]], 1), [call("DISTRIBUTION", table, 1, t), call("DISTRIBUTION", table, 1, 3 * t)], 1e-12);
    near(call("PHASEDOCCUPANCY", [...table, ...table], [[t, 0]], 1)[0], call("OCCUPANCY", table, 1, t)[0], 1e-12);
  });
});

describe("first passage", () => {
  law("met and not met add up; the percentile turns the one into time", (table, t) => {
    const last = table.length;
    near(call("SURVIVAL", table, 1, last, t)[0][0] + call("REACHED", table, 1, last, t)[0][0], 1, 1e-14);
    const median = call("PERCENTILE", table, 1, last, 0.5)[0][0];
    near(call("REACHED", table, 1, last, median), 0.5, 1e-12);
  });
  law("times before a target add up to the mean; the first of all targets is one of them", (table) => {
    const n = table.length;
    const means = call("MEANABSORPTION", table, n).flat();
    near(range(n, (i) => sum(call("TIMEBEFORE", table, i + 1, n)[0])), means, 1e-13);
    const all = [[1], [n]];
    near(call("ABSORPTIONPROB", table, all).map(sum), range(n, () => 1), 1e-13);
    if (n === 2) near(call("ABSORPTIONSD", table, n), means.map((mean: number) => [mean]), 1e-13);
  });
  law("a reader who waits long sees the decay rate as hazard", (table) => {
    const [quasi] = call("QUASISTATIONARY", table, table.length, true).slice(1);
    if (!Array.isArray(quasi)) return;
    near(call("HAZARD", table, [quasi.slice(0, -1)], table.length, [[0, 1 / quasi.at(-1)]]), [quasi.at(-1), quasi.at(-1)], 1e-10);
  });
});

describe("periods and costs", () => {
  law("occupancy adds up to the horizon; jumps are occupancy times rate; costs are made of both", (table, t) => {
    const n = table.length;
    const [spent] = call("OCCUPANCY", table, 1, t);
    near(sum(spent), t, 1e-13);
    const jumps = call("JUMPS", table, 1, t) as number[][];
    near(jumps, range(n, (i) => range(n, (j) => (i === j ? 0 : spent[i] * Number(table[i][j])))), 1e-13);
    const stateCosts = range(n, (i) => i + 1);
    const jumpCosts = range(n, (i) => range(n, (j) => i + 2 * j));
    const expected = sum(spent.map((x: number, i: number) => x * stateCosts[i])) + sum(jumps.flatMap((row, i) => row.map((x, j) => x * jumpCosts[i][j])));
    near(call("COST", table, 1, t, [stateCosts], jumpCosts), expected, 1e-12);
    const up = range(n, (i) => [i === 0]);
    near(call("FAILURES", table, up, 1, t), sum(jumps[0]), 1e-13);
    near(call("INTERVALAVAILABILITY", table, up, 1, t), spent[0] / t, 1e-13);
  });
  law("a discount over for ever is what it is over very long", (table) => {
    const costs = [range(table.length, (i) => i + 1)];
    const discount = 0.01 * Math.max(...arrowsOf(table).map(([, , x]) => x));
    near(call("COSTUNTIL", table, 1, costs, null, null, discount), call("COST", table, 1, 100 / discount, costs, null, discount), 1e-12);
  });
  law("availability and unavailability, up and down times fit together", (table) => {
    const [availability, unavailability, failures, up, down, between] = call("UPDOWN", table, 1).map((row: [string, number]) => row[1]);
    near(availability + unavailability, 1, 1e-14);
    near(up * failures, availability, 1e-13);
    near([up + down, down / between], [between, unavailability], 1e-12);
    near(call("AVAILABILITY", table, 1), availability, 1e-14);
    near(call("COSTRATE", table, [range(table.length, (i) => (i === 0 ? 1 : 0))]), availability, 1e-14);
  });
});

describe("sensitivity", () => {
  law("a faster clock leaves long-run shares alone, shortens waits and raises jump costs in proportion", (table) => {
    const n = table.length;
    near(sum(call("ELASTICITY", table, 1).flat()), 0, 1e-11, 1);
    near(sum(call("MEANTIMEELASTICITY", table, 1, n).flat()), -1, 1e-11);
    const jumpCosts = range(n, () => range(n, () => 1));
    near(sum(call("COSTELASTICITY", table, [range(n, () => 0)], jumpCosts).flat()), 1, 1e-11);
  });
  law("agrees with a small change of one rate", (table, t) => {
    const [from, to, x] = arrowsOf(table)[0];
    const changed = (factor: number) => table.map((row, i) => row.map((value, j) => (i === from && j === to ? x * factor : value)));
    const slope = (name: string, ...args: unknown[]) => {
      const [low, high] = [-1, 1].map((side) => Math.log([call(name, changed(1 + side * 1e-4), ...args)].flat(2)[0]));
      return (high - low) / (Math.log(1 + 1e-4) - Math.log(1 - 1e-4));
    };
    near(call("ELASTICITY", table, 1)[from][to], slope("AVAILABILITY", 1), 1e-6, 1);
    near(call("ELASTICITY", table, 1, 1, t)[from][to], slope("AVAILABILITY", 1, 1, t), 1e-6, 1);
    near(call("COSTELASTICITY", table, [range(table.length, (i) => i + 1)])[from][to], slope("COSTRATE", [range(table.length, (i) => i + 1)]), 1e-6, 1);
    near(call("MEANTIMEELASTICITY", table, 1, table.length)[from][to], slope("MEANABSORPTION", table.length), 1e-6, 1);
  });
  law("the rate for a goal meets the goal", (table) => {
    const now = call("AVAILABILITY", table, 1)[0][0];
    const [from, to] = arrowsOf(table)[0];
    const wanted = now * 0.9;
    const found = call("RATEFORGOAL", table, from + 1, to + 1, 1, wanted);
    if (typeof found !== "number") return;
    near(call("AVAILABILITY", table.map((row, i) => row.map((x, j) => (i === from && j === to ? found : x))), 1), wanted, 1e-10);
  });
});

describe("building and looking", () => {
  law("list and square, blank and given diagonals are one table with one fingerprint", (table) => {
    const n = table.length;
    const named = [["", ...names(n)], ...table.map((row, i) => [names(n)[i], ...row])];
    const print = call("FINGERPRINT", named);
    expect(print).toMatch(/^[0-9A-Z]{8}$/);
    for (const same of [call("GENERATOR", named, true), listOf(table), [...named, named[0].map(() => "")]]) expect(call("FINGERPRINT", same)).toBe(print);
    const [from, to, x] = arrowsOf(table)[0];
    const changed = named.map((row, i) => row.map((cell, j) => (i === from + 1 && j === to + 1 ? x * (1 + 1e-15) + 1e-300 : cell)));
    const other = x * (1 + 1e-15) + 1e-300;
    if (other !== x) expect(call("FINGERPRINT", changed)).not.toBe(print);
    expect(call("COMPARE", named, listOf(table))).toEqual([["no difference", "", "", "", ""]]);
    expect(call("FROMLIST", listOf(table))).toEqual(call("GENERATOR", table));
  });
  law("two chains seen as one keep their own long runs, and lump back to each", (table) => {
    const other = [["", "on", "off"], ["on", "", 3], ["off", 5, ""]];
    const n = table.length;
    const both = call("COMBINE", table, other, true);
    const [mine, its] = [call("STATIONARY", table)[0], call("STATIONARY", other)[0]];
    near(call("STATIONARY", both)[0], mine.flatMap((p: number) => its.map((q: number) => p * q)), 1e-12);
    near(call("LUMP", both, [range(2 * n, (k) => `g${Math.floor(k / 2)}`)]), call("GENERATOR", table), 1e-12);
  });
  law("stages keep every mean", (table) => {
    const n = table.length;
    const staged = call("STAGES", table, 1, 3);
    const expected = call("MEANABSORPTION", table, n).flat();
    near(call("MEANABSORPTION", staged, n + 2)[0][0], expected[0], 1e-12);
    near(sum(call("STATIONARY", staged)[0].slice(0, 3)), call("STATIONARY", table)[0][0], 1e-12);
  });
  law("probabilities over a short period give their rates back", (table) => {
    const period = 0.2 / Math.max(...table.map((row) => sum(row.map(Number))));
    const found = call("FROMPROBABILITY", call("TRANSITION", table, period), period);
    near(found, call("GENERATOR", table), 1e-9, 1e-6 / period);
    near(call("EMBEDDINGGAP", call("TRANSITION", table, period), period), 0, 1e-13, 1);
  });
  law("a history steps along arrows, and the same seed gives the same", (table) => {
    const fastest = Math.max(...arrowsOf(table).map(([, , x]) => x));
    const path = call("SAMPLEPATH", table, 1, 20 / fastest, 7) as [number, string][];
    expect(path).toEqual(call("SAMPLEPATH", table.map((row) => [...row]), 1, 20 / fastest, 7));
    expect(path[0]).toEqual([0, "State 1"]);
    for (let k = 1; k < path.length; k++) {
      const [i, j] = [path[k - 1], path[k]].map(([, state]) => Number(state.slice(6)) - 1);
      expect(Number(table[i][j])).toBeGreaterThan(0);
      expect(path[k][0]).toBeGreaterThan(path[k - 1][0]);
    }
  });
  law("after the settling time every start is as near to the long run as was asked", (table) => {
    const tolerance = 0.02;
    const settled = call("SETTLING", table, tolerance);
    const shares = call("STATIONARY", table)[0];
    const distance = (p: number[]) => sum(p.map((x, j) => Math.abs(x - shares[j]))) / 2;
    expect(Math.max(...call("TRANSITION", table, settled * (1 + 1e-9)).map(distance))).toBeLessThanOrEqual(tolerance * (1 + 1e-6));
    if (settled > 0) expect(Math.max(...call("TRANSITION", table, settled * (1 - 1e-3)).map(distance))).toBeGreaterThan(tolerance);
  });
});
