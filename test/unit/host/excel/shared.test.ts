import { describe, expect, it } from "vitest";
import { isOurs, spelled } from "../../../../src/host/excel/our-formulas";
import { tableReference } from "../../../../src/host/excel/table-reference";
import { Book, CustomFunctionHost } from "../../../../src/host/practice/engine";
import { fingerprint } from "../../../../src/table/fingerprint";
import { readRateTable } from "../../../../src/table/read";
import { excelHost, type ExcelTestHost } from "../../../support/excel/host";

/** Functions of the shapes that matter: a block, a single value, an error inside a block. */
const SCRIPT = `
  CustomFunctions.associate("ROWSUMS", (rates) => rates.map((row) => [row.reduce((sum, cell) => sum + (typeof cell === "number" ? cell : 0), 0)]));
  CustomFunctions.associate("FIRST", () => "0.5");
  CustomFunctions.associate("PARTLY", () => [[1, new CustomFunctions.Error(CustomFunctions.ErrorCode.notAvailable, "Never.")]]);
`;
const entry = (id: string, dimensionality: string) => ({ id, name: id, description: id, parameters: [{ name: "rates", description: "rates", type: "any", dimensionality: "matrix", optional: true }], result: { dimensionality } });

function host(cells: (string | number)[][], ...more: { name: string; cells: (string | number)[][] }[]): ExcelTestHost {
  const functions = new CustomFunctionHost();
  functions.load(SCRIPT, { functions: [entry("ROWSUMS", "matrix"), entry("FIRST", "scalar"), entry("PARTLY", "matrix")] } as never);
  return excelHost([{ name: "Plan", cells }, ...more], new Book({ functions }));
}

const TABLE = [["", "Up", "Down"], ["Up", "", 0.02], ["Down", 0.5, ""]];
const NOW = new Date("2026-03-04T05:06:07Z");
const whole = async ({ workbook }: ExcelTestHost, sheet = "Plan") => {
  const { values, formulas } = await workbook.read({ sheet, row: 0, column: 0, rows: 8, columns: 5 });
  return { values, formulas };
};

describe("formulas of ours", () => {
  it.each(["=CTMC.TRANSITION(B3:F7,12)", "=1+ctmc.stationary(A1:B2)", "=_xldudf_CTMC_CHECK(A1:B2)", "=IF(A1,_xldudf_CTMC_CHECK(A1:B2),0)"])("are seen in %s", (formula) => {
    expect(isOurs(formula)).toBe(true);
  });

  it.each(["CTMC.TRANSITION(A1)", "=MYCTMC.TRANSITION(A1)", '="CTMC.TRANSITION("&A1', "=CTMC", "=SUM(A1)", "=A_CTMC.X(1)"])("are not seen in %s", (formula) => {
    expect(isOurs(formula)).toBe(false);
  });

  it("are spelled as people know them, and text in them is left alone", () => {
    expect(spelled('=_xldudf_CTMC_CHECK(A1:B2,"_xldudf_CTMC_CHECK(")+_XLDUDF_CTMC_STATIONARY(A1)')).toBe('=CTMC.CHECK(A1:B2,"_xldudf_CTMC_CHECK(")+CTMC.STATIONARY(A1)');
  });

  it.each([
    ["=CTMC.CHECK(B3:F7)", { sheet: null, address: "B3:F7", spill: false }],
    ["=1/CTMC.AVAILABILITY( $B$3:$F$7 , 1)", { sheet: null, address: "B3:F7", spill: false }],
    ["=CTMC.CHECK('Rates 1'!B3:F7)", { sheet: "Rates 1", address: "B3:F7", spill: false }],
    ["=CTMC.CHECK('It''s'!B3#)", { sheet: "It's", address: "B3", spill: true }],
    ["=CTMC.CHECK(Rates!B3:F7,1)", { sheet: "Rates", address: "B3:F7", spill: false }],
    ["=CTMC.CHECK(CTMC.GENERATOR(A1:B2))", { sheet: null, address: "A1:B2", spill: false }],
    ["=CTMC.CHECK({1,2;3,4})", null],
    ["=CTMC.CHECK(A1:B2*2)", null],
    ["=CTMC.REPAIRGROUP(3,1)", null],
    ["=SUM(A1:B2)", null],
  ])("tell which table they read: %s", (formula, reference) => {
    expect(tableReference(formula)).toEqual(reference);
  });
});

