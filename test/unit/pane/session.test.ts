import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import { cellText, placeText } from "../../../src/pane/address";
import { MEMORY_KEY } from "../../../src/pane/memory";
import { Session } from "../../../src/pane/session";
import type { RangeAddress, SharedWorkbook } from "../../../src/pane/workbook";
import { FakeWorkbook, type Typed } from "../../support/fake-workbook";

/** A pump station of our own: a title above, a note beside, results below the table. */
const PUMP: Typed[][] = [
  ["Rates per day"],
  ["", "from \\ to", "Running", "Degraded", "Repair"],
  ["", "Running", "", 0.02, 0.004],
  ["", "Degraded", 0.1, "", 0.12],
  ["", "Repair", 0.5, "", ""],
  [],
  ["", "Where will it be?"],
];
const TABLE: RangeAddress = { sheet: "Pump", row: 1, column: 1, rows: 4, columns: 4 };
const cell = (sheet: string, row: number, column: number): RangeAddress => ({ sheet, row, column, rows: 1, columns: 1 });

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

async function settled(): Promise<void> {
  await vi.advanceTimersByTimeAsync(3000);
}

async function started(sheets: Record<string, Typed[][]> = { Pump: PUMP }, hidden: string[] = []) {
  const workbook = new FakeWorkbook(sheets, hidden);
  const session = new Session(workbook, { now: () => new Date(2026, 11, 1, 10) });
  await session.start();
  await settled();
  const place = () => (session.state.subject ? placeText(session.state.subject.address) : null);
  const select = async (range: RangeAddress) => {
    await workbook.select(range);
    await settled();
  };
  const open = (code: string) => {
    const item = session.state.looked?.open.find((candidate) => candidate.finding.code === code);
    if (!item) throw new Error(`no open finding ${code}: ${session.state.looked?.open.map(({ finding }) => finding.code).join(", ")}`);
    return item;
  };
  const codes = () => session.state.looked?.open.map(({ finding }) => finding.code) ?? [];
  return { workbook, session, place, select, open, codes };
}

