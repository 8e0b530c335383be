import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PanePart } from "../support/pane";
import { PracticePage } from "../support/practice";

/** The Check view beside the practice workbook: findings, remedies with undo, acceptance, units, sign-off, check sheet. */
describe("the pane checks a table", () => {
  let site: Site;
  beforeAll(async () => {
    site = await openSite();
  });
  afterAll(() => site.close());

  async function opened(options: Parameters<Site["open"]>[0] = {}): Promise<{ open: OpenPage; sheet: PracticePage; pane: PanePart }> {
    const open = await site.open(options);
    const sheet = await new PracticePage(open.page).ready();
    const pane = await new PanePart(open.page).ready();
    return { open, sheet, pane };
  }

  async function closed(open: OpenPage): Promise<void> {
    expect(open.errors).toEqual([]);
    expect(open.foreignRequests).toEqual([]);
    await open.close();
  }

  it("offers the workbook's tables where none is selected, and looks at the one chosen", async () => {
    const { open, pane } = await opened();
    await pane.word("Check Chiller rates A4:F9").click();
    await pane.looksAt("Chiller rates A4:F9");
    await open.page.locator('#grid[aria-label="Sheet Chiller rates"]').waitFor();
    await pane.counts("0 stops");
    expect(await pane.root.locator(".sr-what").innerText()).toContain("5 states · 8 arrows · unit not set · square, names on top and left");
    await closed(open);
  });

  it("says what is wrong and where, goes there, and mends it cell by cell with undo", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("From a colleague");
    await sheet.go("C5");
    await pane.looksAt("From a colleague A3:F8");
    await pane.counts("4 stops");
    // What a formula refuses with is what the pane says.
    const text = pane.finding("rateIsText");
    expect(await text.innerText()).toContain('Row 2 (Vibrating), column 3: "0,120" is text.');
    await text.getByRole("button", { name: "Select From a colleague D5" }).click();
    await sheet.isActive("D5");
    await pane.looksAt("From a colleague A3:F8");

    await text.getByRole("button", { name: "Read the text as numbers…" }).click();
    const preview = text.getByRole("table", { name: "Before and after" });
    expect((await preview.locator("tbody").innerText()).split(/\s+/)).toEqual(["D5", "0,120", "0.12"]);
    expect(await sheet.text("D5")).toBe("0,120");
    await text.getByRole("button", { name: "Change 1 cell" }).click();
    await sheet.shows("D5", "0.12");
    await pane.counts("3 stops");
    await pane.word("Undo").click();
    await sheet.shows("D5", "0,120");
    await pane.counts("4 stops");
    await closed(open);
  });

  it("keeps its table, names and all, when steps over many cells are undone and done again", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("Chiller rates");
    await sheet.go("B5");
    await pane.word("Fill the diagonal…").click();
    await pane.word("Change 5 cells").click();
    await sheet.shows("B5", /^-0\.026/);
    await open.page.locator("#grid").focus();
    await open.page.keyboard.press("Control+z");
    await sheet.shows("B5", "");
    await sheet.isActive("B5");
    await open.page.keyboard.press("Control+y");
    await sheet.shows("B5", /^-0\.026/);
    expect(await open.page.locator("#grid [aria-selected=true]").count()).toBe(1);
    await pane.counts("0 notes");
    await pane.looksAt("Chiller rates A4:F9");
    await closed(open);
  });

  it("does not undo over a later change", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("From a colleague");
    await sheet.go("B4");
    await pane.finding("rowSum").getByRole("button", { name: "Clear the diagonal…" }).click();
    await pane.word("Change 1 cell").click();
    await sheet.shows("B4", "");
    await sheet.type("B4", "7");
    await pane.word("Undo").click();
    await pane.root.getByRole("alert").getByText("has changed since").waitFor();
    await sheet.shows("B4", "7");
    await closed(open);
  });

  it("finds a fault as it is typed", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await pane.counts("0 stops");
    await sheet.type("C5", "-0.02");
    await pane.counts("1 stop");
    await pane.finding("rateNegative").getByText("-0.02 is not a rate").waitFor();
    await sheet.type("C5", "0.02");
    await pane.counts("0 stops");
    await closed(open);
  });

  it("tells each arrow as a sentence in the table's unit, and keeps the unit over a reload", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await pane.looksAt("Chiller rates");
    expect(await pane.arrow("Running → Degraded").innerText()).toContain("0.02 per time unit, about once in 50 time units");
    await pane.word(/^Unit not set/).click();
    await open.page.keyboard.type("per day");
    await open.page.keyboard.press("Enter");
    await pane.arrow("Running → Degraded").getByText("0.02 a day, about once in 50 days").waitFor();
    expect(await pane.focused()).toBe("per day"); // the focus is back on the word that opened the form
    await pane.arrow("Repair → Running").getByRole("button").click();
    await sheet.isActive("B8");
    await sheet.kept();
    await open.page.reload();
    await new PracticePage(open.page).ready();
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await pane.arrow("Running → Degraded").getByText("0.02 a day").waitFor();
    await closed(open);
  });

  it("accepts a finding with reason and initials by keyboard alone; it comes back when the values change", async () => {
    const { open, sheet, pane } = await opened();
    const { page } = open;
    await sheet.sheet("Chiller rates");
    await sheet.go("B9");
    await page.keyboard.press("Delete");
    const card = pane.finding("noExit");
    await card.waitFor();
    await card.getByRole("button", { name: "Accept…" }).focus();
    await page.keyboard.press("Enter");
    await page.keyboard.type("out of service for good");
    await page.keyboard.press("Tab");
    await page.keyboard.type("AB");
    await page.keyboard.press("Enter");
    await pane.counts("1 accepted");
    expect(await pane.focused()).toContain("1 accepted"); // not lost to the page
    const accepted = pane.root.locator("details", { hasText: "1 accepted" });
    await accepted.locator("summary").click();
    expect(await accepted.innerText()).toMatch(/AB, \d+ \w+ \d{4}: out of service for good/);
    await sheet.kept();
    await page.reload();
    await new PracticePage(page).ready();
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await pane.counts("1 accepted");
    // A state of the finding is renamed: it is another finding now, with what was said before.
    await sheet.type("A9", "Yard");
    await sheet.type("F4", "Yard");
    await pane.counts("0 accepted");
    await pane.finding("noExit").getByText("Accepted by AB").waitFor();
    await closed(open);
  });

  it("signs off, then lists what has changed since", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await pane.word("Sign off…").click();
    await open.page.keyboard.type("A. Berg");
    await open.page.keyboard.press("Enter");
    await pane.root.getByText(/Signed off on \d+ \w+ \d{4} by A\. Berg/).waitFor();
    await sheet.type("C5", "0.03");
    await pane.root.getByText(/Changed since signed off on \d+ \w+ \d{4} by A\. Berg/).waitFor();
    const changes = pane.root.getByRole("list", { name: "Arrows that differ from the signed-off table" });
    expect(await changes.innerText()).toBe("Running → Degraded: was 0.02 per time unit, now 0.03 per time unit");
    await sheet.type("C5", "0.02");
    await pane.root.getByText(/Signed off on/).waitFor();
    await closed(open);
  });

  it("writes a check sheet, and a second beside the first", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.sheet("Chiller rates");
    await sheet.go("C5");
    await pane.looksAt("Chiller rates A4:F9");
    await pane.word("Write a check sheet").click();
    await pane.word("Go there").click();
    await open.page.locator('#grid[aria-label="Sheet Check Chiller rates"]').waitFor();
    await sheet.shows("A1", "Check sheet");
    await sheet.shows("B3", "A4:F9");
    await pane.looksAt("Chiller rates A4:F9"); // still the table, not the sheet about it
    await pane.word("Write a check sheet").click();
    await pane.root.getByText(/Check sheet written: Check Chiller rates.?.?2/).waitFor();
    await closed(open);
  });

  it("asks once what only a person can know", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.newSheet();
    await sheet.go("A1");
    await sheet.pasteText("\tIdle\tBusy\nIdle\t\t0.3\nBusy\t0.9\t");
    await sheet.go("B2");
    const question = pane.root.locator("[data-question]");
    await question.getByText("Largest arrow: Busy → Idle, 0.9 per time unit").waitFor();
    await question.getByRole("button", { name: "Yes, that is meant" }).click();
    await question.waitFor({ state: "detached" });
    await sheet.type("B3", "0.8");
    await pane.arrow("Busy → Idle").getByText("0.8 per time unit").waitFor();
    expect(await question.count()).toBe(0);
    await pane.word("Ask again").click();
    await question.waitFor();
    await closed(open);
  });

  it("shows state names as text, whatever they are", async () => {
    const { open, sheet, pane } = await opened();
    await sheet.newSheet();
    await sheet.go("A1");
    const hostile = "<img src=x onerror=alert(1)>";
    await sheet.pasteText(`from\t${hostile}\tDown\n${hostile}\t\t0.3\nDown\t0.9\t`);
    await sheet.go("B2");
    await pane.arrow(`${hostile} → Down`).waitFor();
    expect(await pane.root.locator("img").count()).toBe(0);
    await closed(open);
  });

  for (const [name, options] of Object.entries({ light: {}, dark: { colorScheme: "dark" }, "forced colours": { forcedColors: "active" } } as const))
    it(`fits at 350 and 300 pixels, with targets of 24 pixels, in ${name}`, async () => {
      const { open, sheet, pane } = await opened(options);
      await sheet.sheet("From a colleague");
      await sheet.go("C5");
      await pane.counts("4 stops");
      await pane.finding("rowSum").getByRole("button", { name: "Clear the diagonal…" }).click();
      for (const width of ["350px", "300px"]) {
        await pane.root.evaluate((root, px) => {
          root.style.width = px;
        }, width);
        expect(await pane.overflow()).toBe(0);
        expect(await pane.smallTargets()).toEqual([]);
        await pane.tab("Book").click();
        await pane.root.locator("[data-formula]").first().waitFor();
        expect(await pane.overflow()).toBe(0);
        await pane.tab("Check").click();
        await pane.counts("4 stops");
      }
      await closed(open);
    });

  it("is a set of tabs for the keyboard, and says its limits at all times", async () => {
    const { open, pane } = await opened();
    await pane.tab("Check").focus();
    await open.page.keyboard.press("ArrowRight");
    expect(await pane.tab("Book").getAttribute("aria-selected")).toBe("true");
    expect(await pane.focused()).toBe("Book");
    await open.page.keyboard.press("Home");
    expect(await pane.tab("Check").getAttribute("aria-selected")).toBe("true");
    await pane.root.getByText("A planning aid with constant rates").click();
    await pane.root.getByText("reserves need the responsible actuary").waitFor();
    await closed(open);
  });
});
