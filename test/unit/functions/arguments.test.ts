import { describe, expect, it } from "vitest";
import { HostError } from "../../support/functions";
import { BARE, call, LIST, ONE_WAY, PUMP, refusal } from "./tables";

describe("the forms of a table", () => {
  const wide = (rows: readonly (readonly unknown[])[], blank: unknown) => [...rows.map((row) => [...row, blank, blank]), rows[0].map(() => blank).concat([blank, blank])];

  it("give the same answer", () => {
    const expected = call("TRANSITION", PUMP, 3);
    for (const table of [BARE, LIST, [["from", "to", "rate"], ...LIST], wide(PUMP, ""), wide(PUMP, null), wide(PUMP, 0), wide(BARE, ""), wide(BARE, null), wide(LIST, 0)])
      expect(call("TRANSITION", table, 3)).toEqual(expected);
    for (const blank of [0, null, undefined, "-", "–", " "]) expect(call("TRANSITION", PUMP.map((row) => row.map((cell) => (cell === "" ? blank : cell))), 3)).toEqual(expected);
  });

  it("give results that read back as tables", () => {
    for (const [name, args] of [
      ["GENERATOR", [PUMP]],
      ["GENERATOR", [BARE]],
      ["GENERATOR", [LIST]],
      ["FROMLIST", [LIST]],
      ["BIRTHDEATH", [[[1, 2]], [[3, 4]]]],
      ["REPAIRGROUP", [3, 0.1, 1, 1]],
      ["QUEUE", [2, 1, 2, 4]],
      ["COMBINE", [PUMP, LIST]],
      ["STAGES", [PUMP, "Worn", 3]],
      ["LUMP", [PUMP, [["on", "on", "off"]], true]],
    ] as [string, unknown[]][]) {
      const pad = Array(name === "REPAIRGROUP" ? 3 : 0).fill(null);
      const plain = call(name, ...args, ...pad) as number[][];
      const named = call(name, ...args, ...(name === "LUMP" ? [] : pad), true) as unknown[][];
      expect(named[0][0], name).toBe("");
      expect(named.slice(1).map((row) => row.slice(1))).toEqual(plain);
      expect(named[0].slice(1)).toEqual(named.slice(1).map((row) => row[0]));
      expect(call("GENERATOR", named)).toEqual(plain);
      expect(call("GENERATOR", named, true)).toEqual(named);
      expect(call("GENERATOR", plain)).toEqual(plain);
      for (const row of plain) expect(Math.abs(row.reduce((sum, rate) => sum + rate, 0))).toBeLessThan(1e-14);
    }
  });

  it("keep numbers as names through a round trip", () => {
    const numbered = [["state", 1, 2], [1, 0, 5], [2, 7, 0]];
    const named = call("GENERATOR", numbered, true);
    expect(named).toEqual([["", "1", "2"], ["1", -5, 5], ["2", 7, -7]]);
    expect(call("GENERATOR", named, true)).toEqual(named);
  });
});

