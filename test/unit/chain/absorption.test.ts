import { describe, expect, test } from "vitest";
import { absorptionProbability, absorptionSd, certainty, everReached, meanAbsorption, timeBefore } from "../../../src/chain/absorption";
import { Generator, type Arrow } from "../../../src/chain/generator";
import { stationaryShares } from "../../../src/chain/stationary";
import { maskOf, relativeError } from "../../reference/battery";

describe("absorption", () => {
  const fork = Generator.fromArrows(5, [[0, 1, 1], [0, 2, 3], [1, 0, 2], [2, 3, 1], [3, 2, 1], [1, 4, 1]]);

  test("certainty is decided on the graph", () => {
    const { certain, possible, never } = certainty(fork, maskOf(5, [4]));
    expect([[...certain], [...possible], [...never]]).toEqual([[0, 0, 0, 0, 0], [1, 1, 0, 0, 0], [0, 0, 1, 1, 0]]);
    expect([...meanAbsorption(fork, maskOf(5, [4]))]).toEqual([Infinity, Infinity, Infinity, Infinity, 0]);
    // an exit of 1e-150 beside one of 1e150 still decides
    const rare = Generator.fromArrows(3, [[0, 1, 1e150], [0, 2, 1e-150], [1, 0, 1]]);
    expect(meanAbsorption(rare, maskOf(3, [1]))[0]).toBe(Infinity);
  });

  test("probabilities of ever meeting a target, exactly 0 and 1 where the graph says so", () => {
    const ever = everReached(fork, maskOf(5, [4]));
    expect(relativeError(ever[0], 1 / 10)).toBeLessThan(4e-16); // h0 = h1/4, h1 = 1/3 + 2/3 h0
    expect([...ever.subarray(2)]).toEqual([0, 0, 1]);
  });

  test("targets that are met on the way count, those behind them do not", () => {
    const row = Generator.fromArrows(3, [[0, 1, 2], [1, 2, 5]]);
    const { targets, probability } = absorptionProbability(row, maskOf(3, [1, 2]));
    expect([...targets]).toEqual([1, 2]);
    expect([...probability]).toEqual([1, 0, 1, 0, 0, 1]);
  });

  test("time before a target: finite in states left for good, infinite in a trap that can be entered", () => {
    const before = timeBefore(fork, Float64Array.of(1, 0, 0, 0, 0), maskOf(5, [4]));
    expect(relativeError(before[0], 0.3)).toBeLessThan(4e-16);
    expect(relativeError(before[1], 0.1)).toBeLessThan(4e-16);
    expect([...before.subarray(2)]).toEqual([Infinity, Infinity, 0]);
    expect([...timeBefore(fork, Float64Array.of(0, 0, 0, 0, 1), maskOf(5, [4]))]).toEqual([0, 0, 0, 0, 0]);
    // a trap that cannot be entered from the start has time 0
    expect([...timeBefore(fork, Float64Array.of(0, 0, 1, 0, 0), maskOf(5, [2]))]).toEqual([0, 0, 0, 0, 0]);
  });

  test("the spread of a nearly constant time: 10,000 equal stages", () => {
    const n = 10_000;
    const arrows = Array.from({ length: n }, (_, i): Arrow => [i, i + 1, 1e6]);
    const row = Generator.fromArrows(n + 1, arrows);
    expect(relativeError(absorptionSd(row, maskOf(n + 1, [n]))[0], Math.sqrt(n) / 1e6)).toBeLessThan(1e-13); // measured 1e-15
  });

  test("a start in several places, and targets nowhere", () => {
    expect([...meanAbsorption(fork, new Uint8Array(5))]).toEqual(new Array(5).fill(Infinity));
    expect([...everReached(fork, new Uint8Array(5))]).toEqual([0, 0, 0, 0, 0]);
    expect(absorptionProbability(fork, new Uint8Array(5)).probability.length).toBe(0);
  });

  test("long-run shares with several closed classes need a start", () => {
    expect(() => stationaryShares(fork)).toThrow("severalClosedClasses");
    const shares = stationaryShares(fork, Float64Array.of(1, 0, 0, 0, 0));
    [0, 0, 0.45, 0.45, 0.1].forEach((share, i) => expect(relativeError(shares[i], share)).toBeLessThan(1e-15));
    expect([...stationaryShares(Generator.fromArrows(1, []))]).toEqual([1]);
  });
});
