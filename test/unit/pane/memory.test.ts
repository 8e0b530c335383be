import { describe, expect, it } from "vitest";
import { Memory, MEMORY_KEY, readDocument } from "../../../src/pane/memory";

const place = { sheet: "Rates", row: 1, column: 1 };
const accepted = { key: "k", code: "noExit", sentence: "s", reason: "r", initials: "AB", date: "2026-11-30" };

function store(initial?: unknown) {
  let value = initial;
  const writes: unknown[] = [];
  return {
    writes,
    get: async () => structuredClone(value),
    set: async (key: string, next: unknown) => {
      expect(key).toBe(MEMORY_KEY);
      value = JSON.parse(JSON.stringify(next));
      writes.push(value);
    },
  };
}

describe("what is kept with the workbook", () => {
  it("starts empty, keeps by sheet and top-left cell, and is read back", async () => {
    const kept = store();
    const memory = new Memory(kept);
    await memory.load();
    await memory.update(place, (entry) => ({ ...entry, unit: "day" }));
    await memory.update({ ...place, row: 9 }, (entry) => ({ ...entry, unit: "h" }));
    const again = new Memory(kept);
    await again.load();
    expect(again.table(place).unit).toBe("day");
    expect(again.table({ ...place, row: 9 }).unit).toBe("h");
    expect(again.table({ ...place, sheet: "Other" }).unit).toBeUndefined();
    expect(kept.writes.at(-1)).toMatchObject({ version: 1 });
  });

  it("writes two quick changes one after the other, so that neither is lost", async () => {
    const memory = new Memory(store());
    await memory.load();
    await Promise.all([
      memory.update(place, (entry) => ({ ...entry, unit: "day" })),
      memory.update(place, (entry) => ({ ...entry, answers: { largestArrow: "right" } })),
    ]);
    expect(memory.table(place)).toEqual({ ...place, unit: "day", answers: { largestArrow: "right" } });
  });

  it("follows a table that has moved, and no other table of the same states", async () => {
    const kept = store();
    const memory = new Memory(kept);
    await memory.load();
    const states = ["Up", "Down"];
    const key = JSON.stringify(["noExit", "Rates", states]);
    await memory.update(place, (entry) => ({ ...entry, unit: "day", accepted: [{ ...accepted, key }] }), states);
    const lower = { ...place, sheet: "Rates 2027", row: 4 };
    // The old place still holds a table: the other one is a copy and has nothing kept.
    expect(memory.table(lower, states, () => false)).toEqual(lower);
    expect(memory.table(lower, ["Up", "Off"], () => true)).toEqual(lower);
    const found = memory.table(lower, states, () => true);
    expect(found).toMatchObject({ ...lower, unit: "day" });
    expect(found.accepted?.[0].key).toBe(JSON.stringify(["noExit", "Rates 2027", states]));
    await memory.update(lower, (entry) => ({ ...entry, answers: { a: "b" } }), states, () => true);
    expect(await kept.get()).toEqual({ version: 1, tables: [{ ...found, answers: { a: "b" } }] });
  });

  it("takes in what another pane has written meanwhile", async () => {
    const kept = store();
    const [one, other] = [new Memory(kept), new Memory(kept)];
    await one.load();
    await other.load();
    await other.update(place, (entry) => ({ ...entry, unit: "day" }));
    await one.update(place, (entry) => ({ ...entry, accepted: [accepted] }));
    expect(one.table(place)).toEqual({ ...place, unit: "day", accepted: [accepted] });
  });

  it("leaves a document of a newer version untouched", async () => {
    const newer = { version: 2, tables: { shape: "unknown" } };
    const kept = store(newer);
    const memory = new Memory(kept);
    await memory.load();
    expect(memory.state).toBe("newer");
    await memory.update(place, (entry) => ({ ...entry, unit: "day" }));
    expect(kept.writes).toEqual([]);
    expect(await kept.get()).toEqual(newer);
  });

  it.each([["not JSON {"], [42], [[1, 2]], [{ tables: [] }], [{ version: 1, tables: "lost" }], [{ version: 0, tables: [] }]])(
    "keeps aside what it cannot read: %j",
    async (damaged) => {
      const kept = store(damaged);
      const memory = new Memory(kept);
      await memory.load();
      expect(memory.setAside).toBe(1);
      await memory.update(place, (entry) => ({ ...entry, unit: "day" }));
      expect(await kept.get()).toEqual({ version: 1, tables: [{ ...place, unit: "day" }], setAside: [damaged] });
      await memory.update(place, (entry) => ({ ...entry, unit: "h" }));
      expect(await kept.get()).toMatchObject({ setAside: [damaged] });
    },
  );

  it("keeps what can be read of a damaged entry, sets the rest aside, and carries unknown fields along", () => {
    const { document } = readDocument({
      version: 1,
      colour: "kept",
      tables: [
        { ...place, unit: 7, accepted: [accepted, { key: 1 }], later: { x: 1 } },
        { row: 3 },
        { ...place, row: 5, signOff: { fingerprint: "A" }, answers: { q: 1 } },
      ],
      setAside: ["older"],
    });
    expect(document.colour).toBe("kept");
    expect(document.tables).toEqual([{ ...place, accepted: [accepted], later: { x: 1 } }, { ...place, row: 5 }]);
    expect(document.setAside).toEqual([
      "older",
      { ...place, unit: 7, accepted: [{ key: 1 }] },
      { row: 3 },
      { ...place, row: 5, signOff: { fingerprint: "A" }, answers: { q: 1 } },
    ]);
  });
});