describe("states and starts", () => {
  it("go by name, number, mask or probabilities", () => {
    const expected = call("SURVIVAL", PUMP, 1, 3, 2);
    for (const start of ["Running", " RUNNING ", 1, [[1]], [["running"]], null, undefined, [[1, 0, 0]], [[1], [0], [0]], [[1, "", null]]])
      for (const targets of ["Failed", 3, [["failed"]], [[3], [""]], [["", 0, "Failed"]], [[false, false, true]], [[0], [0], [1]], [["", null, 1]]])
        expect(call("SURVIVAL", PUMP, start, targets, 2)).toEqual(expected);
    expect(call("SURVIVAL", BARE, "State 1", "state 3", 2)).toEqual(expected);
    expect(call("SURVIVAL", ONE_WAY, null, null, 2)).toEqual(expected);
  });

  it("read a mask before anything else", () => {
    const two = [[0, 1], [3, 0]];
    expect(call("AVAILABILITY", two, [[1, 1]])).toEqual([[1]]);
    expect(call("AVAILABILITY", two, [[1, 0]])).toEqual([[0.75]]);
    expect(call("AVAILABILITY", two, [[1, 2]])).toEqual([[1]]);
    expect(call("AVAILABILITY", two, 1)).toEqual([[0.75]]);
    expect(call("AVAILABILITY", PUMP, [[1, 2]])[0][0]).toBeCloseTo(20 / 21, 14);
  });

  it("normalise a start within 1e-9 of 1", () => {
    expect(call("DISTRIBUTION", BARE, [[0.5, 0.5, 1e-10]], 0)[0].reduce((sum: number, p: number) => sum + p, 0)).toBeCloseTo(1, 15);
    expect(refusal(call("DISTRIBUTION", BARE, [[0.5, 0.4, 0]], 0))).toBe("#VALUE! start: the probabilities sum to 0.9. Make them sum to 1.");
  });

  it.each<[unknown, string]>([
    ["Broken", '#VALUE! start: there is no state "Broken". Give a state\'s name or a number up to 3.'],
    [4, "#VALUE! start: there is no state 4. Give a number from 1 to 3, or a name."],
    [0, "#VALUE! start: there is no state 0. Give a number from 1 to 3, or a name."],
    [1.5, "#VALUE! start: there is no state 1.5. Give a number from 1 to 3, or a name."],
    [true, '#VALUE! start: there is no state "TRUE". Give a state\'s name or a number up to 3.'],
    [[[""]], "#VALUE! start: no state is given. Give at least one state by name or number."],
    [[[0.5, 0.5]], "#VALUE! start: 1 × 2 cells were given. Give one state, or 3 probabilities in one row or column."],
    [[[2, -1, 0]], '#VALUE! start, row 1, column 1: "2" is not a probability. Enter 0 to 1.'],
    [[["a", "b", "c"]], '#VALUE! start, row 1, column 1: "a" is not a probability. Enter 0 to 1.'],
    [[[1, new HostError("#N/A"), 0]], "#VALUE! start, row 1, column 2: the cell holds the error #N/A. Correct it first."],
  ])("refuse the start %j", (start, sentence) => {
    expect(refusal(call("DISTRIBUTION", PUMP, start, 1))).toBe(sentence);
  });

  it.each<[unknown, string]>([
    ["Broken", '#VALUE! targets: there is no state "Broken". Give a state\'s name or a number up to 3.'],
    [[["Worn", "Broken"]], '#VALUE! targets, row 1, column 2: there is no state "Broken". Give a state\'s name or a number up to 3.'],
    [[["", ""]], "#VALUE! targets: no state is given. Give at least one state by name or number."],
    [[[0, 0, 0]], "#VALUE! targets: no state is given. Give at least one state by name or number."],
    [[[7]], "#VALUE! targets: there is no state 7. Give a number from 1 to 3, or a name."],
    [null, "#VALUE! targets: none are given and no state is absorbing. Name the states that end the wait."],
  ])("refuse the targets %j", (targets, sentence) => {
    expect(refusal(call("MEANABSORPTION", PUMP, targets))).toBe(sentence);
  });

  it("tell a number that could be a heading from a state number", () => {
    const levels = [["level", 20, 10], [20, 0, 1], [10, 2, 0]];
    expect(call("SURVIVAL", levels, 20, 10, 0)).toEqual([[1]]);
    expect(call("SURVIVAL", levels, 1, 2, 0)).toEqual([[1]]);
    const turned = [["level", 2, 1], [2, 0, 1], [1, 2, 0]];
    expect(refusal(call("SURVIVAL", turned, 2, "1", 0))).toBe('#VALUE! start: 2 heads state 1, but state 2 is "1". Give the name as text.');
    expect(call("SURVIVAL", turned, "2", "1", 0)).toEqual([[1]]);
  });
});

