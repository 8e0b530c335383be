import { describe, expect, it, vi } from "vitest";
import { ROWS } from "../../../../src/host/excel/place";
import { excelHost } from "../../../support/excel/host";

const PLAN = [{ name: "Plan", cells: [["", "Up", "Down"], ["Up", "", 0.02], ["Down", 0.5, ""]] }];

describe("the selection", () => {
  it("is the first of several areas", async () => {
    const { workbook, state, id } = excelHost(PLAN);
    state.selection = [
      { sheet: id("Plan"), row: 1, column: 1, rows: 2, columns: 2 },
      { sheet: id("Plan"), row: 7, column: 7, rows: 1, columns: 1 },
    ];
    expect(await workbook.selection()).toEqual({ sheet: "Plan", row: 1, column: 1, rows: 2, columns: 2 });
  });

  it("is the active cell when a chart is selected", async () => {
    const { workbook, state } = excelHost(PLAN);
    state.selection = "chart";
    expect(await workbook.selection()).toEqual({ sheet: "Plan", row: 0, column: 0, rows: 1, columns: 1 });
  });

  it("is the filled part of whole columns, and one cell of empty ones", async () => {
    const { workbook, state, id } = excelHost(PLAN);
    state.selection = [{ sheet: id("Plan"), row: 0, column: 1, rows: ROWS, columns: 4 }];
    expect(await workbook.selection()).toEqual({ sheet: "Plan", row: 0, column: 1, rows: 3, columns: 2 });
    state.selection = [{ sheet: id("Plan"), row: 0, column: 9, rows: ROWS, columns: 1 }];
    expect(await workbook.selection()).toEqual({ sheet: "Plan", row: 0, column: 9, rows: 1, columns: 1 });
  });
});

describe("reading", () => {
  it("refuses more cells than one answer of the host can hold", async () => {
    const { workbook } = excelHost(PLAN);
    await expect(workbook.read({ sheet: "Plan", row: 0, column: 0, rows: 1000, columns: 101 })).rejects.toThrow("1000 × 101 cells are too many to read in one step; at most 100,000 are. Select the table alone.");
  });

  it("says that it cannot know merged cells where the host is too old to tell", async () => {
    const { workbook, state } = excelHost(PLAN);
    state.version = 1.12;
    const { facts } = await workbook.read({ sheet: "Plan", row: 0, column: 0, rows: 3, columns: 3 });
    expect(facts.merged).toBe("unknown");
    expect(facts.hiddenRows).toEqual([]);
  });

  it("tells manual calculation", async () => {
    const { workbook, state } = excelHost(PLAN);
    state.calculationMode = "Manual";
    expect((await workbook.read({ sheet: "Plan", row: 0, column: 0, rows: 1, columns: 1 })).facts.calculation).toBe("manual");
    expect(await workbook.shared!.calculation()).toBe("manual");
    state.calculationMode = "AutomaticExceptTables";
    expect(await workbook.shared!.calculation()).toBe("automatic");
  });

  it("takes few conversations with the host, however large the table", async () => {
    const cells = Array.from({ length: 60 }, (_, i) => Array.from({ length: 60 }, (_, j) => (i === j ? "" : i + j)));
    const { workbook, state } = excelHost([{ name: "Big", cells }]);
    const before = state.synchronisations.count;
    await workbook.read({ sheet: "Big", row: 0, column: 0, rows: 60, columns: 60 });
    expect(state.synchronisations.count - before).toBeLessThanOrEqual(2);
  });
});

