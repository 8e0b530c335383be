import { readFile, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

describe("files of the practice workbook", () => {
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

  const open = async (file: string): Promise<void> => {
    const [chooser] = await Promise.all([opened.page.waitForEvent("filechooser"), opened.page.getByRole("button", { name: "Open .xlsx" }).click()]);
    await chooser.setFiles(file);
  };
  let saved: string;

  it("saves the example as .xlsx and opens it again with the same figures", async () => {
    const { page } = opened;
    const before = await sheet.text("C9");
    const [download] = await Promise.all([page.waitForEvent("download"), page.getByRole("button", { name: "Save .xlsx" }).click()]);
    expect(download.suggestedFilename()).toBe("stayrate.xlsx");
    saved = await download.path();
    expect((await readFile(saved)).subarray(0, 2).toString()).toBe("PK");
    await sheet.sheet("Chiller rates");
    await sheet.type("C5", "0.5");
    const copy = path.join(tmpdir(), `stayrate-test-${process.pid}.xlsx`);
    await writeFile(copy, await readFile(saved));
    await open(copy);
    await sheet.says(/is open/);
    await sheet.shows("C9", before);
    expect(await page.getByRole("tab").filter({ hasText: "From a colleague" }).count()).toBe(1);
    await sheet.go("C9");
    expect(await sheet.formula()).toMatch(/^=CTMC\.DISTRIBUTION\('Chiller rates'!A4:F9,/);
    // What stood there before can be brought back.
    await page.getByRole("button", { name: "Bring the one before back" }).click();
    await sheet.sheet("Chiller rates");
    await sheet.shows("C5", "0.5000");
  });

  it("leaves the workbook untouched when a file cannot be read, and says why", async () => {
    const file = path.join(tmpdir(), `stayrate-damaged-${process.pid}.xlsx`);
    await writeFile(file, (await readFile(saved)).subarray(0, 900));
    await open(file);
    await sheet.says(/was not opened: /);
    await sheet.shows("C5", "0.5000");
  });
});