describe("what the pane looks at", () => {
  it("takes the table around the active cell, without the title, the note and what stands below", async () => {
    const { place, select, session } = await started();
    expect(place()).toBeNull();
    await select(cell("Pump", 3, 2));
    expect(place()).toBe("Pump B2:E5");
    expect(session.state.looked?.layout).toMatchObject({ size: 3, form: "square", headings: "both" });
    expect(session.state.looked?.claims).toHaveLength(5);
  });

  it("leaves a column of totals out and says so", async () => {
    const totals: Typed[][] = [["from", "Up", "Down", "Total"], ["Up", "", 1, 1], ["Down", 2, "", 2]];
    const { place, select, session } = await started({ Pump: totals });
    await select(cell("Pump", 1, 1));
    expect(place()).toBe("Pump A1:C3");
    expect(session.state.subject?.leftOut).toEqual(["column Total"]);
  });

  it("keeps the table while a person works elsewhere, and moves on to another table", async () => {
    const other: Typed[][] = [["", "Up", "Down"], ["Up", "", 1], ["Down", 2, ""]];
    const { place, select } = await started({ Pump: PUMP, Other: other });
    await select(cell("Pump", 2, 3));
    await select(cell("Pump", 30, 12));
    expect(place()).toBe("Pump B2:E5");
    await select(cell("Pump", 6, 1));
    expect(place()).toBe("Pump B2:E5");
    await select(cell("Other", 1, 1));
    expect(place()).toBe("Other A1:C3");
  });

  it("lets a selected block that is no table go once it is left", async () => {
    const figures: Typed[][] = [[1, 2, 3], [4, 5, 6]];
    const { place, select } = await started({ Pump: PUMP, Figures: figures });
    await select({ sheet: "Figures", row: 0, column: 0, rows: 2, columns: 3 });
    expect(place()).toBe("Figures A1:C2");
    await select(cell("Figures", 1, 1));
    expect(place()).toBe("Figures A1:C2");
    await select(cell("Pump", 6, 6));
    expect(place()).toBeNull();
  });
  it("takes a selection of several cells as it is, blank margins left out", async () => {
    const { place, select } = await started();
    await select({ ...TABLE, row: 1, rows: 8, columns: 9 });
    expect(place()).not.toBe("Pump B2:E5");
    await select({ ...TABLE, column: 0, columns: 7 });
    expect(place()).toBe("Pump B2:E5");
    await select({ ...TABLE, row: 2, column: 2, rows: 3, columns: 3 });
    expect(place()).toBe("Pump C3:E5");
  });

  it("takes neither a few cells inside a table nor the answers of formulas for a table", async () => {
    const answers: Typed[][] = [
      [{ formula: "=CTMC.TRANSITION(Pump!B2:E5,7)", value: 0.9 }, { formula: "", value: 0.1 }],
      [{ formula: "", value: 0.2 }, { formula: "", value: 0.8 }],
    ];
    const built = answers.map((row, r) => (r === 0 ? [{ formula: "=CTMC.GENERATOR(Pump!B2:E5)", value: -1 }, { formula: "", value: 1 }] : row));
    const { place, select } = await started({ Pump: PUMP, Answers: answers, Built: built });
    await select(cell("Pump", 2, 3));
    await select({ ...TABLE, row: 3, column: 3, rows: 2, columns: 2 });
    expect(place()).toBe("Pump B2:E5");
    await select({ sheet: "Answers", row: 0, column: 0, rows: 2, columns: 2 });
    expect(place()).toBe("Pump B2:E5");
    await select({ sheet: "Built", row: 0, column: 0, rows: 2, columns: 2 });
    expect(place()).toBe("Built A1:B2");
  });

  it("stays when held", async () => {
    const { place, select, session } = await started({ Pump: PUMP, Other: [["", "Up", "Down"], ["Up", "", 1], ["Down", 2, ""]] });
    await select(cell("Pump", 2, 3));
    session.hold(true);
    await select(cell("Other", 1, 1));
    expect(place()).toBe("Pump B2:E5");
    session.hold(false);
    await settled();
    expect(place()).toBe("Other A1:C3");
  });

  it("does not follow its own jumps", async () => {
    const { place, session, select } = await started({ Pump: PUMP, Other: [["", "Up", "Down"], ["Up", "", 1], ["Down", 2, ""]] });
    await select(cell("Pump", 2, 3));
    await session.goTo(cell("Other", 1, 1));
    await settled();
    expect(place()).toBe("Pump B2:E5");
  });

  it("grows with the table it found", async () => {
    const { workbook, place, select } = await started();
    await select(cell("Pump", 2, 3));
    workbook.type("Pump", 1, 5, "Overhaul");
    workbook.type("Pump", 5, 1, "Overhaul");
    workbook.type("Pump", 5, 2, 0.07);
    workbook.type("Pump", 2, 5, 0.001);
    await settled();
    expect(place()).toBe("Pump B2:F6");
  });

  it("lets the table go when its sheet does, and removes its listeners on dispose", async () => {
    const { workbook, session, select, place } = await started();
    await select(cell("Pump", 2, 3));
    vi.spyOn(workbook, "sheets").mockResolvedValue([]);
    await workbook.addSheet("New", [[1]]);
    await settled();
    expect(place()).toBeNull();
    session.dispose();
    expect(workbook.listenerCount).toBe(0);
  });

  it("lands on the table selected last, though the workbook is looked through meanwhile", async () => {
    const { workbook, session, place, select } = await started({ Pump: PUMP, Other: [["", "Up", "Down"], ["Up", "", 1], ["Down", 2, ""]] });
    await select(cell("Pump", 2, 3));
    const read = workbook.read.bind(workbook);
    vi.spyOn(workbook, "read").mockImplementation(async (range) => {
      if (range.sheet === "Other") await new Promise((done) => setTimeout(done, 2000)); // a slow host
      return read(range);
    });
    await workbook.select(cell("Other", 1, 1));
    await vi.advanceTimersByTimeAsync(500);
    session.refresh().catch(() => undefined);
    await vi.advanceTimersByTimeAsync(9000);
    expect(place()).toBe("Other A1:C3");
  });

  it("is not disturbed by a selection that holds no cells", async () => {
    const { workbook, session, place, select } = await started();
    await select(cell("Pump", 2, 3));
    vi.spyOn(workbook, "selection").mockRejectedValue(new Error("A chart is selected."));
    await workbook.select(cell("Pump", 30, 3));
    await settled();
    expect(session.state.trouble).toBeNull();
    expect(place()).toBe("Pump B2:E5");
  });

  it("says in words what a host refuses", async () => {
    const { workbook, session, select } = await started();
    await select(cell("Pump", 2, 3));
    vi.spyOn(workbook, "read").mockRejectedValueOnce(new Error("The sheet Pump is protected."));
    await session.refresh();
    expect(session.state.trouble).toBe("The sheet Pump is protected.");
    expect(session.state.busy).toBe(false);
  });
});

