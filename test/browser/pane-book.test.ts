import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PanePart } from "../support/pane";
import { PracticePage } from "../support/practice";

/** The Book view beside the practice workbook: tables, formulas, pairs that differ, jumps. */
describe("the pane looks through the workbook", () => {
  let site: Site;
  beforeAll(async () => {
    site = await openSite();
  });
  afterAll(() => site.close());

  async function book(): Promise<{ open: OpenPage; sheet: PracticePage; pane: PanePart }> {
    const open = await site.open();
    const sheet = await new PracticePage(open.page).ready();
    const pane = await new PanePart(open.page).ready();
    await pane.tab("Book").click();
    await pane.counts(/\d+ tables · \d+ formulas/);
    return { open, sheet, pane };
  }

  async function closed(open: OpenPage): Promise<void> {
    expect(open.errors).toEqual([]);
    await open.close();
  }

  it("lists every rate table, no answer of a formula among them, and every formula with its table", async () => {
    const { open, pane, sheet } = await book();
    await pane.word(/^Show (the other|\d+ more)/).first().click();
    const tables = await pane.root.locator("[data-table]").evaluateAll((cards) => cards.map((card) => card.getAttribute("data-table")));
    expect(tables).toContain("Chiller rates A4:F9");
    expect(tables).toContain("From a colleague A3:F8");
    // The plan's blocks of answers, under state names though they stand, are no rate tables.
    expect(tables.filter((table) => table?.startsWith("Plan "))).toEqual([]);
    const wrong = pane.root.locator('[data-formula="From a colleague C10"]');
    expect(await wrong.innerText()).toContain("error #VALUE!");
    expect(await wrong.innerText()).toContain("reads A3:F8");
    const fine = pane.root.locator('[data-formula="Plan C9"]');
    expect(await fine.innerText()).toContain("fine");
    expect(await fine.innerText()).toContain("reads Chiller rates A4:F9");
    await fine.getByRole("button").click();
    await open.page.locator('#grid[aria-label="Sheet Plan"]').waitFor();
    await sheet.isActive("C9");
    await closed(open);
  });

  it("goes on to check a table", async () => {
    const { open, pane } = await book();
    await pane.word("Check From a colleague A3:F8").click();
    await pane.looksAt("From a colleague A3:F8");
    expect(await pane.tab("Check").getAttribute("aria-selected")).toBe("true");
    await closed(open);
  });

  it("follows what is typed: a short range is told, a mended table is fine again", async () => {
    const { open, pane, sheet } = await book();
    await sheet.sheet("Plan");
    await sheet.type("B40", "=CTMC.STATIONARY('Chiller rates'!A4:E8)");
    const line = pane.root.locator('[data-formula="Plan B40"]');
    await line.waitFor();
    expect(await line.innerText()).toContain("The range leaves out 1 row and 1 column of the table");
    await sheet.type("B40", "=CTMC.STATIONARY('Chiller rates'!A4:F9)");
    await line.getByText("=CTMC.STATIONARY('Chiller rates'!A4:F9)").waitFor();
    await line.getByText("fine").waitFor();
    expect(await line.innerText()).not.toContain("leaves out");
    await closed(open);
  });

  it("pairs tables that are alike but differ, with the arrows that do", async () => {
    const { open, pane, sheet } = await book();
    await sheet.sheet("From a colleague"); // the new sheet comes after it: pairs are in the order of the sheets
    await sheet.newSheet();
    await sheet.go("A1");
    await sheet.pasteText(
      ["from\tRunning\tDegraded\tWaiting\tRepair\tOverhaul", "Running\t\t0.02\t0.004\t\t0.0027", "Degraded\t0.1\t\t0.02", "Waiting\t\t\t\t0.5", "Repair\t0.25", "Overhaul\t0.07"].join("\n"),
    );
    const pair = pane.root.locator('[data-pair="Chiller rates A4:F9 | Sheet A1:F6"]');
    await pair.locator("summary").click();
    expect(await pair.locator("ul").innerText()).toBe("Degraded → Waiting: was 0.015 per time unit, now 0.02 per time unit");
    await closed(open);
  });

  it("stays quick with thousands of formulas: draws some, the rest on demand", async () => {
    const { open, pane, sheet } = await book();
    await sheet.newSheet();
    await sheet.go("A1");
    await sheet.pasteText(Array.from({ length: 3000 }, (_, k) => `=CTMC.AVAILABILITY('Chiller rates'!$A$4:$F$9,"Running",,${k + 1})`).join("\n"));
    await pane.counts(/\d+ tables · 3\d{3} formulas/);
    const drawn = await pane.root.locator("[data-formula]").count();
    expect(drawn).toBeLessThanOrEqual(60);
    await pane.word(/^Show 200 more of/).click();
    await open.page.waitForFunction((before) => document.querySelectorAll("[data-formula]").length === before + 200, drawn);
    await closed(open);
  });
});
