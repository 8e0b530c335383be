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

  it("says where a spilled value comes from when someone wants to clear it", async () => {
    await sheet.go("K5");
    await sheet.page.keyboard.press("Delete");
    await sheet.says("K5 is filled by the formula in K3");
    await sheet.shows("K5", "3");
  });

  it("says at once when something typed takes the room of a result", async () => {
    const { page } = sheet;
    await sheet.type("K5", "mine");
    await sheet.says("K3: K5 is in the way");
    await page.keyboard.press("Control+z");
    await sheet.shows("K5", "3");
  });

  it("sets column widths by dragging, double click and keys, and hides and shows rows", async () => {
    const { page } = sheet;
    await sheet.type("A20", "a text that is longer than its column");
    await sheet.type("B20", "next");
    const width = async (): Promise<number> => (await sheet.cell("A20").boundingBox())!.width;
    const before = await width();
    const head = (await page.getByRole("columnheader", { name: "A", exact: true }).boundingBox())!;
    await page.mouse.move(head.x + head.width - 2, head.y + 10);
    await page.mouse.down();
    await page.mouse.move(head.x + head.width + 38, head.y + 10, { steps: 4 });
    await page.mouse.up();
    await page.waitForFunction((w) => document.getElementById("r19c0")!.getBoundingClientRect().width === w, before + 40);
    await page.mouse.dblclick(head.x + head.width + 38, head.y + 10);
    await page.waitForFunction((w) => document.getElementById("r19c0")!.getBoundingClientRect().width > w, before + 60);
    const text = await sheet.cell("A20").locator("span").evaluate((span) => span.scrollWidth <= span.clientWidth);
    expect(text).toBe(true);
    await sheet.go("A20");
    const fitted = await width();
    await page.keyboard.press("Alt+Shift+ArrowLeft");
    await page.waitForFunction((w) => document.getElementById("r19c0")!.getBoundingClientRect().width === w, fitted - 8);
    await sheet.go("A21:A22");
    await page.getByRole("button", { name: "Sheet", exact: true }).click();
    await page.getByRole("menuitem", { name: "Hide rows" }).click();
    await sheet.go("A20");
    await page.keyboard.press("ArrowDown");
    await sheet.isActive("A23");
    await sheet.go("A20:A23");
    await page.getByRole("button", { name: "Sheet", exact: true }).click();
    await page.getByRole("menuitem", { name: "Show rows in the selection" }).click();
    await sheet.go("A20");
    await page.keyboard.press("ArrowDown");
    await sheet.isActive("A21");
  });

  it("draws merged cells as one, steps over them, and splits them again", async () => {
    const { page } = sheet;
    await sheet.type("P2", "over three");
    await sheet.go("P2:R3");
    await page.getByRole("button", { name: "Sheet", exact: true }).click();
    await page.getByRole("menuitem", { name: "Merge the selected cells" }).click();
    await page.waitForFunction(() => document.getElementById("r1c15")?.getAttribute("aria-colspan") === "3");
    expect((await sheet.cell("P2").boundingBox())!.width).toBe(3 * 98);
    expect((await sheet.cell("P2").boundingBox())!.height).toBe(2 * 27);
    expect(await sheet.cell("Q3").isVisible()).toBe(false);
    await sheet.go("P2");
    await page.keyboard.press("ArrowRight");
    await sheet.isActive("S2");
    await page.keyboard.press("ArrowLeft");
    await sheet.isActive("P2");
    await page.keyboard.press("Control+z");
    await page.waitForFunction(() => document.getElementById("r1c15")?.getAttribute("aria-colspan") === null);
  });

  it("draws a merged area while any part of it is in view, also when its first cell is not", async () => {
    const { page } = sheet;
    await sheet.type("P40", "a tall note");
    await sheet.go("P40:Q140");
    await page.getByRole("button", { name: "Sheet", exact: true }).click();
    await page.getByRole("menuitem", { name: "Merge the selected cells" }).click();
    await sheet.go("O139");
    await sheet.go("O110"); // row 40 is far above what is drawn
    const area = (await sheet.cell("P40").boundingBox())!;
    const beside = (await sheet.cell("O110").boundingBox())!;
    expect(await sheet.cell("O112").isVisible()).toBe(true);
    expect(await sheet.cell("P112").isVisible()).toBe(false);
    expect(area.x).toBe(beside.x + beside.width);
    expect(area.y).toBeLessThan(beside.y);
    expect(area.y + area.height).toBeGreaterThan(beside.y);
    await sheet.go("P40");
    await page.keyboard.press("Control+z");
    await sheet.go("P40");
    await page.keyboard.press("Delete");
  });

  it("takes a number typed into a percent cell for percent, and shows so while it is typed", async () => {
    const { page } = sheet;
    await sheet.type("D30", "25%");
    await sheet.go("D30");
    await page.keyboard.type("12");
    expect(await sheet.formula()).toBe("12%");
    await page.keyboard.press("Enter");
    await sheet.shows("D30", "12%");
    await sheet.type("D31", "=D30*100");
    await sheet.shows("D31", "12");
    await sheet.go("D30");
    await sheet.pasteText("0.5"); // a value of another program stays the value
    await sheet.shows("D30", "50%");
  });

  it("shows numbers in every named format, with more and fewer decimals, and never cuts one", async () => {
    const { page } = sheet;
    const choose = async (name: string): Promise<void> => {
      await page.getByRole("button", { name: "Numbers" }).click();
      await page.getByRole("menu").getByText(name, { exact: true }).click();
    };
    await sheet.type("C20", "46508.125");
    await sheet.go("C20");
    await choose("Fixed decimals");
    await sheet.shows("C20", "46508.125");
    await choose("Fewer decimals");
    await sheet.shows("C20", /^46508\.1[23]$/);
    await choose("Scientific");
    await sheet.shows("C20", "4.65E+04");
    await choose("More decimals");
    await sheet.shows("C20", "4.651E+04");
    await choose("Percent");
    await sheet.shows("C20", "4650812.5%");
    await choose("Date");
    await sheet.shows("C20", "2027-05-01");
    await choose("General");
    await sheet.shows("C20", /^46508\.1/);
    // Too narrow for any form: a sign that something is there, and the number for the ear.
    await sheet.type("C20", "123456789012345");
    await sheet.go("C20");
    for (let i = 0; i < 8; i += 1) await page.keyboard.press("Alt+Shift+ArrowLeft");
    await sheet.shows("C20", "…");
    expect(await sheet.cell("C20").getAttribute("aria-label")).toBe("C20, 1.23457E+14");
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