describe("times and other numbers", () => {
  it("keep the shape of their range", () => {
    const times = [[0, 1], [2, 3], [4, ""]];
    const found = call("SURVIVAL", PUMP, 1, 3, times) as number[][];
    expect(found.map((row) => row.length)).toEqual([2, 2, 2]);
    expect(found[0][0]).toBe(1);
    expect(found[2][1]).toBe(1);
    times.flat().forEach((time, k) => expect(found.flat()[k]).toBeCloseTo(call("SURVIVAL", PUMP, 1, 3, time)[0][0], 14));
    expect(call("DISTRIBUTION", PUMP, 1, [[0], [1]])).toHaveLength(2);
    expect(call("DISTRIBUTION", PUMP, 1, [[0, 1], [2, 3]])).toHaveLength(4);
  });

  it.each<[string, unknown[], string]>([
    ["TRANSITION", [[["", "Good", "Bad"], ["Good", 0.9, 0.1], ["Bad", 0.3, 0.7]], 1], "#VALUE! Row 1 (Good), column 1: 0.9, and the row sums to 1: probabilities? Convert with CTMC.FROMPROBABILITY."],
    ["TRANSITION", [[[100, 0], [30, 70]], 1], "#VALUE! Row 1, column 1: 100, and the row sums to 100: percent? Convert with CTMC.FROMPROBABILITY."],
    ["TRANSITION", [PUMP, -1], "#VALUE! time: -1 cannot be used. Enter a number, 0 or more."],
    ["TRANSITION", [PUMP, "soon"], '#VALUE! time: "soon" is not a number. Enter a number, 0 or more.'],
    ["TRANSITION", [PUMP, [[1, 2]]], "#VALUE! time: 1 × 2 cells were given. Give one value."],
    ["TRANSITION", [PUMP, null], "#VALUE! time: nothing was given. This argument is needed."],
    ["TRANSITION", [PUMP, 1, "yes"], '#VALUE! headings: "yes" is neither TRUE nor FALSE. Enter TRUE, FALSE, 1 or 0.'],
    ["TRANSITION", [PUMP, 1, 2], '#VALUE! headings: "2" is neither TRUE nor FALSE. Enter TRUE, FALSE, 1 or 0.'],
    ["TRANSITION", [null, 1], "#VALUE! rates: nothing was given. This argument is needed."],
    ["DISTRIBUTION", [PUMP, 1, [[1], [-2]]], "#VALUE! times, row 2, column 1: -2 cannot be used. Enter a number, 0 or more."],
    ["DISTRIBUTION", [PUMP, 1, [[1], [true]]], '#VALUE! times, row 2, column 1: "TRUE" is not a number. Enter a number, 0 or more.'],
    ["DISTRIBUTION", [PUMP, 1, [[1], [new HostError("#DIV/0!")]]], "#VALUE! times, row 2, column 1: the cell holds the error #DIV/0!. Correct it first."],
    ["PERCENTILE", [PUMP, 1, 3, 1], "#VALUE! fractions: 1 cannot be used. Enter a number, 0 or more and below 1."],
    ["COST", [PUMP, 1, 5, [[1, 2]]], "#VALUE! stateCosts: 1 × 2 cells were given. Give one row or column of 3, one a state."],
    ["COST", [PUMP, 1, 5, [[1, 2, 3]], null, -0.1], "#VALUE! discount: -0.1 cannot be used. Enter a number, 0 or more."],
    ["COST", [PUMP, 1, 5, [[1, 2, 3]], [[1, 2]]], "#VALUE! jumpCosts: 1 × 2 cells were given. Give 3 × 3, or with headings."],
    ["SETTLING", [PUMP, 0], "#VALUE! tolerance: 0 cannot be used. Enter a number, above 0 and below 1."],
    ["INSPECTION", [PUMP, [["", "", ""], ["", "", ""], [1, "", ""]], 0], "#VALUE! interval: 0 cannot be used. Enter a number, above 0."],
    ["INSPECTION", [PUMP, [["", "", ""], ["", "", ""], [0.5, "", ""]], 1], "#VALUE! resets, row 3 (Failed): the probabilities sum to 0.5. Make them sum to 1, or leave the row blank."],
    ["QUEUE", [1, 1, 3, 2], "#VALUE! places: 2 places do not hold 3 servers' customers. Enter at least as many."],
    ["REPAIRGROUP", [2.5, 1, 1, 1], "#VALUE! units: 2.5 cannot be used. Enter a whole number, 1 or more."],
    ["REPAIRGROUP", [2, 1, 1, 1, 3], "#VALUE! running: 3 cannot run when there are 2 units. Enter no more than the units."],
    ["BIRTHDEATH", [[[1, 2]], [[1]]], "#VALUE! 2 upRates and 1 downRates were given. Give as many downward as upward."],
    ["STAGES", [ONE_WAY, "Failed", 2], '#VALUE! state: no arrow leaves "Failed", so its stay has no mean to keep. Choose a state with exits.'],
    ["LUMP", [PUMP, [["a", "a", "b"]]], "#VALUE! groups: Running and Worn go to b at 0.02 and 0.5. Split them, or set approximate."],
    ["FROMPROBABILITY", [[[90, 10], [20, 80]], 1], "#VALUE! Row 1: the entries sum to 100, so they are percent. Divide the table by 100."],
    ["FROMPROBABILITY", [[[0.9, 0.2], [0.2, 0.8]], 1], "#VALUE! Row 1: the probabilities sum to 1.1. Make each row sum to 1."],
    ["FROMCOUNTS", [[["", 3], [-2, ""]], [[1, 1]]], "#VALUE! Row 2, column 1: -2 is not a count. Enter 0 or more."],
    ["FROMCOUNTS", [[[4, 3], [2, ""]], [[1, 1]]], "#VALUE! Row 1, column 1: a jump from a state to itself is no jump. Clear the diagonal of the counts."],
    ["FROMCOUNTS", [[["", "A", "B"], ["A", "", 3], ["B", 2, ""]], [[0, 1]]], "#VALUE! timeInState, state 1 (A): 0, but 3 jumps left it. Enter the time observed."],
    ["FROMLOG", [[["P", 0, "Up"], ["P", 9, "Down"]], 5], "#VALUE! log, row 2: time 9 is after the end, 5. Correct the row or the end."],
    ["FROMLOG", [[["unit", "time", "state"], ["P", "noon", "Up"]], 5], '#VALUE! log, row 2: "noon" is not a time. Enter a number or a date.'],
    ["FROMLOG", [[["P", 1, "Up"], ["P", 1, "Down"]], 5], "#VALUE! log, rows 1 and 2: P enters two states at time 1. Correct one."],
    ["RATEINTERVAL", [0, 5, 0.9, true], "#VALUE! count: 0 events, but the observation is said to end at the last one. Enter FALSE for failureTruncated."],
    ["SAMPLEPATH", [PUMP, 1, 1e9, 1], "#VALUE! The history has more than 50000 rows. Shorten the horizon, 1000000000."],
    ["TRANSITION", [PUMP, 1e30], "#VALUE! Time 1e+30 × largest exit rate 2 is over 1e+18. Shorten it, or ask for the long run."],
    ["PHASED", [[...BARE, ...BARE], [[1, 2, 3, 4]], 1], "#VALUE! ratesStack: 6 rows cannot be shared by 4 durations. Stack one table of equal height for each."],
    ["PHASED", [[...BARE, [0, -1, 0], [1, 0, 0], [0, 0, 0]], [[1, 2]], 1], "#VALUE! Row 4, column 2: -1 is not a rate. Enter 0 or more."],
    ["RATEFORGOAL", [PUMP, "Failed", "Failed", "Running", 0.5], "#VALUE! to: this is the from-state too. Name two different states."],
  ])("%s refuses with its sentence", (name, args, sentence) => {
    expect(refusal(call(name, ...args))).toBe(sentence);
    expect(sentence.length - sentence.indexOf(" ") - 1).toBeLessThanOrEqual(120);
  });
});