describe("following cells", () => {
  it("finds a fault as it is typed and drops it when it is mended", async () => {
    const { workbook, select, codes } = await started();
    await select(cell("Pump", 2, 3));
    expect(codes()).not.toContain("rateNegative");
    workbook.type("Pump", 2, 3, -0.02);
    await settled();
    expect(codes()[0]).toBe("rateNegative");
    workbook.type("Pump", 2, 3, 0.02);
    await settled();
    expect(codes()).not.toContain("rateNegative");
  });
});

describe("what is kept with the table", () => {
  it("keeps the unit and the answers, and asks again on demand", async () => {
    const { workbook, session, select } = await started({ Pump: PUMP.map((row, r) => (r === 1 ? ["", "", ...row.slice(2)] : r === 0 ? [] : row)) });
    await select(cell("Pump", 2, 3));
    await session.setUnit("per days");
    expect(session.state.looked?.entry.unit).toBe("day");
    const [question] = session.state.looked!.questions;
    await session.answer(question, question.choices[0].answer);
    expect(session.state.looked?.questions).toEqual([]);
    expect(workbook.kept.get(MEMORY_KEY)).toEqual({
      version: 1,
      tables: [{ sheet: "Pump", row: 1, column: 1, states: ["Running", "Degraded", "Repair"], unit: "day", answers: { [question.code]: question.choices[0].answer } }],
    });
    await session.forgetAnswers();
    expect(session.state.looked?.questions).toHaveLength(1);
    await session.setUnit(" ");
    expect(session.state.looked?.entry.unit).toBeUndefined();
  });

  it("accepts a finding with reason and initials; it comes back when the values change, with what was said", async () => {
    const { workbook, session, select, open, codes } = await started({ Pump: PUMP.map((row, r) => (r === 4 ? ["", "Repair", "", "", ""] : row)) });
    await select(cell("Pump", 2, 3));
    const code = open("noExit").finding.code;
    await session.accept(open(code), " final here ", " AB ");
    expect(codes()).not.toContain(code);
    expect(session.state.looked?.accepted[0].accepted).toMatchObject({ code, reason: "final here", initials: "AB", date: "2026-12-01" });
    expect(session.lastInitials).toBe("AB");
    workbook.type("Pump", 1, 4, "Mending");
    workbook.type("Pump", 4, 1, "Mending");
    await settled();
    expect(open(code).formerly).toMatchObject({ initials: "AB" });
    await session.accept(open(code), "still", "CD");
    expect(session.state.looked?.entry.accepted).toHaveLength(1);
    await session.takeBack(session.state.looked!.accepted[0]);
    expect(codes()).toContain(code);
  });

  it("follows a renamed sheet: unit, accepted findings and sign-off stay with the table", async () => {
    const { workbook, session, select, open } = await started();
    await select(cell("Pump", 2, 3));
    await session.setUnit("day");
    await session.accept(open("diagonalBlank"), "by habit", "AB");
    await session.signOff("A. Berg");
    workbook.rename("Pump", "Pump 2027");
    await settled();
    await select(cell("Pump 2027", 2, 3));
    expect(session.state.looked?.entry).toMatchObject({ sheet: "Pump 2027", unit: "day", signOff: { checker: "A. Berg" } });
    expect(session.state.looked?.accepted.map(({ finding }) => finding.code)).toEqual(["diagonalBlank"]);
  });

  it("suggests the unit that the labels above the table speak of", async () => {
    const { session, select } = await started();
    await select(cell("Pump", 2, 3));
    await session.openUnit();
    expect(session.state.opened).toEqual({ kind: "unit", suggestion: "day" });
  });

  it("signs off, and lists the arrows that differ afterwards", async () => {
    const { workbook, session, select } = await started();
    await select(cell("Pump", 2, 3));
    await session.signOff("A. Berg");
    expect(session.state.looked?.entry.signOff).toMatchObject({ checker: "A. Berg", date: "2026-12-01", fingerprint: session.state.looked?.fingerprint });
    expect(session.state.looked?.changes).toBeNull();
    workbook.type("Pump", 2, 3, 0.03);
    await settled();
    expect(session.state.looked?.changes).toEqual([expect.objectContaining({ from: "Running", to: "Degraded", before: 0.02, after: 0.03 })]);
    workbook.type("Pump", 2, 3, 0.02);
    await settled();
    expect(session.state.looked?.changes).toBeNull();
    await session.withdrawSignOff();
    expect(session.state.looked?.entry.signOff).toBeUndefined();
  });

  it("keeps nothing over a newer document", async () => {
    const { workbook, session, select } = await started();
    workbook.kept.set(MEMORY_KEY, { version: 9 });
    await session.refresh();
    await select(cell("Pump", 2, 3));
    await session.setUnit("day");
    expect(session.state.memory).toBe("newer");
    expect(workbook.kept.get(MEMORY_KEY)).toEqual({ version: 9 });
  });
});