describe("refusals", () => {
  it.each([
    ["AccessDenied", /protected, or it is open for reading only\.$/],
    ["InvalidOperationInCellEditMode", /Press Enter or Escape there, then try again\.$/],
    ["ResponsePayloadSizeLimitExceeded", /too large to read in one step/],
    ["SomethingNew", /^Excel refused this step: SomethingNew\. \(SomethingNew\)$/],
  ])("say %s in words", async (code, sentence) => {
    const { workbook, state } = excelHost(PLAN);
    state.failNext = code;
    await expect(workbook.sheets()).rejects.toThrow(sentence);
  });

  it("let unlocked cells of a protected sheet be written to", async () => {
    const { workbook, state, id } = excelHost(PLAN);
    state.protectedSheets.add("Plan");
    state.unlocked.add(`${id("Plan")} 1 2`);
    await workbook.write([{ sheet: "Plan", row: 1, column: 2, cells: [[0.03]] }], "test");
    expect((await workbook.read({ sheet: "Plan", row: 1, column: 2, rows: 1, columns: 1 })).values).toEqual([[0.03]]);
  });

  it("name a protected workbook structure", async () => {
    const { workbook, state } = excelHost(PLAN);
    state.structureProtected = true;
    await expect(workbook.addSheet("Check", [])).rejects.toThrow(/structure is protected/);
  });

  it("send nobody to a hidden sheet", async () => {
    const host = excelHost([...PLAN, { name: "Old", cells: [[1]] }]);
    host.hideSheet("Old");
    await expect(host.workbook.select({ sheet: "Old", row: 0, column: 0, rows: 1, columns: 1 })).rejects.toThrow('Old!A1 is on a hidden sheet. Unhide "Old" to go there.');
  });
});

describe("taking back", () => {
  it("is refused when the cells have changed since", async () => {
    const host = excelHost(PLAN);
    await host.workbook.write([{ sheet: "Plan", row: 1, column: 1, cells: [[-0.02]] }], "test");
    host.type("Plan", 1, 1, "7");
    await expect(host.workbook.undo()).rejects.toThrow("Plan!B2: cells that this step wrote have changed since. Nothing was taken back.");
    expect((await host.workbook.read({ sheet: "Plan", row: 1, column: 1, rows: 1, columns: 1 })).values).toEqual([[7]]);
  });

  it("goes back step by step, and says when there is nothing left", async () => {
    const { workbook } = excelHost(PLAN);
    const value = async () => (await workbook.read({ sheet: "Plan", row: 5, column: 5, rows: 1, columns: 1 })).values[0][0];
    for (const number of [1, 2]) await workbook.write([{ sheet: "Plan", row: 5, column: 5, cells: [[number]] }], "test");
    await workbook.undo();
    expect(await value()).toBe(1);
    await workbook.undo();
    expect(await value()).toBe("");
    await expect(workbook.undo()).rejects.toThrow("There is nothing to take back.");
  });
});

describe("placing a formula", () => {
  it("is taken back where the host finds no room after all", async () => {
    const { workbook } = excelHost(PLAN);
    // The answer turns out larger than was foreseen.
    await expect(workbook.placeFormula!({ sheet: "Plan", row: 3, column: 0 }, "={1;2;3}", { rows: 1, columns: 1 }, "test")).resolves.toBeUndefined();
    const wide = workbook.placeFormula!({ sheet: "Plan", row: 0, column: 0 }, "={1,2}", { rows: 1, columns: 1 }, "test");
    await expect(wide).rejects.toThrow("The answer does not fit at Plan!A1: a merged cell or a table is in its way. Nothing was written.");
    expect((await workbook.read({ sheet: "Plan", row: 0, column: 0, rows: 1, columns: 3 })).formulas).toEqual([["", "Up", "Down"]]);
  });
});

describe("pictures and charts", () => {
  it("puts a picture at its cell, with a name and a description", async () => {
    const { workbook, state } = excelHost(PLAN);
    await workbook.addPicture!({ sheet: "Plan", row: 4, column: 1 }, { png: "iVBOR", width: 300, height: 200, name: "States", description: "Two states, two arrows" });
    expect(state.shapes).toEqual([{ png: "iVBOR", sheet: expect.any(String), name: "States", altTextDescription: "Two states, two arrows", lockAspectRatio: true, left: 64, top: 60, width: 300, height: 200 }]);
  });

  it("draws what a formula fills, below it", async () => {
    const { workbook, state } = excelHost([{ name: "S", cells: [["={1,2;3,4}"]] }]);
    await workbook.addChart!({ sheet: "S", row: 0, column: 0 }, { kind: "line", title: "Shares", seriesIn: "rows" });
    expect(state.charts).toMatchObject([{ type: "Line", seriesBy: "Rows", title: "Shares", top: 45 }]);
    await expect(workbook.addChart!({ sheet: "S", row: 5, column: 0 }, { kind: "line", title: "x", seriesIn: "rows" })).rejects.toThrow("S!A6 holds no formula that fills several cells, so there is nothing to draw.");
  });

  it("refuses both on a protected sheet", async () => {
    const { workbook, state } = excelHost([{ name: "S", cells: [["={1,2;3,4}"]] }]);
    state.protectedSheets.add("S");
    const picture = { png: "", width: 1, height: 1, name: "", description: "" };
    await expect(workbook.addPicture!({ sheet: "S", row: 0, column: 0 }, picture)).rejects.toThrow(/protected, so no picture/);
    await expect(workbook.addChart!({ sheet: "S", row: 0, column: 0 }, { kind: "line", title: "x", seriesIn: "rows" })).rejects.toThrow(/protected, so no chart/);
  });
});