describe("answers that do not exist", () => {
  it.each<[string, unknown[], string]>([
    ["STATIONARY", [[[0, 1, 1], [0, 0, 0], [0, 0, 0]]], "#N/A The long run depends on the start: {State 2}, {State 3} are never left. Give a start."],
    ["AVAILABILITY", [[["", "A", "B"], ["A", "", ""], ["B", "", ""]].map((row) => row.map((cell) => (cell === "" ? 0 : cell))), 1], "#N/A The long run depends on the start: {A}, {B} are never left. Give a start."],
    ["COSTUNTIL", [PUMP, 1, [[1, 2, 3]]], "#N/A No state is absorbing and no targets are given: the cost grows without end. Give targets, or a discount above 0."],
    ["RATEFORGOAL", [PUMP, "Failed", "Running", "Running", 0.99], "#N/A No rate of this arrow gives 0.99: the share stays between 1.66667e-11 and 0.833333."],
    ["ELASTICITY", [ONE_WAY, "Running"], "#N/A The share in these states is 0, so no rate changes it by a percentage."],
    ["MEANTIMEELASTICITY", [PUMP, "Failed", "Failed"], "#N/A The start is a target: the mean time is 0 and no rate changes it by a percentage."],
  ])("%s says why", (name, args, sentence) => {
    expect(refusal(call(name, ...args))).toBe(sentence);
  });

  it("stand in their own cells of a spill", () => {
    const fork = [["", "A", "B", "C"], ["A", "", 1, 1], ["B", "", "", ""], ["C", "", "", ""]];
    const [[a], [b], [c]] = call("MEANABSORPTION", fork, "B");
    expect(refusal(a)).toBe("#N/A From A a target is not met with certainty: the mean time is infinite.");
    expect(b).toBe(0);
    expect(refusal(c)).toContain("#N/A From C");
    const [[low, high]] = call("PERCENTILE", fork, "A", "B", [[0.2, 0.6]]);
    expect(low).toBeCloseTo(-Math.log(1 - 0.4) / 2, 14);
    expect(refusal(high)).toBe("#N/A Only 0.5 ever meet a target, so the fraction 0.6 is never reached.");
    expect(refusal(call("HOLDING", fork)[1][0])).toBe("#N/A No arrow leaves B: the stay has no end.");
    const updown = call("UPDOWN", fork, "A");
    expect(updown.map(([label]: [string]) => label)).toEqual([
      "availability",
      "unavailability",
      "failures per time unit",
      "mean up time",
      "mean down time",
      "mean time between failures",
      "mean time to first failure",
    ]);
    expect(refusal(updown[0][1])).toContain("The long run depends on the start: {B}, {C}");
    expect(updown[6][1]).toBe(0.5);
  });
});

