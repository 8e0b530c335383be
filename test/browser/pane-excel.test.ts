import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openSite, type OpenPage, type Site } from "../support/browser";
import { inExcel, type HostWindow } from "../support/excel/page";
import { PanePart } from "../support/pane";

const SHEETS = [
  {
    name: "Rates",
    cells: [
      ["", "Running", "Degraded", "Failed"],
      ["Running", "", 0.02, 0.001],
      ["Degraded", 0.1, "", -0.05],
      ["Failed", 0.5, 0, ""],
      [],
      ["=CTMC.STATIONARY(A1:D4)"],
      ["=CTMC.CHECK(A1:D4)"],
    ],
  },
];

/** The same pane, in the page that Excel loads, over the adapter and a stand-in for Excel. */
describe("the pane in Excel", () => {
  let site: Site;
  beforeAll(async () => {
    site = await openSite();
  });
  afterAll(() => site?.close());

  async function opened(): Promise<{ open: OpenPage; pane: PanePart }> {
    const open = await site.open(inExcel(SHEETS));
    return { open, pane: await new PanePart(open.page).ready() };
  }
  const type = ({ page }: OpenPage, row: number, column: number, text: string) =>
    page.evaluate(([r, c, entry]) => {
      const { book } = (window as unknown as HostWindow).host;
      book.apply([{ kind: "type", sheet: book.sheetNamed("Rates")!.id, row: r, column: c, text: entry }], "type");
    }, [row, column, text] as const);
  const value = ({ page }: OpenPage, row: number, column: number) =>
    page.evaluate(([r, c]) => {
      const { book } = (window as unknown as HostWindow).host;
      return book.view(book.sheetNamed("Rates")!.id, r, c).value;
    }, [row, column] as const);
  /** Selects cells of the sheet as a person does. */
  const select = ({ page }: OpenPage, row: number, column: number) =>
    page.evaluate(([r, c]) => {
      const { book, state } = (window as unknown as HostWindow).host;
      state.selection = [{ sheet: book.sheetNamed("Rates")!.id, row: r, column: c, rows: 1, columns: 1 }];
      return state.raise("workbook.onSelectionChanged");
    }, [row, column] as const);
  async function closed({ errors, close }: OpenPage): Promise<void> {
    expect(errors).toEqual([]);
    await close();
  }

  it("finds what is wrong with the selected table, follows the sheet, and refuses in the formula's words", async () => {
    const { open, pane } = await opened();
    await select(open, 1, 2);
    await pane.looksAt("Rates A1:D4");
    const finding = pane.finding("rateNegative");
    await finding.waitFor();
    const refusal = await value(open, 6, 2);
    expect(refusal).toContain("-0.05 is not a rate");
    expect(await finding.innerText()).toContain(refusal);
    expect(await value(open, 5, 0)).toBe("#VALUE!");
    await type(open, 2, 3, "0.05");
    await finding.waitFor({ state: "detached" });
    await pane.counts("0 stops");
    // Balance by hand: with running 1, degraded d and failed f: 0.021 = 0.1 d + 0.5 f and 0.15 d = 0.02, so d = 2/15, f = 23/1500.
    expect(await value(open, 5, 0)).toBeCloseTo(1 / (1 + 2 / 15 + 23 / 1500), 14);
    await closed(open);
  });

  it("goes to a finding's cell", async () => {
    const { open, pane } = await opened();
    await select(open, 0, 1);
    await pane.finding("rateNegative").getByRole("button", { name: "Select Rates D3" }).click();
    await open.page.waitForFunction(() => {
      const { selection } = (window as unknown as HostWindow).host.state;
      return selection !== "chart" && selection[0].row === 2 && selection[0].column === 3;
    });
    await closed(open);
  });

  it("relinks, freezes to values and puts the formulas back", async () => {
    const { open, pane } = await opened();
    await type(open, 2, 3, "0.05");
    await open.page.evaluate(() => {
      const { book, state } = (window as unknown as HostWindow).host;
      state.lost.set(`${book.sheetNamed("Rates")!.id} 5 0`, "=_xldudf_CTMC_STATIONARY(A1:D4)");
    });
    await pane.tab("Book").click();
    await pane.word("Relink").click();
    await pane.root.getByText("1 formula relinked.").waitFor();
    const before = await value(open, 5, 1);
    expect(before).toBeGreaterThan(0);
    await pane.word("Freeze to values…").click();
    await pane.word("Freeze 2 formulas").click();
    await pane.root.getByText("2 formulas frozen. They are listed on the sheet Frozen formulas.").waitFor();
    await type(open, 1, 2, "0.2");
    expect(await value(open, 5, 1)).toBe(before);
    await pane.word("Put the formulas back").click();
    await pane.root.getByText("2 formulas put back.").waitFor();
    expect(await value(open, 5, 1)).not.toBe(before);
    await closed(open);
  });

  it("says in words why a protected sheet cannot be changed", async () => {
    const { open, pane } = await opened();
    await type(open, 2, 3, "0,05");
    await select(open, 1, 2);
    await open.page.evaluate(() => (window as unknown as HostWindow).host.state.protectedSheets.add("Rates"));
    const finding = pane.finding("rateIsText");
    await finding.getByRole("button", { name: "Read the text as numbers…" }).click();
    await finding.getByRole("button", { name: "Change 1 cell" }).click();
    await pane.root.getByRole("alert").getByText('The sheet "Rates" is protected').waitFor();
    expect(await value(open, 2, 3)).toBe("0,05");
    await closed(open);
  });
});
