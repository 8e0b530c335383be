import { describe, expect, test } from "vitest";
import { birthDeath } from "../../../src/chain/birth-death";
import { combine } from "../../../src/chain/combine";
import { fromCounts } from "../../../src/chain/counts";
import { Generator } from "../../../src/chain/generator";
import { fromLog, type LogEntry } from "../../../src/chain/log";
import { lump } from "../../../src/chain/lump";
import type { Problem } from "../../../src/chain/problem";
import { queue } from "../../../src/chain/queue";
import { repairGroup } from "../../../src/chain/repair-group";
import { stages } from "../../../src/chain/stages";
import { absorptionSd, meanAbsorption } from "../../../src/chain/absorption";
import { stationaryShares } from "../../../src/chain/stationary";
import { maskOf, relativeError } from "../../reference/battery";

const problemOf = (ask: () => unknown): Problem => {
  try {
    ask();
  } catch (problem) {
    return problem as Problem;
  }
  throw new Error("answered");
};
const dense = (chain: Generator): number[][] =>
  Array.from({ length: chain.size }, (_, i) => Array.from({ length: chain.size }, (__, j) => chain.rateOf(i, j)));

describe("levels and queues", () => {
  test("one up, one down", () => {
    const { generator, names } = birthDeath([1, 2], [3, 0]);
    expect(dense(generator)).toEqual([[0, 1, 0], [3, 0, 2], [0, 0, 0]]);
    expect(names).toEqual(["level 0", "level 1", "level 2"]);
    expect(problemOf(() => birthDeath([1], [1, 2]))).toMatchObject({ code: "unequalLengths", details: { up: 1, down: 2 } });
    expect(problemOf(() => birthDeath([-1], [1])).code).toBe("notRate");
  });

  test("loss by Erlang's recursion, waiting by Erlang C", () => {
    // B(N, A) = A B / (N + A B); common practice
    const load = 7.5;
    let blocked = 1;
    for (let n = 1; n <= 12; n++) {
      blocked = (load * blocked) / (n + load * blocked);
      const shares = stationaryShares(queue(load, 1, n, n).generator);
      expect(relativeError(shares[n], blocked)).toBeLessThan(1e-14);
    }
    // P(wait) = N B / (N − A (1 − B)); places far beyond need
    const shares = stationaryShares(queue(load, 1, 12, 400).generator);
    const wait = shares.subarray(12).reduce((a, b) => a + b, 0);
    expect(relativeError(wait, (12 * blocked) / (12 - load * (1 - blocked)))).toBeLessThan(1e-13);
  });

  test("a queue needs a place for each server", () => {
    expect(queue(1, 2, 2, 2).names).toEqual(["0 present", "1 present", "2 present"]);
    expect(problemOf(() => queue(1, 1, 3, 2))).toMatchObject({ code: "placesBelowServers", details: { places: 2, servers: 3 } });
    expect(problemOf(() => queue(1, 1, 0, 2)).code).toBe("notWholeNumber");
    expect(problemOf(() => queue(Infinity, 1, 1, 2)).code).toBe("notRate");
  });
});

describe("repair group", () => {
  test("all run, two crews", () => {
    expect(dense(repairGroup(3, 0.1, 2, 2).generator)).toEqual([[0, 0.30000000000000004, 0, 0], [2, 0, 0.2, 0], [0, 4, 0, 0.1], [0, 0, 4, 0]]);
  });

  test("standbys fail at their own rate, no crew mends nothing", () => {
    const { generator, names } = repairGroup(3, 0.5, 2, 0, { running: 1, standbyFailureRate: 0.125 });
    expect(dense(generator)).toEqual([[0, 0.75, 0, 0], [0, 0, 0.625, 0], [0, 0, 0, 0.5], [0, 0, 0, 0]]);
    expect(names).toEqual(["0 down", "1 down", "2 down", "3 down"]);
  });

  test("the common cause takes every unit down while any runs", () => {
    const { generator } = repairGroup(3, 0.5, 2, 1, { running: 2, standbyFailureRate: 0.125, commonCause: 0.25 });
    // 0 down: 2 · 0.75 · 0.5 + 0.125 alone, 0.125 together; 2 down: last unit alone and together make 0.5
    expect(dense(generator)).toEqual([[0, 0.875, 0, 0.125], [2, 0, 0.75, 0.125], [0, 2, 0, 0.5], [0, 0, 2, 0]]);
  });

  test("refuses what makes no group", () => {
    expect(problemOf(() => repairGroup(0, 1, 1, 1)).code).toBe("notWholeNumber");
    expect(problemOf(() => repairGroup(2, 1, 1, -1)).code).toBe("notWholeNumber");
    expect(problemOf(() => repairGroup(2, 1, 1, 1, { running: 3 })).code).toBe("runningAboveUnits");
    expect(problemOf(() => repairGroup(2, 1, 1, 1, { commonCause: 1.1 })).code).toBe("notWithin");
    expect(problemOf(() => repairGroup(2, -1, 1, 1)).code).toBe("notRate");
  });
});