describe("limits of a spill", () => {
  const list = Array.from({ length: 20_000 }, (_, i) => [`L${i}`, `L${i + 1}`, 1]);

  it("are told with the size, before any work", () => {
    expect(refusal(call("TRANSITION", list, 1))).toBe("#VALUE! The result has 20001 × 20001 cells, over the limit of 16384 columns. Ask for less at once.");
    expect(refusal(call("STATIONARY", list))).toBe("#VALUE! The result has 1 × 20001 cells, over the limit of 16384 columns. Ask for less at once.");
    expect(refusal(call("REPAIRGROUP", 316, 1, 1, 1))).toBe("#VALUE! The result has 317 × 317 cells, over the limit of 100000 cells. Ask for less at once.");
    expect(refusal(call("REPAIRGROUP", 315, 1, 1, 1, null, null, null, true))).toContain("317 × 317 cells");
    expect(call("REPAIRGROUP", 315, 1, 1, 1)).toHaveLength(316);
  });
});

describe("optional arguments", () => {
  it("may be left out in every combination", () => {
    const omitted = [null, undefined];
    for (const nothing of omitted) {
      expect(call("STATIONARY", PUMP, nothing, nothing)).toEqual(call("STATIONARY", PUMP));
      expect(call("MEANABSORPTION", ONE_WAY, nothing, 1)[0][0]).toBe("Running");
      expect(call("AVAILABILITY", PUMP, 1, nothing, 0)).toEqual([[1]]);
      expect(call("AVAILABILITY", PUMP, 1, 2, nothing)).toEqual(call("AVAILABILITY", PUMP, 1));
      expect(call("ELASTICITY", PUMP, 1, nothing, nothing, true)[0]).toEqual(["", "Running", "Worn", "Failed"]);
      expect(call("COSTELASTICITY", PUMP, [[1, 2, 3]], nothing, nothing, nothing)).toHaveLength(3);
      expect(call("LUMP", PUMP, [["a", "b", "c"]], nothing, true)[0]).toEqual(["", "a", "b", "c"]);
      expect(call("CHECK", PUMP, nothing)[0]).toHaveLength(4);
      expect(call("RATEINTERVAL", 3, 10, nothing, nothing)).toEqual(call("RATEINTERVAL", 3, 10));
    }
    const invocation = { onCanceled: undefined };
    expect(call("STATIONARY", PUMP, null, null, invocation)).toEqual(call("STATIONARY", PUMP));
    expect(call("STATIONARY", PUMP, invocation)).toEqual(call("STATIONARY", PUMP));
  });

  it("match headings of jump costs and resets to the table's states, in any order", () => {
    const costs = [[0, 1, 2], [3, 0, 4], [5, 6, 0]];
    const expected = call("COST", PUMP, 1, 10, [[0, 0, 0]], costs);
    const order = [2, 0, 1];
    const names = ["Running", "Worn", "Failed"];
    const turned = [["", ...order.map((j) => names[j])], ...order.map((i) => [names[i].toUpperCase(), ...order.map((j) => costs[i][j])])];
    expect(call("COST", PUMP, 1, 10, [[0, 0, 0]], turned)).toEqual(expected);
    expect(refusal(call("COST", PUMP, 1, 10, [[0, 0, 0]], [["", "Running", "Worn", "Worn"], ...costs.map((row, i) => [names[i], ...row])]))).toBe(
      '#VALUE! jumpCosts: columns 2 and 3 are both headed "Worn". Name each state once.',
    );
    const resets = [["", "", ""], ["", "", ""], [1, 0, 0]];
    const headed = [["", ...names], ...resets.map((row, i) => [names[i], ...row])];
    expect(call("INSPECTION", ONE_WAY, headed, 5)).toEqual(call("INSPECTION", ONE_WAY, resets, 5));
  });
});

