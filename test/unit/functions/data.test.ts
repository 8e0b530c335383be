import { describe, expect, it } from "vitest";
import { call, ONE_WAY, PUMP, refusal } from "./tables";

describe("FROMLOG", () => {
  const log = [
    ["unit", "entered", "state"],
    ["P1", 46_000, "Up"],
    ["P1", 46_050, "Down"],
    ["P1", 46_053, "Up"],
    ["P2", 46_010, "Up"],
  ];
  // P1: up 50 + (46,100 − 46,053) = 97, down 3; P2: up 90; one failure, one repair
  const expected = [["", "Up", "Down"], ["Up", -1 / 187, 1 / 187], ["Down", 1 / 3, -1 / 3]];

  it("takes rows in any order, day numbers, a unit of one row, blank rows and states entered again", () => {
    expect(call("FROMLOG", log, 46_100, true)).toEqual(expected);
    const [head, first, ...rest] = log;
    const shuffled = [head, first, ["", "", ""], ...[...rest].reverse(), [0, 0, 0], ["p1 ", 46_020, " up"]];
    expect(call("FROMLOG", shuffled, 46_100, true)).toEqual(expected);
    expect(call("FROMLOG", log.slice(1), 46_100, true)).toEqual(expected);
    expect(call("FROMLOG", log.map((row) => [...row, "", 0]), 46_100, true)).toEqual(expected);
  });

  it("takes numbers as units and states as they are", () => {
    expect(call("FROMLOG", [[1, 0, 7], [1, 4, 8]], 6, true)).toEqual([["", "7", "8"], ["7", -0.25, 0.25], ["8", 0, 0]]);
  });

  it.each<[unknown, number, string]>([
    [log, 46_052, "#VALUE! log, row 4: time 46053 is after the end, 46052. Correct the row or the end."],
    [[...log, ["P2", 46_010, "Down"]], 46_100, "#VALUE! log, rows 5 and 6: P2 enters two states at time 46010. Correct one."],
    [[...log, ["P2", 46_020, ""]], 46_100, "#VALUE! log, row 6: the state is blank. Enter its name."],
    [[...log, ["", 46_020, "Up"]], 46_100, "#VALUE! log, row 6: the unit is blank. Enter its name."],
    [log.map((row) => row.slice(0, 2)), 46_100, "#VALUE! log: 2 columns are filled. Give three: unit, time, state entered."],
    [[["unit", "entered", "state"]], 46_100, "#VALUE! log: it has no rows. Give rows of unit, time, state entered."],
    [[...log, ["P3", true, "Up"]], 46_100, '#VALUE! log, row 6: "TRUE" is not a time. Enter a number or a date.'],
  ])("refuses by row: case %#", (rows, end, sentence) => {
    expect(refusal(call("FROMLOG", rows, end))).toBe(sentence);
  });
});

describe("FROMCOUNTS", () => {
  it("takes counts as a square or a list, and leaves a state without jumps alone", () => {
    const square = [["", "A", "B", "C"], ["A", "", 6, ""], ["B", 3, "", 0], ["C", "-", "", ""]];
    const expected = [["", "A", "B", "C"], ["A", -0.06, 0.06, 0], ["B", 0.3, -0.3, 0], ["C", 0, 0, 0]];
    expect(call("FROMCOUNTS", square, [[100], [10], [0]], true)).toEqual(expected);
    expect(call("FROMCOUNTS", [["A", "B", 6], ["B", "A", 3], ["B", "C", 0]], [[100, 10, 0]], true)).toEqual(expected);
    expect(refusal(call("FROMCOUNTS", square, [[100, 10]]))).toBe("#VALUE! timeInState: 2 times were given. Give 3, one for each state.");
    expect(refusal(call("FROMCOUNTS", square, [[100, -1, 0]]))).toBe("#VALUE! timeInState, row 1, column 2: -1 cannot be used. Enter a number, 0 or more.");
  });
});

describe("COMPARE", () => {
  it("puts states of one side first, then the arrows that differ, new and gone", () => {
    const after = [["", "Worn", "Running", "Sold"], ["Worn", "", 0.3, ""], ["Running", 0.2, "", 0.01], ["Sold", "", "", ""]];
    const rows = call("COMPARE", PUMP, after) as unknown[][];
    expect(rows.slice(0, 2)).toEqual([["Failed", "", "present", "absent", ""], ["Sold", "", "absent", "present", ""]]);
    const arrows = Object.fromEntries(rows.slice(2).map((row) => [`${String(row[0])} ${String(row[1])}`, row.slice(2)]));
    expect(arrows["Running Worn"]).toEqual([0.1, 0.2, 2]);
    expect(arrows["Running Failed"]).toEqual([0.02, 0, 0]);
    expect(arrows["Running Sold"].slice(0, 2)).toEqual([0, 0.01]);
    expect(refusal(arrows["Running Sold"][2])).toBe("#N/A Running to Sold is new, so there is no ratio to a rate before.");
    expect(refusal(arrows["Worn Running"][2])).toContain("#N/A");
  });

  it("matches unnamed tables by number", () => {
    expect(call("COMPARE", [[0, 1], [2, 0]], [[0, 1], [3, 0]])).toEqual([["State 2", "State 1", 2, 3, 1.5]]);
    expect(call("COMPARE", PUMP, PUMP.slice(1).map((row) => row.slice(1)))).toEqual([["no difference", "", "", "", ""]]);
  });
});