describe("remedies", () => {
  it("shows before and after, changes the cells in one step, and puts back", async () => {
    const { workbook, session, select, open } = await started();
    await select(cell("Pump", 2, 3));
    await session.openRemedy(open("diagonalBlank"));
    const { opened } = session.state;
    expect(opened?.kind === "remedy" && opened.preview.changes.map(({ before, after }) => [before, after])).toEqual([
      ["blank", "−0.024"], ["blank", "−0.22"], ["blank", "−0.5"],
    ]);
    expect(workbook.history).toHaveLength(0);
    await session.applyRemedy(open("diagonalBlank"));
    expect(workbook.history).toHaveLength(1);
    expect(workbook.formula("Pump", 2, 2)).toMatch(/^=-/);
    expect(workbook.formula("Pump", 4, 4)).toMatch(/^=-/);
    expect(workbook.value("Pump", 2, 3)).toBe(0.02);
    await settled();
    await session.undo();
    expect(workbook.value("Pump", 2, 2)).toBe("");
    expect(workbook.history).toHaveLength(2);
  });

  it("writes nothing when the cells changed since the preview, and puts nothing back over a person's change", async () => {
    const { workbook, session, select, open } = await started();
    await select(cell("Pump", 2, 3));
    await session.openRemedy(open("diagonalBlank"));
    workbook.type("Pump", 3, 3, -0.22);
    await session.applyRemedy(open("diagonalBlank"));
    expect(session.state.trouble).toContain("Nothing was written");
    expect(workbook.value("Pump", 2, 2)).toBe("");
    await settled();
    await session.openRemedy(open("diagonalBlank"));
    await session.applyRemedy(open("diagonalBlank"));
    workbook.type("Pump", 2, 2, 7);
    await session.undo();
    expect(session.state.trouble).toContain("has changed since");
    await settled(); // the change itself is taken in, and does not wipe the sentence
    expect(session.state.trouble).toContain("has changed since");
    expect(workbook.value("Pump", 2, 2)).toBe(7);
  });

  it("undoes formulas that show something else by now, since rates have changed", async () => {
    const { workbook, session, select, open } = await started();
    await select(cell("Pump", 2, 3));
    await session.openRemedy(open("diagonalBlank"));
    await session.applyRemedy(open("diagonalBlank"));
    workbook.type("Pump", 2, 2, { formula: workbook.formula("Pump", 2, 2), value: -0.5 });
    await session.undo();
    expect(session.state.trouble).toBeNull();
    expect(workbook.formula("Pump", 2, 2)).toBe("");
  });

  it("closes a preview when the table changes under it", async () => {
    const { workbook, session, select, open } = await started();
    await select(cell("Pump", 2, 3));
    await session.openRemedy(open("diagonalBlank"));
    workbook.type("Pump", 2, 3, 0.03);
    await settled();
    expect(session.state.opened).toBeNull();
    await session.applyRemedy(open("diagonalBlank"));
    expect(workbook.value("Pump", 2, 2)).toBe("");
  });

  it("writes a new table where the sheet is blank, beside what stands there already", async () => {
    const means: Typed[][] = [
      ["from", "to", "mean time (days)", "", "kept", "here"],
      ["Up", "Down", 50, "", 1, 2],
      ["Down", "Up", 2, "", "", ""],
    ];
    const { workbook, session, select, open } = await started({ Pump: means });
    await select({ sheet: "Pump", row: 0, column: 0, rows: 3, columns: 3 });
    const item = open("meanTimes");
    await session.openRemedy(item);
    const { opened } = session.state;
    if (opened?.kind !== "remedy" || !opened.preview.place) throw new Error("no new table");
    expect(cellText(opened.preview.place)).toMatch(/^H1:/); // E and F are taken, G stays free
    await session.applyRemedy(item);
    expect(workbook.value("Pump", 1, 2)).toBe(50);
    expect(workbook.value("Pump", 1, 4)).toBe(1);
    expect([workbook.value("Pump", 1, 7), workbook.value("Pump", 1, 8)]).toEqual(["Up", "Down"]);
    expect(session.state.notice?.jump?.range).toEqual(opened.preview.place);
    await session.undo();
    expect(workbook.value("Pump", 1, 7)).toBe("");
  });

  it("does not write into cells that a formula fills, and names cells whose formula would go", async () => {
    const spilled = PUMP.map((row, r) => (r === 2 ? ["", "Running", { formula: "", value: -1 }, 0.02, 0.004] : r === 3 ? ["", "Degraded", 0.1, { formula: "=-1", value: -1 }, 0.12] : row));
    const { session, select, open } = await started({ Pump: spilled });
    await select(TABLE);
    await session.openRemedy(open("rowSum"));
    const { opened } = session.state;
    if (opened?.kind !== "remedy") throw new Error("no preview");
    expect(opened.preview.obstacle).toContain("A formula fills these cells");
    expect(opened.preview.write).toBeNull();
  });

  it("answers a protected sheet with the host's sentence", async () => {
    const { workbook, session, select, open } = await started();
    await select(cell("Pump", 2, 3));
    await session.openRemedy(open("diagonalBlank"));
    workbook.protectedSentence = "The sheet Pump is protected; unprotect it to change cells.";
    await session.applyRemedy(open("diagonalBlank"));
    expect(session.state.trouble).toBe("The sheet Pump is protected; unprotect it to change cells.");
  });

  it("takes a neighbouring row in and goes back", async () => {
    const { session, select, open, place } = await started();
    await select({ ...TABLE, rows: 3, columns: 3 });
    const before = place();
    await session.openRemedy(open("rangeShort"));
    expect(place()).not.toBe(before);
    await session.undo();
    expect(place()).toBe(before);
  });
});

