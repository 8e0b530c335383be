import { describe, expect, it } from "vitest";
import { cache, readOnce, tableIn } from "../../../src/functions/asking";
import { Cache } from "../../../src/functions/cache";
import { digestOf, sameArguments } from "../../../src/functions/digest";
import type { Cells } from "../../../src/table/rate-table";
import { BARE, PUMP } from "./tables";

describe("the store of tables and answers", () => {
  it("reads a table once, however many formulas name it", () => {
    const first = tableIn(PUMP);
    const before = cache.hits;
    for (let k = 0; k < 50; k++) expect(tableIn(PUMP.map((row) => [...row]))).toBe(first);
    expect(cache.hits - before).toBe(50);
    expect(tableIn(BARE)).not.toBe(first);
  });

  it("keeps refusals too, and throws them again", () => {
    const broken: Cells = [[0, -1], [1, 0]];
    let reads = 0;
    const read = () =>
      readOnce("test", broken, (cells) => {
        reads++;
        return { value: tableIn(cells), bytes: 1 };
      });
    expect(read).toThrow("rateNegative");
    expect(read).toThrow("rateNegative");
    expect(reads).toBe(1);
  });

  it("never mixes two tables, even where digests agree", () => {
    const store = new Cache(10_000);
    store.keep("k", [[[1]]], "one", 10);
    expect(store.find("k", [[[1]]])).toBe("one");
    expect(store.find("k", [[[2]]])).toBeUndefined();
    expect(store.find("other", [[[1]]])).toBeUndefined();
    expect([store.hits, store.misses]).toEqual([1, 2]);
  });

  it("stays within its bytes: what was not used for longest goes first", () => {
    const store = new Cache(1000);
    for (let k = 0; k < 10; k++) store.keep(`${k}`, [[[k]]], k, 100);
    expect([store.size, store.bytes]).toEqual([10, 1000]);
    expect(store.find("0", [[[0]]])).toBe(0);
    store.keep("10", [[[10]]], 10, 150);
    expect(store.bytes).toBeLessThanOrEqual(1000);
    expect(store.find("0", [[[0]]])).toBe(0);
    expect(store.find("1", [[[1]]])).toBeUndefined();
    expect(store.find("2", [[[2]]])).toBeUndefined();
    expect(store.find("3", [[[3]]])).toBe(3);
    store.keep("huge", [[[0]]], 0, 300);
    expect(store.find("huge", [[[0]]])).toBeUndefined();
    store.keep("3", [[[3]]], 33, 50);
    expect(store.find("3", [[[3]]])).toBe(33);
  });
});

describe("digests", () => {
  it("tell apart what is not the same, down to the type and the place of a cell", () => {
    const lists: Cells[][] = [
      [[[1]]],
      [[["1"]]],
      [[[true]]],
      [[[1, 2]]],
      [[[1], [2]]],
      [[[1, 2, 3, 4]]],
      [[[1, 2], [3, 4]]],
      [[[""]]],
      [[[null]]],
      [[[0]]],
      [[[-0]]],
      [[[{ fault: "#N/A" }]]],
      [[["#N/A"]]],
      [[["ab", "c"]]],
      [[["a", "bc"]]],
      [[[1]], [[2]]],
      [[[2]], [[1]]],
    ];
    expect(new Set(lists.map((args) => digestOf(...args))).size).toBe(lists.length);
    lists.forEach((left, i) => lists.forEach((right, j) => expect(sameArguments(left, right)).toBe(i === j)));
    expect(digestOf(null, [[1]])).not.toBe(digestOf([[1]], null));
  });

  it("do not collide over 100,000 tables that differ in one digit", () => {
    const seen = new Set<string>();
    for (let k = 0; k < 100_000; k++) seen.add(digestOf([[0, 1 + k * 2 ** -40], [2, 0]]));
    expect(seen.size).toBe(100_000);
  });
});
