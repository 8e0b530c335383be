import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { PracticePage } from "../support/practice";

/** Long answers in a real browser: a worker of the same script works them out while the sheet stays alive. */
describe("a long answer", () => {
  let site: Site;
  let opened: OpenPage;
  let sheet: PracticePage;

  beforeAll(async () => {
    site = await openSite();
    opened = await site.open();
    sheet = await new PracticePage(opened.page).ready();
    await sheet.newSheet();
  });
  afterAll(async () => {
    expect(opened.errors).toEqual([]);
    expect(opened.foreignRequests).toEqual([]);
    await site.close();
  });

  it("comes from a worker of functions.js, and the sheet calculates meanwhile", async () => {
    const { page } = sheet;
    const started = page.waitForEvent("worker");
    await sheet.type("A1", "=SUM(CTMC.ELASTICITY(CTMC.BIRTHDEATH(SEQUENCE(1,130,5,0.1),SEQUENCE(1,130,1,0.3)),{1,2,3},1,4))");
    const worker = await started;
    expect(new URL(worker.url()).pathname).toMatch(/\/functions\.js$/);
    await sheet.type("C1", "=CTMC.TRANSITION({0,1;3,0},1000)");
    await sheet.shows("C1", "0.75");
    await sheet.shows("A1", /\d/);
    expect(page.workers()).toHaveLength(1);
  });

  it("says in the cell why it refuses", async () => {
    await sheet.type("A3", "=CTMC.TRANSITION({0,-1;3,0},1)");
    await sheet.shows("A3", "#VALUE!");
  });
});
