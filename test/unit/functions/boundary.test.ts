import { runInNewContext } from "node:vm";
import { describe, expect, it } from "vitest";
import { bundled, ERROR_CODES, HostError, loadFunctions, type HostFunction } from "../../support/functions";

/** Costs more than the budget everywhere: the elasticities at a time of a full table. */
const FULL = Array.from({ length: 6 }, (_, i) => Array.from({ length: 6 }, (_, j) => (i === j ? "" : 1 + ((7 * i + 3 * j) % 11))));
/** A clock that makes every look at it cost 30 ms, so that the budget ends early on any machine. */
const busyClock = () => {
  let now = 0;
  return { now: () => (now += 30) };
};
const withTimers = { setTimeout, Date: busyClock(), performance: busyClock() };

type Result = number[][] | Promise<number[][]>;
const elasticity = (functions: Record<string, HostFunction>, time: number, invocation?: object): Result => functions.ELASTICITY(FULL, 1, 1, time, null, invocation);

describe("the script", () => {
  it("loads with nothing but CustomFunctions and registers everything before it returns", () => {
    const ids = Object.keys(loadFunctions());
    expect(ids).toHaveLength(51);
    expect(new Set(ids).size).toBe(51);
  });

  it("answers at once where the runtime has neither workers nor timers", () => {
    expect(Array.isArray(elasticity(loadFunctions({ more: { Date: busyClock() } }), 1))).toBe(true);
  });

  it("answers with a promise in slices where there are timers", async () => {
    const functions = loadFunctions({ more: withTimers });
    const pending = elasticity(functions, 1);
    expect(pending).not.toBeInstanceOf(Array);
    const shared = elasticity(functions, 1);
    const found = await pending;
    expect(found).toEqual(elasticity(loadFunctions(), 1));
    expect(await shared).toEqual(found);
    expect(elasticity(functions, 1)).toEqual(found); // kept, hence at once
  });

  it("stops when the last cell that waits is cancelled, and can be asked again", async () => {
    const functions = loadFunctions({ more: withTimers });
    const [one, two]: { onCanceled?: () => void }[] = [{}, {}];
    const pending = elasticity(functions, 2, one) as Promise<number[][]>;
    const other = elasticity(functions, 2, two) as Promise<number[][]>;
    one.onCanceled!();
    two.onCanceled!();
    await expect(pending).rejects.toMatchObject({ code: "#N/A", message: "The calculation was cancelled. Recalculate to start it again." });
    await expect(other).rejects.toMatchObject({ code: "#N/A" });
    expect(await elasticity(functions, 2)).toHaveLength(6);
  });

  it("refuses with the host's error, now or later", async () => {
    const functions = loadFunctions({ more: withTimers });
    const far = FULL.map((row) => row.map((rate) => (typeof rate === "number" ? rate * 1e17 : rate)));
    await expect(Promise.resolve().then(() => elasticity(functions, 1e3))).resolves.toHaveLength(6);
    await expect(Promise.resolve().then(() => functions.ELASTICITY(far, 1, 1, 1e3))).rejects.toMatchObject({ code: "#VALUE!" });
  });
});

describe("work aside", () => {
  /** A worker that runs the same script in a context of its own. */
  function workers(script: string, behaviour: "works" | "fails") {
    const started: { terminated: boolean }[] = [];
    class FakeWorker {
      onmessage: ((event: { data: unknown }) => void) | null = null;
      onerror: (() => void) | null = null;
      terminated = false;
      private readonly listeners: ((event: { data: unknown }) => void)[] = [];
      constructor(readonly address: string) {
        started.push(this);
        if (behaviour === "fails") {
          setTimeout(() => this.onerror?.(), 0);
          return;
        }
        const post = (data: unknown) => void (this.terminated || this.onmessage?.({ data: structuredClone(data) }));
        loadWorker(script, {
          importScripts: () => undefined,
          postMessage: post,
          addEventListener: (_: string, listener: (event: { data: unknown }) => void) => void this.listeners.push(listener),
        });
      }
      postMessage(data: unknown): void {
        const copy = structuredClone(data);
        setTimeout(() => this.terminated || this.listeners.forEach((listen) => listen({ data: copy })), 0);
      }
      terminate(): void {
        this.terminated = true;
      }
    }
    return { FakeWorker, started };
  }

  const page = (FakeWorker: unknown) => ({ ...withTimers, Worker: FakeWorker, document: { currentScript: { src: "https://example.org/functions.js" } } });

  it("is done by a worker of the same script, whose refusals arrive as such", async () => {
    const { FakeWorker, started } = workers(bundled(), "works");
    const functions = loadFunctions({ more: page(FakeWorker) });
    const pending = elasticity(functions, 1);
    expect(started).toHaveLength(1);
    expect(started[0]).toMatchObject({ address: "https://example.org/functions.js" });
    expect(await pending).toEqual(elasticity(loadFunctions(), 1));
    expect(elasticity(functions, 1)).toBeInstanceOf(Array);
    expect(started).toHaveLength(1);
  });

  it("ends the worker when cancelled and starts another for the next order", async () => {
    const { FakeWorker, started } = workers(bundled(), "works");
    const functions = loadFunctions({ more: page(FakeWorker) });
    const invocation: { onCanceled?: () => void } = {};
    const pending = elasticity(functions, 1, invocation) as Promise<number[][]>;
    const next = elasticity(functions, 3) as Promise<number[][]>;
    invocation.onCanceled!();
    await expect(pending).rejects.toBeInstanceOf(HostError);
    expect(started[0].terminated).toBe(true);
    expect(await next).toHaveLength(6);
    expect(started).toHaveLength(2);
  });

  it("falls back to slices where the worker cannot start, and asks for none again", async () => {
    const { FakeWorker, started } = workers(bundled(), "fails");
    const functions = loadFunctions({ more: page(FakeWorker) });
    expect(await elasticity(functions, 1)).toEqual(elasticity(loadFunctions(), 1));
    expect(await elasticity(functions, 2)).toHaveLength(6);
    expect(started).toHaveLength(1);
  });
});

describe("the host's values", () => {
  it("arrive in every form hosts send them", () => {
    const functions = loadFunctions();
    expect(functions.HOLDING(0)[0][0]).toMatchObject({ code: "#N/A" });
    const scalar = functions.SURVIVAL([[0, 1], [1, 0]], 1, 2, 0);
    expect(scalar).toEqual([[1]]);
    expect(functions.TRANSITION([[0, 1], [1, 0]], [0])).toEqual([[1, 0], [0, 1]]);
    for (const code of [ERROR_CODES.divisionByZero, "divisionByZero"])
      expect(() => functions.TRANSITION([[0, new HostError(code)], [1, 0]], 1)).toThrow("Row 1, column 2: the cell holds the error #DIV/0!. Correct it first.");
  });

  it("are not changed, and a changed result is not kept", () => {
    const functions = loadFunctions();
    const rates = Object.freeze([Object.freeze([0, 1]), Object.freeze([1, 0])]);
    const found = functions.TRANSITION(rates, 1);
    const kept = structuredClone(found);
    found[0][0] = "spoilt";
    expect(functions.TRANSITION(rates, 1)).toEqual(kept);
  });
});

function loadWorker(script: string, globals: object): void {
  runInNewContext(script, { ...globals, setTimeout });
}