describe("relinking", () => {
  it("rewrites what lost its functions, on hidden sheets too, and nothing else", async () => {
    const one = host([["=CTMC.FIRST()", "=1/0"]], { name: "Other", cells: [["=CTMC.ROWSUMS(A3:B4)"], [], [], [1, 2], [3, 4]] });
    one.hideSheet("Other");
    one.state.lost.set(`${one.id("Plan")} 0 0`, "=_xldudf_CTMC_FIRST()");
    one.state.lost.set(`${one.id("Other")} 0 0`, "=CTMC.ROWSUMS(A4:B5)");
    expect(await one.workbook.shared!.unlinked()).toEqual([
      { sheet: "Plan", row: 0, column: 0, formula: "=CTMC.FIRST()" },
      { sheet: "Other", row: 0, column: 0, formula: "=CTMC.ROWSUMS(A4:B5)" },
    ]);
    expect(await one.workbook.shared!.relink()).toEqual({ done: 2, refused: [] });
    expect(await one.workbook.shared!.unlinked()).toEqual([]);
    expect((await whole(one, "Other")).values[0][0]).toBe(3);
    expect((await whole(one)).formulas[0].slice(0, 2)).toEqual(["=CTMC.FIRST()", "=1/0"]);
  });

  it("looks through a large sheet block by block, to its last row", async () => {
    const one = host([["=CTMC.FIRST()", 1, 2]]);
    one.type("Plan", 9_999, 0, "=CTMC.FIRST()");
    one.type("Plan", 19_999, 2, "=CTMC.FIRST()");
    for (const [row, column] of [[0, 0], [9_999, 0], [19_999, 2]]) one.state.lost.set(`${one.id("Plan")} ${row} ${column}`, "=_xldudf_CTMC_FIRST()");
    expect((await one.workbook.shared!.unlinked()).map(({ row, column }) => [row, column])).toEqual([[0, 0], [9_999, 0], [19_999, 2]]);
    // 20,000 rows of 3: three blocks of 20,000 cells and a bit.
    expect(one.state.largestAsked).toBeLessThanOrEqual(20_000);
  });

  it("leaves a protected sheet alone and says so", async () => {
    const one = host([["=CTMC.FIRST()"]]);
    one.state.lost.set(`${one.id("Plan")} 0 0`, "=_xldudf_CTMC_FIRST()");
    one.state.protectedSheets.add("Plan");
    expect(await one.workbook.shared!.relink()).toEqual({ done: 0, refused: ['The sheet "Plan" is protected; its formula was left as it is.'] });
  });
});

