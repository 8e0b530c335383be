import { describe, expect, it } from "vitest";
import { checkSheet, sheetName } from "../../../src/pane/check-sheet";
import { examine } from "../../../src/pane/examine";
import type { TableMemory } from "../../../src/pane/memory";
import { signOffOf } from "../../../src/pane/sign-off";
import { VERSION } from "../../../src/pane/version";
import packageFile from "../../../package.json";
import { FakeWorkbook, type Typed } from "../../support/fake-workbook";

const PUMP: Typed[][] = [
  ["from \\ to", "Running", "Worn", "Repair"],
  ["Running", "", 0.02, 0.004],
  ["Worn", 0.1, "", 0.12],
  ["Repair", 0.5, "", ""],
];

async function sheetOf(rows: Typed[][], entry: Partial<TableMemory> = {}, size = rows.length, formula = "=CTMC.STATIONARY(Pump!A1:D4)") {
  const place = { sheet: "Pump", row: 0, column: 0 };
  const reading = await new FakeWorkbook({ Pump: rows }).read({ ...place, rows: size, columns: rows[0].length });
  const looked = examine(reading, () => ({ ...place, ...entry }));
  const sheet = await checkSheet(looked, { version: "1.0.0", date: "2026-12-01", workbook: "plant.xlsx", formulas: [{ place: "Plan B4", formula }] });
  const after = (label: string): unknown[] => sheet.cells.find((row) => row[0] === label)?.slice(1) as unknown[];
  // Broken sentences are joined again: each part stands in the second cell of its line.
  const text = sheet.cells.map((row) => row.filter((cell) => cell !== null).join(" ")).join(" ");
  return { looked, sheet, after, text };
}

