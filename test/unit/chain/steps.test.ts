import { describe, expect, it } from "vitest";
import { Problem } from "../../../src/chain/problem";
import { finish, settle, within, type Steps } from "../../../src/chain/steps";

function* countTo(limit: number, done: number[] = []): Steps<number> {
  for (let i = 1; i <= limit; i++) {
    done.push(i);
    yield i / limit;
  }
  return limit;
}

 
function* refuse(): Steps<number> {
  throw new Problem("horizonTooLong", { time: 1 });
}

describe("steps", () => {
  it("finish runs to the end", () => {
    expect(finish(countTo(1000))).toBe(1000);
  });

  it("settle answers at once what fits into the budget", () => {
    expect(settle(countTo(10), { budgetMs: 1e6, sliceMs: 1 })).toBe(10);
  });

  it("settle goes on in slices when the budget is spent, reporting progress in order", async () => {
    const seen: number[] = [];
    const answer = settle(countTo(5), { budgetMs: 0, sliceMs: 0, onProgress: (p) => seen.push(p) });
    expect(answer).toBeInstanceOf(Promise);
    expect(await answer).toBe(5);
    expect(seen).toEqual([0.2, 0.4, 0.6, 0.8, 1]);
  });

  it("settle lets other tasks run between slices", async () => {
    const done: number[] = [];
    const answer = settle(countTo(50, done), { budgetMs: 0, sliceMs: 0 });
    let atOtherTask = -1;
    setTimeout(() => (atOtherTask = done.length), 0);
    await answer;
    expect(atOtherTask).toBeGreaterThan(0);
    expect(atOtherTask).toBeLessThan(50);
  });

  it("settle stops between slices when the signal is given, and does no further work", async () => {
    const done: number[] = [];
    const stop = new AbortController();
    const answer = settle(countTo(1e6, done), {
      budgetMs: 0,
      sliceMs: 0,
      signal: stop.signal,
      onProgress: () => done.length >= 3 && stop.abort(),
    });
    await expect(answer).rejects.toMatchObject({ name: "AbortError" });
    expect(done.length).toBe(3);
  });

  it("settle refuses to start under a signal already given", () => {
    const done: number[] = [];
    expect(() => settle(countTo(5, done), { budgetMs: 1, sliceMs: 1, signal: AbortSignal.abort() })).toThrow();
    expect(done).toEqual([]);
  });

  it("a problem is thrown as it is within the budget and rejects the promise after it", async () => {
    expect(() => settle(refuse(), { budgetMs: 1, sliceMs: 1 })).toThrow(Problem);
    function* late(): Steps<number> {
      yield 0.5;
      return yield* refuse();
    }
    await expect(settle(late(), { budgetMs: 0, sliceMs: 0 })).rejects.toBeInstanceOf(Problem);
  });

  it("within maps the progress of a part onto its share of the whole", () => {
    const part = within(countTo(2), 0.5, 1);
    expect([part.next().value, part.next().value, part.next()]).toEqual([0.75, 1, { done: true, value: 2 }]);
  });
});