describe("combine, stages, lump", () => {
  const ab = { generator: Generator.fromArrows(2, [[0, 1, 1], [1, 0, 2]]), names: ["up", "down"] };

  test("the first chain's state varies slowest", () => {
    const both = combine(ab, { generator: Generator.fromArrows(2, [[0, 1, 5]]), names: null });
    expect(both.names).toEqual(["up + State 1", "up + State 2", "down + State 1", "down + State 2"]);
    expect(dense(both.generator)).toEqual([[0, 5, 1, 0], [0, 0, 0, 1], [2, 0, 0, 5], [0, 2, 0, 0]]);
  });

  test("stages stand where the state stood", () => {
    const chain = { generator: Generator.fromArrows(3, [[0, 1, 1], [1, 2, 2], [1, 0, 4], [2, 1, 8]]), names: ["Up", "Repair", "Test"] };
    const staged = stages(chain, 1, 3);
    expect(staged.names).toEqual(["Up", "Repair (1 of 3)", "Repair (2 of 3)", "Repair (3 of 3)", "Test"]);
    expect(dense(staged.generator)).toEqual([[0, 1, 0, 0, 0], [0, 0, 18, 0, 0], [0, 0, 0, 18, 0], [12, 0, 0, 0, 6], [0, 8, 0, 0, 0]]);
    expect(dense(stages(chain, 1, 1).generator)).toEqual(dense(chain.generator));
    expect(stages(chain, 1, 1).names[1]).toBe("Repair (1 of 1)");
  });

  test("the stay in k stages has the same mean and 1/k of the variance", () => {
    const { generator } = stages({ generator: Generator.fromArrows(2, [[0, 1, 0.25]]), names: null }, 0, 16);
    expect(relativeError(meanAbsorption(generator, maskOf(17, [16]))[0], 4)).toBeLessThan(1e-15);
    expect(relativeError(absorptionSd(generator, maskOf(17, [16]))[0], 1)).toBeLessThan(1e-15);
  });

  test("a state without exits has no stay to divide", () => {
    expect(problemOf(() => stages({ generator: Generator.fromArrows(2, [[0, 1, 1]]), names: ["a", "b"] }, 1, 2)))
      .toMatchObject({ code: "stateWithoutExits", details: { state: 1, name: "b" } });
    expect(problemOf(() => stages(ab, 0, 0)).code).toBe("notWholeNumber");
  });

  const pairs = combine(ab, ab);

  test("equal units merge by number down; groups keep their first spelling and order", () => {
    const merged = lump(pairs, ["None", "one", " One", "two"]);
    expect(merged.names).toEqual(["None", "one", "two"]);
    expect(dense(merged.generator)).toEqual([[0, 2, 0], [2, 0, 1], [0, 4, 0]]);
  });

  test("refused with the largest disagreement, merged on request by long-run shares", () => {
    const chain = { generator: Generator.fromArrows(3, [[0, 1, 1], [1, 2, 1], [2, 0, 3], [1, 0, 1]]), names: ["a", "b", "c"] };
    const problem = problemOf(() => lump(chain, ["x", "y", "y"]));
    expect(problem).toMatchObject({ code: "notLumpable", details: { stateName: "b", otherName: "c", group: "x", rate: 1, otherRate: 3 } });
    expect(problem.details.disagreement).toBeCloseTo(2 / 3, 15);
    const merged = lump(chain, ["x", "y", "y"], true);
    const shares = stationaryShares(chain.generator);
    expect(relativeError(merged.generator.rateOf(1, 0), (shares[1] + 3 * shares[2]) / (shares[1] + shares[2]))).toBeLessThan(1e-15);
    // the long-run shares of the groups are kept
    expect(relativeError(stationaryShares(merged.generator)[0], shares[0])).toBeLessThan(1e-15);
  });

  test("a group without long-run share is averaged evenly; rounding does not refuse", () => {
    const chain = { generator: Generator.fromArrows(3, [[0, 2, 1], [1, 2, 3]]), names: null };
    expect(lump(chain, ["a", "a", "b"], true).generator.rateOf(0, 1)).toBe(2);
    const rounded = Generator.fromArrows(4, [[0, 2, 0.1], [0, 3, 0.2], [1, 2, 0.3]]);
    expect(lump({ generator: rounded, names: null }, ["a", "a", "b", "b"]).generator.rateOf(0, 1)).toBeCloseTo(0.3, 15);
    const beyond = Generator.fromArrows(3, [[0, 2, 1], [1, 2, 1 + 2e-12]]);
    expect(problemOf(() => lump({ generator: beyond, names: null }, ["a", "a", "b"])).code).toBe("notLumpable");
    const within = Generator.fromArrows(3, [[0, 2, 1], [1, 2, 1 + 5e-13]]);
    expect(lump({ generator: within, names: null }, ["a", "a", "b"]).names).toEqual(["a", "b"]);
  });

  test("every state needs one group", () => {
    expect(problemOf(() => lump(ab, ["x"]))).toMatchObject({ code: "groupsNotOnePerState", details: { groups: 1, states: 2 } });
    expect(problemOf(() => lump(ab, ["x", " "]))).toMatchObject({ code: "groupMissing", details: { state: 1 } });
  });
});

