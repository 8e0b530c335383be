import { describe, expect, it, vi } from "vitest";
import { type RangeAddress, type Workbook } from "../../src/pane/workbook";

/** A sheet as a test lays it: each cell as a person types it, "" a blank one. */
export interface TestSheet {
  readonly name: string;
  readonly cells: readonly (readonly (string | number | boolean)[])[];
}

/** A workbook of one kind, and the things a test arranges behind its back. */
export interface TestHost {
  readonly workbook: Workbook;
  merge(range: RangeAddress): void;
  hideRow(sheet: string, row: number): void;
  hideColumn(sheet: string, column: number): void;
  hideSheet(sheet: string): void;
  /** Where the host knows protected sheets. */
  protect?(sheet: string): void;
  /** Types into a cell as the person at the sheet does. */
  type(sheet: string, row: number, column: number, text: string): void;
}

const at = (sheet: string, row: number, column: number, rows = 1, columns = 1): RangeAddress => ({ sheet, row, column, rows, columns });

/** Every refusal is a sentence for people. */
const SENTENCE = /^\S.*\.$/;

const PLAN: TestSheet = {
  name: "Plan",
  cells: [
    ["", "Running", "Failed"],
    ["Running", "", 0.02],
    ["Failed", 0.5, ""],
    ["note", true, "=C2*10"],
  ],
};