describe("check sheet", () => {
  it("names the version of the package", () => {
    expect(VERSION).toBe(packageFile.version);
  });

  it("says where, what, when and with what", async () => {
    const { after, looked } = await sheetOf(PUMP, { unit: "day" });
    expect(after("Workbook")[0]).toBe("plant.xlsx");
    expect([after("Sheet")[0], after("Range")[0], after("Date")[0], after("Made with")[0]]).toEqual(["Pump", "A1:D4", "2026-12-01", "Stayrate 1.0.0"]);
    expect(after("Fingerprint")[0]).toBe(looked.fingerprint);
    expect([after("States")[0], after("Arrows")[0], after("Unit")[0]]).toEqual([3, 5, "per day"]);
  });

  it("works out exits, stays, classes, shares and flow balance", async () => {
    const { after, sheet } = await sheetOf(PUMP);
    // Balance by hand: shares p, Running 0.024 p1 = 0.1 p2 + 0.5 p3, Worn 0.22 p2 = 0.02 p1; so p2 = p1 / 11, p3 = (0.024 − 0.1 / 11) / 0.5 p1.
    const running = 1 / (1 + 1 / 11 + (0.024 - 0.1 / 11) / 0.5);
    const row = sheet.cells.find((cells) => cells[0] === "Running" && cells[4] === "closed")!;
    expect(row[1]).toBeCloseTo(0.024, 15);
    expect(row[2]).toBeCloseTo(1 / 0.024, 12);
    expect(row[3]).toBe(1);
    expect(row[5]).toBeCloseTo(running, 14); // measured: equal to the last bit
    expect(row[6]).toBe("worked out");
    expect(after("Slowest rate").slice(0, 2)).toEqual([0.004, "Running → Repair"]);
    expect(after("Fastest rate").slice(0, 2)).toEqual([0.5, "Repair → Running"]);
    expect(after("Fastest ÷ slowest")[0]).toBe(125);
    expect(Math.abs(after("Flow in − flow out")[0] as number)).toBeLessThan(1e-15);
    expect(after("Settling time (1 %)")[0]).toBeGreaterThan(0);
  });

  it("lists findings with cells and status, the accepted with reason and initials, and every arrow in words", async () => {
    const { looked, text } = await sheetOf(PUMP);
    expect(looked.open.length).toBeGreaterThan(0);
    for (const item of looked.open) expect(text).toContain(item.sentence);
    expect(text).toContain("0.02 per time unit, about once in 50 time units");
    const [item] = looked.open;
    const accepted = { key: item.acceptanceKey, code: item.finding.code, sentence: item.sentence, reason: "as agreed", initials: "AB", date: "2026-11-30" };
    const again = await sheetOf(PUMP, { accepted: [accepted] });
    expect(again.text).toContain("Accepted by AB on 2026-11-30: as agreed");
  });

  it("prints a formula as it is written, double blanks too", async () => {
    const { sheet } = await sheetOf(PUMP, {}, 4, '=CTMC.CLASSES(A1:D4)&"  "');
    expect(sheet.cells.flat()).toContain('\'=CTMC.CLASSES(A1:D4)&"  "');
  });

  it("breaks long texts so that a page takes them in width", async () => {
    const { sheet } = await sheetOf(PUMP, {}, 4, `=CTMC.AVAILABILITY(Pump!A1:D4,{"${"x".repeat(300)}"})`);
    const texts = sheet.cells.flatMap((row) => row.map((cell, at) => (typeof cell === "string" ? [at, cell.length] : [at, 0])));
    expect(Math.max(...texts.map(([at, length]) => (at === 0 ? length - 20 : length)))).toBeLessThanOrEqual(81); // 80 and an apostrophe; the first column is 20 wide
    expect(sheet.look.columnWidths.reduce((sum, width) => sum + width, 0)).toBeLessThanOrEqual(90);
  });

  it("leaves lines to sign, tells of a sign-off, and prints the cautions", async () => {
    const first = await sheetOf(PUMP);
    const signOff = signOffOf(first.looked.table.table!, "C. Dahl", "2026-11-01");
    const { text, after } = await sheetOf(PUMP.map((row, r) => (r === 3 ? ["Repair", 0.4, "", ""] : row)), { signOff });
    expect(after("Signed off")[0]).toContain("2026-11-01 by C. Dahl");
    expect(after("Signed off")[0]).toContain("changed since");
    expect(text).toContain("Prepared by");
    expect(text).toContain("Reviewed by");
    expect(text).toContain("Not a safety, clinical, credit or legal determination.");
  });

  it("writes texts that begin like a formula as text, and formulas as text", async () => {
    const { sheet } = await sheetOf([["", "=up", "-down"], ["=up", "", 1], ["-down", 2, ""]]);
    const texts = sheet.cells.flat().filter((cell): cell is string => typeof cell === "string");
    expect(texts.filter((text) => /^[=+\-@]/.test(text))).toEqual([]);
    expect(texts).toContain("'=up");
    expect(texts).toContain("'-down");
    expect(texts).toContain("'=CTMC.STATIONARY(Pump!A1:D4)");
  });

  it("is written for a range that does not read, with what is wrong", async () => {
    const { after, text, looked } = await sheetOf([["", "Up", "Down"], ["Up", "", -1], ["Down", 2, ""]]);
    expect(looked.fingerprint).toBeNull();
    expect(after("Fingerprint")[0]).toContain("does not read");
    expect(text).toContain(looked.open[0].sentence);
  });

  it("does without shares where the long run depends on the start", async () => {
    const { sheet } = await sheetOf([["", "Up", "Sold", "Lost"], ["Up", "", 1, 2], ["Sold", "", "", ""], ["Lost", "", "", ""]]);
    expect(sheet.cells.find((row) => row[0] === "Sold")?.slice(1, 6)).toEqual([0, "no exit", 2, "absorbing", "needs a start"]);
  });

  it("takes names that a sheet can have", () => {
    expect(sheetName("Rates")).toBe("Check Rates");
    expect(sheetName("a/b:c*d?[e]")).toBe("Check a b c d  e");
    expect(sheetName("x".repeat(40)).length).toBeLessThanOrEqual(28);
  });
});