describe("counts and logs", () => {
  test("jumps over time", () => {
    const counts = { generator: Generator.fromArrows(3, [[0, 1, 6], [1, 0, 5]]), names: ["a", "b", "c"] };
    const { generator, names } = fromCounts(counts, [300, 10, 0]);
    expect(dense(generator)).toEqual([[0, 0.02, 0], [0.5, 0, 0], [0, 0, 0]]);
    expect(names).toEqual(["a", "b", "c"]);
    expect(problemOf(() => fromCounts(counts, [300, 0, 0]))).toMatchObject({ code: "countsWithoutTime", details: { state: 1, name: "b", count: 5 } });
    expect(problemOf(() => fromCounts(counts, [300, -1, 0])).code).toBe("timeInStateNegative");
    expect(problemOf(() => fromCounts(counts, [300, 10])).code).toBe("timesNotOnePerState");
  });

  const entry = (unit: string, time: number, state: string, row: number): LogEntry => ({ unit, time, state, row });

  test("rows in any order, repeated states, units of one row, spellings", () => {
    const result = fromLog([
      entry("P2", 10, "Down", 1), entry("p1 ", 46_000, "up", 2), entry("P2", 0, " Up ", 3), entry("P1", 46_020, "UP", 4),
      entry("P1", 46_050, "down", 5), entry("P1", 46_060, "up", 6), entry("P3", 46_090, "Spare", 7), entry("P2", 46_000, "Up", 8),
    ], 46_100);
    expect(result.names).toEqual(["Down", "up", "Spare"]);
    expect([...result.timeInState]).toEqual([46_000 - 10 + 10, 10 + 50 + 40 + 100, 10]);
    expect([...result.counts]).toEqual([0, 2, 0, 2, 0, 0, 0, 0, 0]);
    expect(result.generator.rateOf(1, 0)).toBe(2 / 200);
  });

  test("refuses a row after the end and two states at one time, naming the rows", () => {
    expect(problemOf(() => fromLog([entry("P1", 5, "Up", 0), entry("P1", 11, "Down", 1)], 10)))
      .toMatchObject({ code: "logAfterEnd", details: { row: 1, time: 11, end: 10 } });
    expect(problemOf(() => fromLog([entry("P1", 5, "Up", 0), entry("P2", 5, "Up", 1), entry("p1", 5, "Down", 2)], 10)))
      .toMatchObject({ code: "logTwoStates", details: { row: 2, firstRow: 0, unit: "p1", time: 5 } });
    expect(fromLog([entry("P1", 5, "Up", 0), entry("P1", 5, "up", 1)], 10).timeInState[0]).toBe(5);
    expect(problemOf(() => fromLog([], 10)).code).toBe("logEmpty");
  });
});