describe("freezing", () => {
  const cells = (): (string | number)[][] => [...TABLE, [], ["=CTMC.ROWSUMS(A1:C3)", "=CTMC.FIRST()", "=CTMC.PARTLY()"], ["", "", "=SUM(C5)"]];

  it("keeps every value as it was and no formula of ours, and lists what was there", async () => {
    const one = host(cells());
    const before = await whole(one);
    expect(await one.workbook.shared!.freeze(NOW)).toEqual({ done: 3, sheet: "Frozen formulas", refused: [] });
    const after = await whole(one);
    expect(after.values).toEqual(before.values);
    expect(after.formulas.flat().filter((formula) => formula.includes("CTMC."))).toEqual([]);
    expect(after.formulas[5][2]).toBe("=SUM(C5)");
    const print = fingerprint(readRateTable(TABLE));
    const list = (await one.workbook.read({ sheet: "Frozen formulas", row: 0, column: 0, rows: 5, columns: 6 })).values;
    expect(list).toEqual([
      ["Sheet", "Cell", "Formula", "Values as of", "Fingerprint of its table", "Now"],
      ["Plan", "A5", "=CTMC.ROWSUMS(A1:C3)", "2026-03-04T05:06:07.000Z", print, "values"],
      ["Plan", "B5", "=CTMC.FIRST()", "2026-03-04T05:06:07.000Z", "", "values"],
      ["Plan", "C5", "=CTMC.PARTLY()", "2026-03-04T05:06:07.000Z", "", "values"],
      ["", "", "", "", "", ""],
    ]);
    expect(await one.workbook.shared!.frozen()).toMatchObject([
      { sheet: "Plan", row: 4, column: 0, rows: 3, columns: 1, fingerprint: print },
      { formula: "=CTMC.FIRST()", rows: 1, columns: 1, fingerprint: null },
      { rows: 1, columns: 2 },
    ]);
  });

  it("is undone by thawing, after a renamed sheet too", async () => {
    const one = host(cells());
    const before = await whole(one);
    await one.workbook.shared!.freeze(NOW);
    one.book.apply([{ kind: "renameSheet", sheet: one.id("Plan"), name: "Rates" }], "rename");
    expect(await one.workbook.shared!.thaw()).toEqual({ done: 3, refused: [] });
    expect(await whole(one, "Rates")).toEqual(before);
    expect(await one.workbook.shared!.frozen()).toEqual([]);
    const list = (await one.workbook.read({ sheet: "Frozen formulas", row: 1, column: 5, rows: 3, columns: 1 })).values;
    expect(list).toEqual([["formula"], ["formula"], ["formula"]]);
  });

  it("never overwrites a value that was changed since", async () => {
    const one = host(cells());
    await one.workbook.shared!.freeze(NOW);
    one.type("Plan", 5, 0, "9");
    expect(await one.workbook.shared!.thaw()).toEqual({ done: 2, refused: ["Plan!A5 was changed since; its formula stays on the list."] });
    expect((await whole(one)).values[5][0]).toBe(9);
    expect(await one.workbook.shared!.frozen()).toHaveLength(1);
  });

  it("keeps what is frozen when more is frozen later", async () => {
    const one = host([["=CTMC.FIRST()"]]);
    await one.workbook.shared!.freeze(NOW);
    one.type("Plan", 3, 3, "=CTMC.FIRST()");
    expect(await one.workbook.shared!.freeze(NOW)).toMatchObject({ done: 1, sheet: "Frozen formulas" });
    expect(await one.workbook.shared!.frozen()).toHaveLength(2);
    expect(await one.workbook.shared!.thaw()).toEqual({ done: 2, refused: [] });
  });

  it("never writes its list over a sheet of the person's, and marks its own when the formulas are back", async () => {
    const one = host([["=CTMC.FIRST()"]], { name: "Frozen formulas", cells: [["mine"]] });
    expect((await one.workbook.shared!.freeze(NOW)).sheet).toBe("Frozen formulas 2");
    await one.workbook.shared!.thaw();
    const now = async (sheet: string) => (await one.workbook.read({ sheet, row: 0, column: 0, rows: 2, columns: 6 })).values;
    expect(await now("Frozen formulas")).toEqual([["mine", "", "", "", "", ""], ["", "", "", "", "", ""]]);
    expect((await now("Frozen formulas 2"))[1]).toEqual(["Plan", "A1", "=CTMC.FIRST()", "2026-03-04T05:06:07.000Z", "", "formula"]);
  });

  it("starts a new list when the earlier one was deleted, and forgets no formula by that", async () => {
    const one = host([["=CTMC.FIRST()"]]);
    await one.workbook.shared!.freeze(NOW);
    one.book.apply([{ kind: "removeSheet", sheet: one.id("Frozen formulas") }], "remove");
    one.type("Plan", 3, 3, "=CTMC.FIRST()");
    expect((await one.workbook.shared!.freeze(NOW)).sheet).toBe("Frozen formulas");
    const cells = (await one.workbook.read({ sheet: "Frozen formulas", row: 0, column: 1, rows: 4, columns: 1 })).values;
    expect(cells).toEqual([["Cell"], ["A1"], ["D4"], [""]]);
    expect(await one.workbook.shared!.thaw()).toEqual({ done: 2, refused: [] });
  });

  it("takes a protected list for what it is: nothing more is frozen, but everything comes back", async () => {
    const one = host([["=CTMC.FIRST()"]]);
    await one.workbook.shared!.freeze(NOW);
    one.state.protectedSheets.add("Frozen formulas");
    one.type("Plan", 3, 3, "=CTMC.FIRST()");
    await expect(one.workbook.shared!.freeze(NOW)).rejects.toThrow(/lists what is frozen, is protected/);
    expect((await whole(one)).formulas[3][3]).toBe("=CTMC.FIRST()");
    expect(await one.workbook.shared!.thaw()).toEqual({ done: 1, refused: [] });
    expect(await one.workbook.shared!.frozen()).toEqual([]);
  });

  it("leaves what shows no answer, and protected sheets, and says so", async () => {
    const one = host([["=CTMC.FIRST()", "=CTMC.FIRST()"]], { name: "Closed", cells: [["=CTMC.FIRST()"]] });
    one.state.lost.set(`${one.id("Plan")} 0 0`, "=_xldudf_CTMC_FIRST()");
    one.state.protectedSheets.add("Closed");
    expect(await one.workbook.shared!.freeze(NOW)).toEqual({
      done: 1,
      sheet: "Frozen formulas",
      refused: ['The sheet "Closed" is protected; its formula was left as it is.', "Plan!A1 shows #NAME?; its formula was left as it is."],
    });
  });

  it("does nothing where there is nothing to freeze", async () => {
    const one = host([[1]]);
    expect(await one.workbook.shared!.freeze(NOW)).toEqual({ done: 0, sheet: null, refused: [] });
    expect((await one.workbook.sheets()).map((sheet) => sheet.name)).toEqual(["Plan"]);
  });

  it("does not touch a record that a newer version wrote", async () => {
    const one = host([["=CTMC.FIRST()"]]);
    one.state.settings.set("ctmc.frozen", JSON.stringify({ version: 2 }));
    await expect(one.workbook.shared!.freeze(NOW)).rejects.toThrow(/newer version/);
    expect((await whole(one)).formulas[0][0]).toBe("=CTMC.FIRST()");
  });
});

describe("recalculating", () => {
  it("asks the host for everything", async () => {
    const one = host([["=CTMC.FIRST()"]]);
    await one.workbook.shared!.recalculate();
    expect(one.state.fullCalculations).toBe(1);
  });
});