describe("life with people who have no add-in", () => {
  it("relinks, freezes and puts back, and repeats what the host refuses", async () => {
    const { workbook, session } = await started();
    const place = { sheet: "Plan", row: 3, column: 1, formula: "=CTMC.STATIONARY(B2:E5)" };
    let frozen: { sheet: string; row: number; column: number; formula: string; rows: number; columns: number; date: string; fingerprint: null }[] = [];
    let unlinked = [place];
    const shared: SharedWorkbook = {
      calculation: async () => "manual",
      recalculate: async () => undefined,
      unlinked: async () => unlinked,
      relink: async () => {
        unlinked = [];
        return { done: 1, refused: ["The sheet Old is protected; 2 formulas there stay as they are."] };
      },
      frozen: async () => frozen,
      freeze: async (now) => {
        frozen = [{ ...place, rows: 1, columns: 3, date: now.toISOString(), fingerprint: null }];
        return { done: 1, refused: [], sheet: "Frozen formulas" };
      },
      thaw: async () => {
        frozen = [];
        return { done: 1, refused: [] };
      },
    };
    Object.assign(workbook, { shared });
    session.show("book");
    await settled();
    expect(session.state.sharing).toEqual({ calculation: "manual", unlinked: [place], frozen: [] });
    await session.share("relink");
    expect(session.state.notice?.text).toBe("1 formula relinked. The sheet Old is protected; 2 formulas there stay as they are.");
    expect(session.state.sharing?.unlinked).toEqual([]);
    await session.share("freeze");
    expect(session.state.notice?.text).toBe("1 formula frozen. They are listed on the sheet Frozen formulas.");
    expect(session.state.sharing?.frozen).toHaveLength(1);
    await session.share("thaw");
    expect(session.state.sharing?.frozen).toEqual([]);
    await session.share("recalculate");
    expect(session.state.notice?.text).toBe("Recalculated.");
  });
});

describe("the whole workbook", () => {
  it("finds tables on hidden sheets too and marks itself stale when cells change", async () => {
    const { workbook, session } = await started({ Pump: PUMP, Old: [["", "Up", "Down"], ["Up", "", 1], ["Down", 2, ""]] }, ["Old"]);
    expect(session.state.book.scanned?.scan.tables.map(({ address }) => placeText(address))).toEqual(["Pump B2:E5", "Old A1:C3"]);
    workbook.type("Pump", 2, 3, 0.5);
    await vi.advanceTimersByTimeAsync(300);
    expect(session.state.book.stale).toBe(true);
    await settled();
    expect(session.state.book.stale).toBe(false);
  });

  it("writes a check sheet beside the others, never over one", async () => {
    const { workbook, session, select } = await started();
    await select(cell("Pump", 2, 3));
    await session.writeCheckSheet();
    await session.writeCheckSheet();
    const names = (await workbook.sheets()).map(({ name }) => name);
    expect(names).toHaveLength(3);
    expect(new Set(names).size).toBe(3);
    expect(session.state.notice?.jump?.range.sheet).toBe(names[2]);
    expect(cellText(session.state.notice!.jump!.range)).toBe("A1");
  });
});