describe("a runtime's garbage", () => {
  const anything = [null, undefined, "", "x", -1, 0, 1e300, NaN, Infinity, true, [], [[]], [[null]], [["a"]], [[1, 2], [3]], new HostError("#REF!"), [[new HostError("#NUM!")]], {}, "a".repeat(5000)];

  it("never throws anything but the host's error with a short sentence", async () => {
    const { functions } = await import("./tables");
    for (const name of Object.keys(functions))
      for (const first of [...anything, PUMP])
        for (const rest of anything) {
          const found = call(name, first, rest, rest, rest, rest, rest, rest, rest);
          const errors = found instanceof HostError ? [found] : Array.isArray(found) ? found.flat().filter((cell) => cell instanceof HostError) : [];
          for (const error of errors) {
            expect(["#VALUE!", "#N/A"]).toContain(error.code);
            expect(error.message.length, `${name}: ${error.message}`).toBeLessThanOrEqual(120);
            expect(error.message, name).toMatch(/[.…]$/);
            expect(error.message, `${name} ${String(first)} ${String(rest)}`).not.toMatch(/NaN|undefined|null|failed \(/);
          }
          if (Array.isArray(found)) for (const cell of found.flat()) if (typeof cell === "number") expect(Number.isFinite(cell)).toBe(true);
          if (name === "CHECK") expect(errors).toEqual([]);
        }
  });
});
