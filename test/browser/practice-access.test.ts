import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

/** The page by keyboard alone, for screen readers, in another language's number writing, in forced colours, narrow. */
describe("everyone can use the practice workbook", () => {
  let site: Site;
  let opened: OpenPage;
  let sheet: PracticePage;

  beforeAll(async () => {
    site = await openSite();
    opened = await site.open();
    sheet = await new PracticePage(opened.page).ready();
  });
  afterAll(async () => {
    expect(opened.errors).toEqual([]);
    await site.close();
  });

  it("fades the line of sheets where more follow than fit, and keeps the shown one in view", async () => {
    const { page } = sheet;
    await sheet.sheet("Two quarters");
    await page.locator(".sheets.more-before:not(.more-after)").waitFor();
    await sheet.sheet("Plan");
    await page.locator(".sheets.more-after:not(.more-before)").waitFor();
    await sheet.sheet("Call desk");
    await page.setViewportSize({ width: 600, height: 800 });
    await page.waitForFunction(() => {
      const tab = document.querySelector(".sheets [aria-selected=true]")!.getBoundingClientRect();
      const line = document.querySelector(".sheets")!.getBoundingClientRect();
      return tab.left >= line.left - 1 && tab.right <= line.right + 1;
    });
    await page.setViewportSize({ width: 1280, height: 800 });
    await sheet.sheet("Plan");
    await page.evaluate(() => document.getElementById("grid")!.focus());
  });

  it("works with the keyboard alone: sheets, menus, completion, rename, leaving the grid", async () => {
    const { page } = sheet;
    const focused = () => page.evaluate(() => document.activeElement?.getAttribute("aria-label") ?? document.activeElement?.textContent);
    const focus = (name: RegExp) => page.waitForFunction((source) => new RegExp(source).test(document.activeElement?.getAttribute("aria-label") ?? document.activeElement?.textContent ?? ""), name.source);
    await focus(/^Sheet Plan$/);
    await page.keyboard.press("Control+PageDown");
    await focus(/^Sheet Chiller rates$/);
    await page.keyboard.press("Shift+F6");
    await focus(/^Address/);
    await page.keyboard.press("Shift+F6");
    await focus(/^Chiller rates$/);
    await page.keyboard.press("ArrowLeft");
    await focus(/^Plan$/);
    // The next word opens what can be done with sheets.
    await page.keyboard.press("Tab");
    expect(await focused()).toBe("Sheet");
    await page.keyboard.press("Enter");
    await focus(/^Plan$/);
    await page.keyboard.press("n");
    await focus(/^New sheet/);
    await page.keyboard.press("Enter");
    await focus(/^Sheet Sheet$/);
    await page.keyboard.press("Shift+F6");
    await page.keyboard.press("Shift+F6");
    await page.keyboard.press("F2");
    await page.keyboard.type("Winter plan");
    await page.keyboard.press("Enter");
    await focus(/^Sheet Winter plan$/);
    // Completion: letters, arrows, Tab; the hint names the argument.
    await page.keyboard.type("=surv");
    await page.getByRole("option", { name: "CTMC.SURVIVAL" }).waitFor();
    await page.keyboard.press("Tab");
    expect(await sheet.formula()).toBe("=CTMC.SURVIVAL(");
    expect(await page.locator(".hint strong").innerText()).toBe("rates");
    await page.keyboard.type("'Chiller rates'!A4:F9,");
    expect(await page.locator(".hint strong").innerText()).toBe("start");
    await page.keyboard.type('"Running","Waiting",30)');
    await page.keyboard.press("Enter");
    await sheet.shows("A1", /^0\.856/);
    await page.keyboard.press("F6");
    expect(await focused()).not.toBe("Sheet Winter plan");
  });

  it("is an ARIA grid whose active cell says address, value, error and origin", async () => {
    const { page } = sheet;
    const grid = page.locator("#grid");
    expect(await grid.getAttribute("role")).toBe("grid");
    expect(Number(await grid.getAttribute("aria-rowcount"))).toBeGreaterThanOrEqual(100_000);
    expect(Number(await grid.getAttribute("aria-colcount"))).toBeGreaterThanOrEqual(1_000);
    await sheet.sheet("Plan");
    await sheet.go("D10");
    const active = sheet.cell("D10");
    expect(await active.getAttribute("role")).toBe("gridcell");
    expect(await active.getAttribute("aria-colindex")).toBe("5");
    expect(await active.locator("xpath=..").getAttribute("aria-rowindex")).toBe("11");
    expect(await active.getAttribute("aria-selected")).toBe("true");
    expect(await active.getAttribute("aria-label")).toMatch(/^D10, 0\.\d{4}, spilled from C9$/);
    // The line shows the formula that fills the cell.
    expect(await sheet.formula()).toMatch(/^=CTMC\.DISTRIBUTION/);
    await sheet.go("C9");
    expect(await sheet.cell("C9").getAttribute("aria-label")).toMatch(/fills 5 by 5 cells$/);
  });

  it("shows and says an error's sentence on focus, shows it on hover, closes it with Escape", async () => {
    const { page } = sheet;
    await sheet.sheet("Winter plan");
    await sheet.type("B3", "=1/0");
    await sheet.go("B3");
    const sentence = page.locator(".sentence");
    await sentence.waitFor();
    const text = await sentence.innerText();
    expect(text).toMatch(/divide/i);
    expect(await sheet.cell("B3").getAttribute("aria-label")).toBe(`B3, #DIV/0!, ${text}`);
    expect(await page.locator("#spoken").innerText()).toBe(`B3 #DIV/0!: ${text}`);
    await page.keyboard.press("Escape");
    await sentence.waitFor({ state: "hidden" });
    await sheet.go("F9");
    await sheet.cell("B3").hover();
    await sentence.waitFor();
    await sentence.hover();
    expect(await sentence.isVisible()).toBe(true);
    await page.keyboard.press("Escape");
    await sentence.waitFor({ state: "hidden" });
  });

  it("names everything that can be used, in sizes that can be hit", async () => {
    const { page } = sheet;
    const poor = await page.evaluate(() =>
      [...document.querySelectorAll<HTMLElement>(".page button, .page input, .page textarea, .page [tabindex='0']")]
        .filter((element) => element.getClientRects().length > 0 && !element.closest(".pane-body"))
        .flatMap((element) => {
          const name = element.getAttribute("aria-label") ?? element.textContent ?? "";
          const box = element.getBoundingClientRect();
          const faults = [];
          if (name.trim() === "") faults.push("no name");
          if (box.height < 24 || box.width < 24) faults.push(`${box.width} × ${box.height}`);
          return faults.map((fault) => `${element.tagName} ${name}: ${fault}`);
        }),
    );
    expect(poor).toEqual([]);
    const ids = await page.evaluate(() => [...document.querySelectorAll("[id]")].map((element) => element.id));
    expect(new Set(ids).size).toBe(ids.length);
    const dangling = await page.evaluate(() =>
      [...document.querySelectorAll("[aria-controls],[aria-describedby],[aria-activedescendant]")].flatMap((element) =>
        ["aria-describedby", "aria-activedescendant"].flatMap((name) => (element.getAttribute(name) ?? "").split(" ").filter((id) => id !== "" && !document.getElementById(id))),
      ),
    );
    expect(dangling).toEqual([]);
  });

  it("keeps its lines in forced colours: selection, ranges and spills are drawn with borders", async () => {
    const forced = await site.open({ forcedColors: "active" });
    const other = await new PracticePage(forced.page).ready();
    await other.go("C9");
    await other.page.keyboard.press("F2");
    const style = (selector: string) => other.page.locator(selector).first().evaluate((element) => {
      const computed = getComputedStyle(element);
      return { kind: computed.borderTopStyle, width: computed.borderTopWidth };
    });
    expect(await style(".outline.mark1:not([hidden])")).toEqual({ kind: "dashed", width: "2px" });
    expect((await style(".outline.active")).kind).toBe("solid");
    await forced.close();
  });

  it("has no sideways scrolling of the page at 320 pixels, and opens the pane over the sheet", async () => {
    const narrow = await site.open({ viewport: { width: 320, height: 640 } });
    const { page } = narrow;
    await new PracticePage(page).ready();
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBe(320);
    await page.getByRole("button", { name: "Pane" }).click();
    await page.locator("#pane").waitFor();
    await page.keyboard.press("Escape");
    await page.locator("#pane").waitFor({ state: "hidden" });
    expect(await page.evaluate(() => document.activeElement?.textContent)).toBe("Pane");
    await narrow.close();
  });

  it("reads and writes numbers the way the browser's language does", async () => {
    const german = await site.open({ locale: "de-DE" });
    const other = await new PracticePage(german.page).ready();
    await other.sheet("Chiller rates");
    await other.shows("C5", "0,0200");
    await other.newSheet();
    await other.type("A1", "0,25");
    await other.type("A2", "=SUM(A1;1,5;2)");
    await other.shows("A2", "3,75");
    await other.go("A3");
    await german.page.keyboard.type("=IF(A1>0,2;");
    expect(await german.page.locator(".hint .call").innerText()).toBe("IF(");
    await german.page.keyboard.type('"ja";"nein")');
    await german.page.keyboard.press("Enter");
    await other.shows("A3", "ja");
    await other.go("A4:B4");
    await other.pasteText("1,5\t2");
    await other.type("C4", "=A4*B4");
    await other.shows("C4", "3");
    expect(german.errors).toEqual([]);
    await german.close();
  });
});
