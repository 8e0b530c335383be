import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

/** Typing, moving, filling, copying and undoing, with the keyboard and the mouse, on an empty sheet. */
describe("the practice workbook's sheet", () => {
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
    expect(opened.foreignRequests).toEqual([]);
    await site.close();
  });

  it("types, replaces, edits with F2 and gives up with Escape", async () => {
    const { page } = sheet;
    await sheet.newSheet();
    await page.keyboard.type("12");
    await page.keyboard.press("Tab");
    await page.keyboard.type("=A1*2");
    await page.keyboard.press("Enter");
    await sheet.shows("B1", "24");
    await sheet.isActive("B2");
    await sheet.type("A1", "5");
    await sheet.shows("B1", "10");
    await sheet.go("A1");
    await page.keyboard.press("F2");
    await page.keyboard.type("0");
    await page.keyboard.press("Enter");
    await sheet.shows("B1", "100");
    await sheet.go("A1");
    await page.keyboard.type("999");
    await page.keyboard.press("Escape");
    await sheet.shows("A1", "50");
    await page.keyboard.press("Delete");
    await sheet.shows("A1", "");
    await sheet.shows("B1", "0");
  });

  it("undoes and does again, saying what", async () => {
    const { page } = sheet;
    await page.keyboard.press("Control+z");
    await sheet.shows("A1", "50");
    await sheet.says("Undone: clearing A1");
    await page.getByRole("button", { name: "Redo" }).click();
    await sheet.shows("A1", "");
    await page.keyboard.press("Control+z");
    await sheet.shows("B1", "100");
  });

  it("points at cells with arrow keys and with the mouse while a formula is typed", async () => {
    const { page } = sheet;
    await sheet.go("A1:A3");
    await sheet.pasteText("1\n2\n4");
    await sheet.go("B4");
    await page.keyboard.type("=SUM(");
    for (const key of ["ArrowUp", "ArrowLeft", "Shift+ArrowUp", "Shift+ArrowUp"]) await page.keyboard.press(key);
    expect(await sheet.formula()).toBe("=SUM(A1:A3");
    await page.keyboard.type(")");
    await page.keyboard.press("Enter");
    await sheet.shows("B4", "7");
    await sheet.go("C4");
    await page.keyboard.type("=10*");
    const from = (await sheet.cell("A1").boundingBox())!;
    const to = (await sheet.cell("A3").boundingBox())!;
    await page.mouse.click(to.x + 20, to.y + 10);
    expect(await sheet.formula()).toBe("=10*A3");
    await page.keyboard.type("+SUM(");
    await page.mouse.move(from.x + 20, from.y + 10);
    await page.mouse.down();
    await page.mouse.move(to.x + 20, to.y + 10, { steps: 4 });
    await page.mouse.up();
    expect(await sheet.formula()).toBe("=10*A3+SUM(A1:A3");
    // Each range has its own kind of line, under its text and around its cells.
    expect(await page.locator(".field.bar u").evaluateAll((found) => found.map((u) => u.className))).toEqual(["mark0", "mark1"]);
    expect(await page.locator(".outline.mark:not([hidden])").count()).toBe(2);
    await page.keyboard.type(")");
    await page.keyboard.press("Enter");
    await sheet.shows("C4", "47");
  });

  it("points at another sheet and comes back to its cell", async () => {
    const { page } = sheet;
    await sheet.go("D4");
    await page.keyboard.type("=1+");
    await page.getByRole("tab", { name: "Chiller rates" }).click();
    await page.locator('#grid[aria-label="Sheet Chiller rates"]').waitFor();
    const box = (await sheet.cell("C5").boundingBox())!;
    await page.mouse.click(box.x + 10, box.y + 10);
    expect(await sheet.formula()).toBe("=1+'Chiller rates'!C5");
    await page.keyboard.press("Enter");
    await sheet.shows("D4", "1.02");
  });

  it("fixes references with F4", async () => {
    const { page } = sheet;
    await sheet.go("E4");
    await page.keyboard.type("=A1");
    await page.keyboard.press("F4");
    expect(await sheet.formula()).toBe("=$A$1");
    await page.keyboard.press("F4");
    expect(await sheet.formula()).toBe("=A$1");
    await page.keyboard.press("Escape");
  });

  it("fills down and right, and with the corner of the selection", async () => {
    const { page } = sheet;
    await sheet.type("D1", "=A1+100");
    await sheet.go("D1:D3");
    await page.keyboard.press("Control+d");
    await sheet.shows("D3", "104");
    await sheet.type("E1", "=$A1");
    await sheet.go("E1:F1");
    await page.keyboard.press("Control+r");
    await sheet.go("F1");
    expect(await sheet.formula()).toBe("=$A1");
    await sheet.go("E1");
    const corner = (await page.locator(".handle").boundingBox())!;
    const target = (await sheet.cell("E3").boundingBox())!;
    await page.mouse.move(corner.x + 4, corner.y + 4);
    await page.mouse.down();
    await page.mouse.move(target.x + 10, target.y + 10, { steps: 4 });
    await page.mouse.up();
    await sheet.shows("E3", "4");
  });

  it("copies between cells with formulas, and as tab-separated text for other programs", async () => {
    const { page } = sheet;
    await opened.context.grantPermissions(["clipboard-read", "clipboard-write"]);
    await sheet.go("D1:E2");
    await page.keyboard.press("Control+c");
    await sheet.says("D1:E2 is copied");
    expect((await page.evaluate(() => navigator.clipboard.readText())).replaceAll("\r", "")).toBe("101\t1\n102\t2");
    await sheet.go("D10");
    await page.keyboard.press("Control+v");
    await sheet.says("Pasted into D10:E11");
    await sheet.go("D10");
    expect(await sheet.formula()).toBe("=A10+100");
    await sheet.pasteText('plain\t"two\nlines"\r\n3\t=1+1\r\n');
    await sheet.shows("D11", "3");
    await sheet.shows("E11", "2");
    await sheet.go("D11");
    await page.keyboard.press("Control+x");
    await sheet.go("H1");
    await page.keyboard.press("Control+v");
    await sheet.shows("H1", "3");
    await sheet.shows("D11", "");
  });

  it("moves by page, to edges, round a selection, and to any of a million rows", async () => {
    const { page } = sheet;
    await sheet.go("A1");
    await page.keyboard.press("Control+ArrowDown");
    await sheet.isActive("A3");
    await page.keyboard.press("Control+Home");
    await page.keyboard.press("PageDown");
    await page.keyboard.press("PageUp");
    await sheet.isActive("A1");
    await sheet.go("A1:B2");
    for (const address of ["B1", "A2", "B2", "A1"]) {
      await page.keyboard.press("Tab");
      await sheet.isActive(address);
    }
    await sheet.go("XFD1048576");
    await sheet.type("XFC1048576", "the last row");
    await sheet.shows("XFC1048576", "the last row");
    const box = (await sheet.cell("XFC1048576").boundingBox())!;
    expect(box.y).toBeGreaterThan(0);
    expect(box.y + box.height).toBeLessThan(800);
    await page.keyboard.press("Control+z");
    await sheet.go("A1");
  });

  it("draws only what is in view", async () => {
    const { page } = sheet;
    expect(await page.locator(".cell").count()).toBeLessThan(800);
    await page.locator("#grid").evaluate((grid) => grid.scrollTo({ top: 2_000 }));
    await page.waitForFunction(() => [...document.querySelectorAll(".rowhead")].some((head) => head.textContent === "80"));
    expect(await page.locator(".cell").count()).toBeLessThan(800);
    await sheet.go("A1");
  });

  it("shows that a result has no room, and lets it in when there is", async () => {
    const { page } = sheet;
    await sheet.type("K5", "in the way");
    await sheet.type("K3", "={1;2;3;4}");
    await sheet.shows("K3", "#SPILL!");
    await sheet.go("K3");
    await page.locator(".sentence:not([hidden])").waitFor();
    expect(await page.locator(".sentence").innerText()).toMatch(/K5/);
    await sheet.go("K5");
    await page.keyboard.press("Delete");
    await sheet.shows("K6", "4");
    await sheet.type("L3", "=SUM(K3#)");
    await sheet.shows("L3", "10");
    await sheet.go("K5");
    expect(await sheet.cell("K5").getAttribute("aria-label")).toBe("K5, 3, spilled from K3");
  });

  it("keeps any garbage as it was typed and never breaks", async () => {
    const { page } = sheet;
    const garbage = ["=", "=(", "=SUM(", "=A1:", "='x", '="', "={1,2;3}", "=1/0", "=#REF!", "=A5#", "=LET(x,", "=CTMC.", "=CTMC.TRANSITION(", `=${"(".repeat(300)}`, "@", "1e999", "-", "--1", "50%%", "=ZZZZ99999999", "=Nowhere!A1", "=M23", "a\tb"];
    for (const [i, text] of garbage.entries()) {
      const address = `M${i + 1}`;
      await sheet.go(address);
      await page.keyboard.press("F2");
      await page.keyboard.insertText(text);
      await page.locator(".field.in-cell textarea").press("Escape"); // closes the names, if any are offered
      if (!(await page.locator(".field.in-cell").isVisible())) {
        await page.keyboard.press("F2");
        await page.keyboard.insertText(text);
      }
      await page.keyboard.press("Enter");
      await sheet.go(address);
      expect(await sheet.formula(), address).toBe(text);
    }
    expect(opened.errors).toEqual([]);
  });
});
