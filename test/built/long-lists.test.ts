import { beforeAll, describe, expect, it } from "vitest";
import { built, HostError, loadFunctions, type HostFunction } from "../support/functions";

/** A desk with 19,999 places: arrivals 1, services 3 a time unit, as a list of 39,998 arrows. A dense table would take 3.2 GB. */
const STATES = 20_000;
const list: (string | number)[][] = [];
for (let i = 0; i < STATES - 1; i++) list.push([`L${i}`, `L${i + 1}`, 1], [`L${i + 1}`, `L${i}`, 3]);

let functions: Record<string, HostFunction>;
beforeAll(() => {
  functions = loadFunctions({ script: built() });
});

describe("a list of 20,000 states", () => {
  it("answers AVAILABILITY and COSTRATE: the geometric long run of M/M/1 (A. K. Erlang; Kleinrock, Queueing Systems I, 1975, ch. 3)", () => {
    expect(functions.AVAILABILITY(list, "L0")[0][0]).toBeCloseTo(2 / 3, 14);
    expect(functions.AVAILABILITY(list, [["L0"], ["L1"], ["L2"]])[0][0]).toBeCloseTo(26 / 27, 14);
    expect(functions.COSTRATE(list, Array.from({ length: STATES }, (_, i) => [i]))).toBeCloseTo(1 / 2, 13);
  });

  it("answers MEANABSORPTION: from n to 0 in n / (3 − 1) on average", () => {
    const means = functions.MEANABSORPTION(list, "L0") as number[][];
    expect(means).toHaveLength(STATES);
    for (const n of [0, 1, 7, 1000, 15_000]) expect(means[n][0] === n / 2 || Math.abs(means[n][0] / (n / 2) - 1) < 1e-12, `from ${n}: ${means[n][0]}`).toBe(true);
  });

  it("answers SURVIVAL and AVAILABILITY at times as a table of the states that matter does", () => {
    const times = [[0, 1, 10, 1000]];
    const small = list.slice(0, 60);
    const [long] = functions.SURVIVAL(list, "L0", "L30", times) as number[][];
    const [short] = functions.SURVIVAL(small, "L0", "L30", times) as number[][];
    long.forEach((value, k) => expect(Math.abs(value - short[k])).toBeLessThanOrEqual(1e-14));
    const [at] = functions.AVAILABILITY(list, "L0", "L0", [[0, 1, 10]]) as number[][];
    const [as] = functions.AVAILABILITY(small, "L0", "L0", [[0, 1, 10]]) as number[][];
    at.forEach((value, k) => expect(Math.abs(value / as[k] - 1)).toBeLessThan(1e-13));
  });

  it("is checked by its arrows, with the row of each finding", () => {
    expect(functions.CHECK(list)).toEqual([["ok", "", "", ""]]);
    const more = [...list, ["Spare", "L5", 1], ["L9", "Odd", 2]];
    const rows = functions.CHECK(more) as string[][];
    expect(rows.map(([severity, where]) => `${severity}, ${where}`)).toEqual(["warning, row 40000 of the range"]);
    expect(rows[0][2]).toContain("Odd has no exit");
    const broken = list.map((row, k) => (k === 776 ? [row[0], row[1], -1] : row));
    expect(functions.CHECK(broken)[0][2]).toBe("Row 777: -1 is not a rate. Enter 0 or more.");
  });

  it("refuses what would not fit a sheet with its size", () => {
    for (const refused of [() => functions.STATIONARY(list), () => functions.GENERATOR(list), () => functions.DISTRIBUTION(list, 1, 1)])
      expect(refused).toThrow(/20000 cells, over the limit of 16384 columns/);
    expect(() => functions.TRANSITION(list, 1)).toThrow(HostError);
  });
});