describe("the look of a sheet", () => {
  it("has widths in points, bold rows, one page in width and a footer whose ampersands are words", async () => {
    const { workbook, state } = excelHost(PLAN);
    await workbook.presentSheet!("Plan", { columnWidths: [8.43, 20], boldRows: [0, 3], footer: "Rates & costs" });
    expect(Object.fromEntries(state.looks)).toEqual({
      // 48 points is the host's own standard width of 8.43 characters.
      "Plan column 0": expect.closeTo(48, 1),
      "Plan column 1": 108.75,
      "Plan row 0, 2 columns": true,
      "Plan row 3, 2 columns": true,
      "Plan zoom": { horizontalFitToPages: 1 },
      "Plan footer": "Rates && costs",
    });
    await expect(workbook.presentSheet!("Nowhere", { columnWidths: [], boldRows: [], footer: "" })).rejects.toThrow('There is no sheet "Nowhere" any more.');
  });

  it("comes with the name of the workbook", async () => {
    expect(await excelHost(PLAN).workbook.name!()).toBe("Plans.xlsx");
  });
});

describe("the store", () => {
  it("leaves what is damaged as it is, and says so", async () => {
    const { workbook, state } = excelHost(PLAN);
    state.settings.set("ctmc.audit", "{");
    await expect(workbook.store.get("ctmc.audit")).rejects.toThrow(/damaged and was left as it is/);
    expect(state.settings.get("ctmc.audit")).toBe("{");
  });

  it("refuses what the workbook cannot keep", async () => {
    const { workbook, state } = excelHost(PLAN);
    await expect(workbook.store.set("ctmc.audit", "x".repeat(1_000_001))).rejects.toThrow(/1000003 characters; 1000000 fit/);
    expect(state.settings.size).toBe(0);
  });
});

describe("events", () => {
  it("tells a run of events once, and a long run in between", async () => {
    vi.useFakeTimers();
    try {
      const { workbook, state } = excelHost(PLAN);
      const heard = vi.fn();
      const off = workbook.on("selection", heard);
      await vi.advanceTimersByTimeAsync(0);
      for (let i = 0; i < 5; i++) {
        await state.raise("workbook.onSelectionChanged");
        await vi.advanceTimersByTimeAsync(50);
      }
      expect(heard).toHaveBeenCalledTimes(0);
      await vi.advanceTimersByTimeAsync(80);
      expect(heard).toHaveBeenCalledTimes(1);
      for (let i = 0; i < 20; i++) {
        await state.raise("worksheets.onActivated");
        await vi.advanceTimersByTimeAsync(50);
      }
      expect(heard.mock.calls.length).toBeGreaterThanOrEqual(3);
      off();
      await vi.advanceTimersByTimeAsync(0);
      expect(state.listening()).toEqual([]);
    } finally {
      vi.useRealTimers();
    }
  });

  it("asks an older host only for the events it has", async () => {
    const { workbook, state } = excelHost(PLAN);
    state.version = 1.12;
    const off = [workbook.on("change", () => undefined), workbook.on("sheets", () => undefined)];
    await vi.waitFor(() => expect(state.listening()).toEqual(["worksheets.onAdded", "worksheets.onCalculated", "worksheets.onChanged", "worksheets.onDeleted", "worksheets.onRowHiddenChanged"]));
    for (const one of off) one();
  });
});
