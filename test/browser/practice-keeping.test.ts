import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

/** Nothing typed is lost: reloads, unfinished edits, a second tab, starting over, records that cannot be read. */
describe("what the practice workbook keeps", () => {
  let site: Site;
  beforeAll(async () => {
    site = await openSite();
  });
  afterAll(() => site.close());

  it("finds what was typed after a reload, widths and formats too", async () => {
    const opened = await site.open();
    const { page } = opened;
    let sheet = await new PracticePage(page).ready();
    await sheet.newSheet();
    await sheet.type("B2", "0.25");
    await sheet.type("B3", "=B2*2");
    await sheet.go("B2");
    await page.getByRole("button", { name: "Numbers" }).click();
    await page.getByRole("menuitemradio", { name: "Percent" }).click();
    await sheet.shows("B2", "25.0%");
    await page.keyboard.press("Alt+Shift+ArrowRight");
    const width = (await sheet.cell("B2").boundingBox())!.width;
    await sheet.kept();
    await page.reload();
    sheet = await new PracticePage(page).ready();
    await sheet.sheet("Sheet");
    await sheet.shows("B2", "25.0%");
    await sheet.shows("B3", "0.5");
    expect((await sheet.cell("B2").boundingBox())!.width).toBe(width);
    expect(opened.errors).toEqual([]);
    await opened.close();
  });

  it("keeps what was typed a moment before the page closes, and the edit that was not finished", async () => {
    const opened = await site.open();
    const { page } = opened;
    let sheet = await new PracticePage(page).ready();
    await sheet.newSheet();
    await sheet.type("A1", "typed last");
    await page.keyboard.type("=1+A1 and not fin");
    await page.reload();
    sheet = await new PracticePage(page).ready();
    await page.locator(".field.in-cell textarea").waitFor();
    expect(await page.locator(".field.in-cell textarea").inputValue()).toBe("=1+A1 and not fin");
    await sheet.says("What was being typed when the page closed is back in its cell");
    await sheet.shows("A1", "typed last");
    await page.keyboard.press("Escape");
    await page.keyboard.press("Escape");
    await page.reload();
    await new PracticePage(page).ready();
    expect(await page.locator(".field.in-cell").isVisible()).toBe(false);
    await opened.close();
  });

  it("lets one tab write: the second follows, takes over, and the first follows then", async () => {
    const opened = await site.open();
    const first = await new PracticePage(opened.page).ready();
    await first.sheet("Chiller rates");
    const other = await opened.context.newPage();
    await other.goto(opened.page.url());
    const second = await new PracticePage(other).ready();
    await other.getByText("Another tab is editing this workbook").waitFor();
    await second.sheet("Chiller rates");
    await second.go("C5");
    await other.keyboard.press("Delete");
    await second.shows("C5", "0.0200");
    await second.says("Take over to edit here");
    await first.type("C5", "0.03");
    await second.shows("C5", "0.0300");
    await first.go("C5");
    await opened.page.keyboard.type("0.04");
    await other.getByRole("button", { name: "Take over" }).click();
    await opened.page.getByText("Another tab has taken over").waitFor();
    await second.shows("C5", "0.0400");
    await second.type("C5", "0.05");
    await second.shows("C5", "0.0500");
    await first.sheet("Chiller rates");
    await first.shows("C5", "0.0500");
    // The tab that wrote is closed: whoever comes back to the first one works on there.
    await other.close();
    await opened.page.evaluate(() => dispatchEvent(new Event("focus")));
    await opened.page.getByText("Another tab has taken over").waitFor({ state: "hidden" });
    await first.type("C5", "0.06");
    await first.shows("C5", "0.0600");
    await first.kept();
    expect(opened.errors).toEqual([]);
    await opened.close();
  });

  it("starts over only after asking, without stopping the page", async () => {
    const opened = await site.open();
    const { page } = opened;
    const sheet = await new PracticePage(page).ready();
    await sheet.sheet("Chiller rates");
    await sheet.type("C5", "0.9");
    await page.getByRole("button", { name: "Start over" }).click();
    await page.getByRole("button", { name: "No, keep it" }).click();
    await sheet.shows("C5", "0.9000");
    await page.getByRole("button", { name: "Start over" }).click();
    await page.keyboard.press("Escape");
    await sheet.shows("C5", "0.9000");
    await page.getByRole("button", { name: "Start over" }).click();
    await page.getByRole("button", { name: "Yes, start over" }).click();
    await sheet.sheet("Chiller rates");
    await sheet.shows("C5", "0.0200");
    await sheet.kept();
    expect(opened.errors).toEqual([]);
    await opened.close();
  });

  it("says that a damaged record cannot be read, keeps it, and offers it as a file", async () => {
    const opened = await site.open();
    const { page } = opened;
    await new PracticePage(page).ready();
    const records = () =>
      page.evaluate(
        () =>
          new Promise<string[]>((resolve) => {
            const request = indexedDB.open("stayrate");
            request.onsuccess = () => {
              const keys = request.result.transaction("workbooks").objectStore("workbooks").getAllKeys();
              keys.onsuccess = () => {
                request.result.close();
                resolve(keys.result.map(String));
              };
            };
          }),
      );
    await page.evaluate(
      () =>
        new Promise<void>((resolve) => {
          const request = indexedDB.open("stayrate");
          request.onsuccess = () => {
            const transaction = request.result.transaction("workbooks", "readwrite");
            transaction.objectStore("workbooks").put({ version: 1, book: { version: 1, sheets: "gone" } }, "practice");
            transaction.oncomplete = () => {
              request.result.close();
              resolve();
            };
          };
        }),
    );
    await page.reload();
    await new PracticePage(page).ready();
    await page.getByText("What was kept cannot be read").waitFor();
    expect((await records()).some((key) => key.startsWith("unreadable"))).toBe(true);
    const [download] = await Promise.all([page.waitForEvent("download"), page.getByRole("button", { name: "Save what was kept as a file" }).click()]);
    expect(download.suggestedFilename()).toBe("stayrate-kept.json");
    await page.getByRole("button", { name: "Go on" }).click();
    expect(await page.locator(".banner").isVisible()).toBe(false);
    await opened.close();
  });
});