/** What every host of the pane must do. One suite for all of them: the pane never asks which it runs in. */
export function describeWorkbook(name: string, makeHost: (sheets: readonly TestSheet[]) => TestHost): void {
  describe(`the workbook of ${name}`, () => {
    const plan = (...more: TestSheet[]): TestHost => makeHost([PLAN, ...more]);

    describe("reading", () => {
      it("lists sheets in order, with what they hold and whether they are hidden", async () => {
        const host = plan({ name: "Empty", cells: [] }, { name: "Old figures", cells: [["", ""], ["", 1]] });
        host.hideSheet("Old figures");
        const sheets = await host.workbook.sheets();
        expect(sheets.map((one) => one.name)).toEqual(["Plan", "Empty", "Old figures"]);
        expect(sheets.map((one) => one.hidden)).toEqual([false, false, true]);
        expect(sheets.map((one) => one.used)).toEqual([at("Plan", 0, 0, 4, 3), null, at("Old figures", 1, 1)]);
      });

      it("gives values, contents as typed, formats and texts", async () => {
        const { workbook } = plan();
        const reading = await workbook.read(at("Plan", 0, 0, 4, 3));
        expect(reading.address).toEqual(at("Plan", 0, 0, 4, 3));
        expect(reading.values).toEqual([["", "Running", "Failed"], ["Running", "", 0.02], ["Failed", 0.5, ""], ["note", true, 0.2]]);
        expect(reading.formulas).toEqual([["", "Running", "Failed"], ["Running", "", "0.02"], ["Failed", "0.5", ""], ["note", "TRUE", "=C2*10"]]);
        expect(reading.formats.flat()).toEqual(Array(12).fill("General"));
        expect(reading.texts[1]).toEqual(["Running", "", "0.02"]);
      });

      it("gives a formula's overflow as values without contents of their own", async () => {
        const { workbook } = makeHost([{ name: "S", cells: [["={1,2;3,4}"]] }]);
        const reading = await workbook.read(at("S", 0, 0, 3, 3));
        expect(reading.values).toEqual([[1, 2, ""], [3, 4, ""], ["", "", ""]]);
        expect(reading.formulas).toEqual([["={1,2;3,4}", "", ""], ["", "", ""], ["", "", ""]]);
        const inside = await workbook.read(at("S", 1, 0, 1, 2));
        expect(inside.values).toEqual([[3, 4]]);
        expect(inside.formulas).toEqual([["", ""]]);
      });

      it("gives errors by their codes", async () => {
        const { workbook } = makeHost([{ name: "S", cells: [["=1/0", "=NA()"]] }]);
        expect((await workbook.read(at("S", 0, 0, 1, 2))).values).toEqual([["#DIV/0!", "#N/A"]]);
      });

      it("tells what is hidden and merged, or that it cannot know", async () => {
        const host = plan();
        host.hideRow("Plan", 2);
        host.hideColumn("Plan", 1);
        host.merge(at("Plan", 2, 1, 1, 2));
        host.merge(at("Plan", 6, 6, 2, 2));
        const { facts } = await host.workbook.read(at("Plan", 1, 1, 2, 2));
        expect(["unknown", [2]]).toContainEqual(facts.hiddenRows);
        expect(["unknown", [1]]).toContainEqual(facts.hiddenColumns);
        expect(["unknown", [at("Plan", 2, 1, 1, 2)]]).toContainEqual(facts.merged);
        expect(["unknown", "automatic"]).toContainEqual(facts.calculation);
        expect(Object.values(facts)).not.toEqual(Array(5).fill("unknown"));
      });

      it("tells what is around, blank where the sheet ends", async () => {
        const { workbook } = plan();
        const around = async (range: RangeAddress): Promise<unknown> => (await workbook.read(range)).facts.neighbours;
        expect(await around(at("Plan", 1, 1, 2, 2))).toEqual({ above: ["Running", "Failed"], below: [true, 0.2], left: ["Running", "Failed"], right: ["", ""] });
        expect(await around(at("Plan", 0, 0, 1, 2))).toEqual({ above: ["", ""], below: ["Running", ""], left: [""], right: ["Failed"] });
      });

      it("scans values and contents alike", async () => {
        const { workbook } = plan();
        const { address, values, formulas } = await workbook.read(at("Plan", 0, 0, 4, 3));
        if (workbook.scan) expect(await workbook.scan(at("Plan", 0, 0, 4, 3))).toEqual({ address, values, formulas });
      });

      it("refuses a sheet or cells that are not there, in words", async () => {
        const { workbook } = plan();
        await expect(workbook.read(at("Nowhere", 0, 0))).rejects.toThrow(SENTENCE);
        await expect(workbook.read(at("Plan", 1_048_575, 0, 2, 1))).rejects.toThrow(SENTENCE);
      });
    });

    describe("writing", () => {
      it("keeps numbers, truth values and formulas as such, clears on null and leaves on undefined", async () => {
        const { workbook } = plan();
        await workbook.write([{ sheet: "Plan", row: 1, column: 0, cells: [["Up", -0.02, undefined], [null, "=C2*2", false]] }], "test");
        const reading = await workbook.read(at("Plan", 1, 0, 2, 3));
        expect(reading.values).toEqual([["Up", -0.02, 0.02], ["", 0.04, false]]);
        expect(reading.formulas).toEqual([["Up", "-0.02", "0.02"], ["", "=C2*2", "FALSE"]]);
      });

      it.each(["0.5", "1/2", "+abc", "-x", "-", "@home", "TRUE", "12 %", "1e3", "March 4", "#N/A", "Machine shop", "Ausgefallen"])("keeps the text %s as text", async (text) => {
        const { workbook } = plan();
        await workbook.write([{ sheet: "Plan", row: 8, column: 0, cells: [[text, "=ISTEXT(A9)"]] }], "test");
        const reading = await workbook.read(at("Plan", 8, 0, 1, 2));
        expect(reading.values).toEqual([[text, true]]);
        expect(reading.formats).toEqual([["General", "General"]]);
      });

      it.each([["'=A1", "=A1"], ["''quoted'", "'quoted'"], ["'0.5", "0.5"]])("takes the apostrophe of %s for the mark of text", async (entry, text) => {
        const { workbook } = plan();
        await workbook.write([{ sheet: "Plan", row: 8, column: 0, cells: [[entry, "=ISTEXT(A9)"]] }], "test");
        expect((await workbook.read(at("Plan", 8, 0, 1, 2))).values).toEqual([[text, true]]);
      });

      it("sets formats where they are given", async () => {
        const { workbook } = plan();
        await workbook.write([{ sheet: "Plan", row: 1, column: 1, cells: [[0.25, 0.5]], formats: [["0.0%", undefined]] }], "test");
        const reading = await workbook.read(at("Plan", 1, 1, 1, 2));
        expect(reading.formats).toEqual([["0.0%", "General"]]);
        expect(reading.texts).toEqual([["25.0%", "0.5"]]);
      });

      it("takes back all rectangles of a step at once, formats, formulas, text and overflow included", async () => {
        const { workbook } = makeHost([PLAN, { name: "S", cells: [["={1,2}", "", "'0.5"]] }]);
        const whole = async (): Promise<unknown> => [await workbook.read(at("Plan", 0, 0, 5, 4)), await workbook.read(at("S", 0, 0, 2, 3))];
        const before = await whole();
        await workbook.write(
          [
            { sheet: "Plan", row: 0, column: 0, cells: [["x", 1, "=1+1"]], formats: [["0.00", "0%", "0"]] },
            { sheet: "Plan", row: 3, column: 0, cells: [[null, 5, "text"]] },
            { sheet: "S", row: 0, column: 0, cells: [[7, "", 8]] },
          ],
          "test",
        );
        expect(await whole()).not.toEqual(before);
        await workbook.undo();
        expect(await whole()).toEqual(before);
      });

      it("writes nothing at all when a part cannot be written", async () => {
        const { workbook } = plan();
        const before = await workbook.read(at("Plan", 0, 0, 4, 3));
        const batch = [
          { sheet: "Plan", row: 0, column: 0, cells: [["x"]] },
          { sheet: "Nowhere", row: 0, column: 0, cells: [["x"]] },
        ];
        await expect(workbook.write(batch, "test")).rejects.toThrow(SENTENCE);
        await expect(workbook.write([{ sheet: "Plan", row: 0, column: 16_384, cells: [["x"]] }], "test")).rejects.toThrow(SENTENCE);
        expect(await workbook.read(at("Plan", 0, 0, 4, 3))).toEqual(before);
      });

      it("refuses a protected sheet in words", async () => {
        const host = plan();
        if (!host.protect) return;
        host.protect("Plan");
        await expect(host.workbook.write([{ sheet: "Plan", row: 0, column: 0, cells: [["x"]] }], "test")).rejects.toThrow(/"Plan" is protected/);
        expect((await host.workbook.read(at("Plan", 0, 0))).values).toEqual([[""]]);
      });

      it("accepts an empty batch", async () => {
        const { workbook } = plan();
        await workbook.write([], "test");
        await workbook.write([{ sheet: "Plan", row: 0, column: 0, cells: [] }], "test");
        expect((await workbook.read(at("Plan", 3, 2))).values).toEqual([[0.2]]);
      });
    });

    describe("adding a sheet", () => {
      it("never takes a name that is used, and says which it took", async () => {
        const { workbook } = plan();
        const first = await workbook.addSheet("Check", [["Sheet", 1]], [[undefined, "0.0"]]);
        const second = await workbook.addSheet("check", [[2]]);
        expect(first).toBe("Check");
        expect(second).toMatch(/^check.*2/i);
        expect((await workbook.sheets()).map((one) => one.name)).toEqual(["Plan", first, second]);
        expect((await workbook.read(at(first, 0, 0, 1, 2))).texts).toEqual([["Sheet", "1.0"]]);
      });

      it("makes a name that the host takes out of any words", async () => {
        const { workbook } = plan();
        for (const wanted of ["Rates: Plan/A3 [old]?*", "", "x".repeat(60), "'quoted'"]) {
          const name = await workbook.addSheet(wanted, []);
          expect(name).toMatch(/^[^[\]:*?/\\]{1,31}$/);
          expect(name).not.toMatch(/^'|'$|^\s|\s$/);
        }
      });

      it("is taken back as one step", async () => {
        const { workbook } = plan();
        await workbook.addSheet("Check", [["x", 1], ["=B1+1", ""]]);
        await workbook.undo();
        expect((await workbook.sheets()).map((one) => one.name)).toEqual(["Plan"]);
      });
    });

    describe("selecting", () => {
      it("moves the selection, to another sheet if need be", async () => {
        const { workbook } = plan({ name: "Other", cells: [[1]] });
        await workbook.select(at("Other", 2, 1, 3, 2));
        expect(await workbook.selection()).toEqual(at("Other", 2, 1, 3, 2));
      });

      it("refuses what is not there", async () => {
        await expect(plan().workbook.select(at("Nowhere", 0, 0))).rejects.toThrow(SENTENCE);
      });
    });

    describe("events", () => {
      const heardOnce = (act: () => void | Promise<void>, heard: () => void) =>
        vi.waitFor(async () => {
          await act();
          expect(heard).toHaveBeenCalled();
        }, { timeout: 20_000, interval: 300 });

      it("tell of changes by the pane and by the person, until the listener is taken away", async () => {
        const host = plan();
        const heard = vi.fn();
        const off = host.workbook.on("change", heard);
        // A host may still be registering: typing goes on until it is heard.
        await heardOnce(() => host.type("Plan", 0, 0, "x"), heard);
        heard.mockClear();
        await host.workbook.write([{ sheet: "Plan", row: 0, column: 0, cells: [["y"]] }], "test");
        await heardOnce(() => undefined, heard);
        off();
        heard.mockClear();
        const control = vi.fn();
        const offControl = host.workbook.on("change", control);
        await heardOnce(() => host.type("Plan", 0, 0, "z"), control);
        expect(heard).not.toHaveBeenCalled();
        offControl();
      });

      it("tell of a moved selection and of sheets", async () => {
        const { workbook } = plan();
        const selected = vi.fn();
        const sheets = vi.fn();
        const off = [workbook.on("selection", selected), workbook.on("sheets", sheets)];
        let row = 0;
        await heardOnce(() => workbook.select(at("Plan", ++row, 1)), selected);
        await heardOnce(async () => void (await workbook.addSheet("More", [])), sheets);
        for (const one of off) one();
      });
    });

    describe("the store", () => {
      it("gives back JSON as it was given, and undefined for what it does not have", async () => {
        const { store } = plan().workbook;
        expect(await store.get("ctmc.audit")).toBeUndefined();
        const value = { version: 1, units: { Plan: "h" }, accepted: [{ code: "x", reason: "as ordered", at: null }], text: 'ä "quoted"' };
        await store.set("ctmc.audit", value);
        expect(await store.get("ctmc.audit")).toEqual(value);
        await store.set("ctmc.audit", { version: 1 });
        expect(await store.get("ctmc.audit")).toEqual({ version: 1 });
      });
    });

    describe("the look of a sheet", () => {
      it("changes nothing that it holds", async () => {
        const { workbook } = plan();
        const before = (await workbook.read(at("Plan", 0, 0, 4, 3))).values;
        await workbook.presentSheet?.("Plan", { columnWidths: [20, 8], boldRows: [0], footer: "Plan, page 1" });
        expect((await workbook.read(at("Plan", 0, 0, 4, 3))).values).toEqual(before);
        await expect(workbook.presentSheet?.("Nowhere", { columnWidths: [], boldRows: [0], footer: "" }) ?? Promise.reject(new Error("Not offered."))).rejects.toThrow(SENTENCE);
      });
    });

    describe("a formula put in place", () => {
      it("goes where there is room, as one step", async () => {
        const { workbook } = plan();
        if (!workbook.placeFormula) return;
        await workbook.placeFormula({ sheet: "Plan", row: 6, column: 0 }, "={1,2;3,4}", { rows: 2, columns: 2 }, "test");
        expect((await workbook.read(at("Plan", 6, 0, 2, 2))).values).toEqual([[1, 2], [3, 4]]);
        await workbook.undo();
        expect((await workbook.read(at("Plan", 6, 0, 2, 2))).values).toEqual([["", ""], ["", ""]]);
      });

      it("is refused where a cell is filled, and names the cell", async () => {
        const { workbook } = plan();
        if (!workbook.placeFormula) return;
        await expect(workbook.placeFormula({ sheet: "Plan", row: 1, column: 1 }, "={1;2}", { rows: 2, columns: 1 }, "test")).rejects.toThrow(/\bB3\b/);
        expect((await workbook.read(at("Plan", 1, 1, 2, 1))).values).toEqual([[""], [0.5]]);
      });
    });
  });
}
