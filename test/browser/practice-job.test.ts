import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

/** The main job, start to end: formulas spill, a rate changes and they follow, a table breaks and the pane says where. */
describe("the main job in the practice workbook", () => {
  let site: Site;
  let opened: OpenPage;
  let sheet: PracticePage;

  beforeAll(async () => {
    site = await openSite();
    opened = await site.open();
    sheet = await new PracticePage(opened.page).ready();
    await opened.page.locator(".sr-place").waitFor();
  });
  afterAll(async () => {
    expect(opened.errors).toEqual([]);
    expect(opened.foreignRequests).toEqual([]);
    await site.close();
  });

  const finding = (code: string) => opened.page.locator(`[data-finding="${code}"]`);

  it("opens with a plan whose figures agree with each other", async () => {
    const row = async (at: number) => Promise.all(["C", "D", "E", "F", "G"].map((column) => sheet.number(`${column}${at}`)));
    for (const at of [9, 11, 13, 17]) {
      const shares = await row(at);
      // Shown with four decimals: five of them add to 1 within 5 halves of the last.
      expect(Math.abs(shares.reduce((sum, share) => sum + share, 0) - 1)).toBeLessThanOrEqual(2.5e-4);
      const available = await sheet.number(`H${at}`);
      expect(Math.abs(available - shares[0]! - shares[1]!)).toBeLessThanOrEqual(1.5e-4);
    }
    // At day 153 the start is forgotten: the shares are the long-run ones.
    expect(await sheet.text("C13")).toBe(await sheet.text("C17"));
    await sheet.go("C28");
    const hours = await row(28);
    // Thirty days are 720 hours, shared out among the five states.
    expect(Math.abs(hours.reduce((sum, value) => sum + value, 0) - 720)).toBeLessThanOrEqual(0.25);
  });

  it("types a formula that spills, changes a rate, and every figure follows", async () => {
    const { page } = opened;
    await sheet.sheet("Chiller rates");
    await sheet.type("H4", "=CTMC.TRANSITION(A4:F9,7,TRUE)");
    await sheet.shows("I4", "Running");
    await sheet.shows("H5", "Running");
    await sheet.go("H4");
    expect(await sheet.cell("H4").getAttribute("aria-label")).toMatch(/fills 6 by 6 cells/);
    const before = await sheet.number("I5");
    await sheet.type("C5", "0.08");
    await page.waitForFunction((old) => Math.abs(Number(document.getElementById("r4c8")?.textContent) - old) > 0.05, before);
    expect(await sheet.number("I5")).toBeLessThan(before);
    await sheet.sheet("Plan");
    await sheet.go("A1");
    expect(await sheet.number("D17")).toBeGreaterThan(0.3);
    await page.keyboard.press("Control+z");
    await page.locator('#grid[aria-label="Sheet Chiller rates"]').waitFor();
    await sheet.shows("C5", "0.0200");
    expect(await sheet.number("I5")).toBe(before);
    await page.locator(".follows", { hasText: /results follow this table/ }).waitFor();
  });

  it("finds the mistake when the table breaks, leads to it, and is content when it is mended", async () => {
    const { page } = opened;
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await page.locator(".sr-place", { hasText: "A4:F9" }).waitFor();
    await sheet.type("B6", "-0.1");
    await sheet.shows("H4", "#VALUE!");
    await finding("rateNegative").waitFor();
    const said = await finding("rateNegative").innerText();
    expect(said).toContain("-0.1 is not a rate");
    await sheet.go("H4");
    const sentence = await page.locator(".sentence").innerText();
    expect(said).toContain(sentence); // the formula and the pane say the same
    await sheet.go("C5");
    await finding("rateNegative").getByRole("button", { name: "B6" }).click();
    await sheet.isActive("B6");
    await sheet.type("B6", "0.1");
    await finding("rateNegative").waitFor({ state: "detached" });
    await sheet.shows("I4", "Running");
  });

  it("names five mistakes in the colleague's table, in cells and in the pane, and answers once they are mended", async () => {
    const { page } = opened;
    await sheet.sheet("From a colleague");
    await sheet.go("B4");
    await page.locator(".sr-place", { hasText: "A3:F8" }).waitFor();
    await page.locator(".sr-counts", { hasText: "4 stops" }).waitFor();
    expect(await page.locator(".sr-pane [data-finding]").count()).toBe(5);
    const lines = await Promise.all(["A14", "A15", "A16", "A17", "A18"].map((address) => sheet.text(address)));
    expect(lines.map((line) => line.split("  ")[0])).toEqual(["stop", "stop", "stop", "stop", "warning"]);
    await sheet.shows("C10", "#VALUE!");
    await sheet.type("E3", "Repair");
    await sheet.type("D5", "0.12");
    await sheet.type("E6", "0.33");
    await sheet.go("B4");
    await page.keyboard.press("Delete");
    await sheet.shows("A14", /^warning {2}Overhaul has no exit/);
    await sheet.type("B8", "0.07");
    await sheet.shows("A14", /^(ok|note)/);
    await sheet.shows("C10", /^0\.9\d{3}$/);
    await sheet.shows("C11", /^\d+\.\d$/);
  });

  it("finds everything again after a reload", async () => {
    await sheet.kept();
    await opened.page.reload();
    await sheet.ready();
    await sheet.sheet("From a colleague");
    await sheet.shows("C10", /^0\.9\d{3}$/);
    await sheet.sheet("Chiller rates");
    await sheet.shows("I4", "Running");
  });
});