describe("FINGERPRINT", () => {
  it("changes with a rate, a name or the order of states, and with nothing else", () => {
    const print = call("FINGERPRINT", PUMP);
    const turned = [["", "Worn", "Running", "Failed"], ["Worn", "", "", 0.5], ["Running", 0.1, "", 0.02], ["Failed", "", 2, ""]];
    const renamed = PUMP.map((row) => row.map((cell) => (cell === "Worn" ? "Old" : cell)));
    const prints = [print, call("FINGERPRINT", turned), call("FINGERPRINT", renamed), call("FINGERPRINT", ONE_WAY), call("FINGERPRINT", PUMP.slice(1).map((row) => row.slice(1)))];
    expect(new Set(prints).size).toBe(prints.length);
    expect(call("FINGERPRINT", PUMP.map((row) => [...row, ""]).concat([["", "-", 0, "", ""] as never]))).toBe(print);
  });
});

describe("UPDOWN", () => {
  const figures = (...args: unknown[]) => Object.fromEntries((call("UPDOWN", ...args) as [string, unknown][]).map(([label, value]) => [label, value]));

  it("waits for the first failure from the start, from the first up state when left out, not at all from a down state", () => {
    expect(figures(PUMP, [["Running", "Worn"]])["mean time to first failure"]).toBeCloseTo(10, 13);
    expect(figures(PUMP, [["Running", "Worn"]], "Worn")["mean time to first failure"]).toBe(2);
    expect(figures(PUMP, [["Running", "Worn"]], "Failed")["mean time to first failure"]).toBe(0);
    expect(figures(PUMP, [["Worn"]])["mean time to first failure"]).toBe(2);
  });

  it("has no times of failures where none can occur", () => {
    const all = figures(PUMP, [[1], [1], [1]]);
    expect(all.availability).toBe(1);
    expect(all["failures per time unit"]).toBe(0);
    for (const label of ["mean up time", "mean down time", "mean time between failures", "mean time to first failure"]) expect(refusal(all[label]), label).toContain("#N/A");
  });
});

describe("INSPECTION", () => {
  it("gives the average unavailability of a unit tested every T: 1 − (1 − e^(−λT))/λT (common practice; its usual approximation is λT/2)", () => {
    for (const [rate, interval] of [[1e-6, 8760], [0.01, 100], [2, 5]]) {
      const x = rate * interval;
      const found = call("INSPECTION", [["", rate], ["", ""]], [["", ""], [1, ""]], interval)[0][1];
      expect(Math.abs(found / (1 + Math.expm1(-x) / x) - 1)).toBeLessThan(x < 0.1 ? 1e-10 : 1e-13);
    }
    expect(call("INSPECTION", [["", 1e-6], ["", ""]], [["", ""], [1, ""]], 8760)[0][1]).toBeCloseTo(8.76e-3 / 2, 4);
  });

  it("has no answer where inspections leave several closed classes", () => {
    expect(refusal(call("INSPECTION", [["", 1, 1], ["", "", ""], ["", "", ""]], [["", "", ""], ["", "", ""], ["", "", ""]], 1))).toContain("#N/A The long run depends on the start");
  });
});

describe("SAMPLEPATH", () => {
  it("begins at 0 in the start, ends before the horizon, and is headed on request", () => {
    const path = call("SAMPLEPATH", PUMP, "Worn", 30, 5) as [number, string][];
    expect(path[0]).toEqual([0, "Worn"]);
    expect(path.at(-1)![0]).toBeLessThan(30);
    expect(call("SAMPLEPATH", PUMP, "Worn", 30, 5, true)).toEqual([["time", "state"], ...path]);
    expect(call("SAMPLEPATH", PUMP, "Worn", 30, 6)).not.toEqual(path);
    expect(call("SAMPLEPATH", ONE_WAY, "Failed", 30, 5)).toEqual([[0, "Failed"]]);
    expect(call("SAMPLEPATH", PUMP, "Worn", 0, 5)).toEqual([[0, "Worn"]]);
    expect(refusal(call("SAMPLEPATH", PUMP, 1, 5, 1.5))).toContain("seed: 1.5 cannot be used");
  });
});
