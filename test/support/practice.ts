import { expect } from "vitest";
import type { Page } from "playwright-core";

/** The practice workbook as a person uses it: addresses, keys, what cells show. */
export class PracticePage {
  constructor(readonly page: Page) {}

  /** Waits until the sheet is drawn and everything has been worked out. */
  async ready(): Promise<this> {
    await this.page.locator("#grid[aria-activedescendant]").waitFor();
    await this.page.waitForFunction(() => document.querySelector(".cell") !== null && document.querySelector(".cell.busy") === null);
    return this;
  }

  static idOf(address: string): string {
    const [, letters, digits] = /^([A-Z]+)(\d+)$/.exec(address)!;
    const column = [...letters!].reduce((number, letter) => number * 26 + letter.charCodeAt(0) - 64, 0) - 1;
    return `r${Number(digits) - 1}c${column}`;
  }

  /** Goes to an address by typing it into the address box. */
  async go(address: string): Promise<void> {
    const box = this.page.getByRole("textbox", { name: /^Address/ });
    await box.click();
    await box.fill(address);
    await this.page.keyboard.press("Enter");
    const first = PracticePage.idOf(address.replace(/^.*!/, "").split(":")[0]!);
    await this.page.waitForFunction((id) => document.getElementById("grid")?.getAttribute("aria-activedescendant") === id && document.activeElement?.id === "grid", first);
  }

  /** Types into a cell and takes it with Enter. */
  async type(address: string, text: string): Promise<void> {
    await this.go(address);
    await this.page.keyboard.type(text);
    await this.page.keyboard.press("Enter");
  }

  cell(address: string) {
    return this.page.locator(`#${PracticePage.idOf(address)}`);
  }

  /** The text that a drawn cell shows. */
  text(address: string): Promise<string> {
    return this.cell(address).innerText();
  }

  /** Waits until a drawn cell shows a text. */
  async shows(address: string, text: string | RegExp): Promise<void> {
    const pattern = typeof text === "string" ? null : text.source;
    await this.page.waitForFunction(
      ([id, exact, source]) => {
        const shown = document.getElementById(id!)?.textContent ?? null;
        return shown !== null && (source === null ? shown === exact : new RegExp(source!).test(shown));
      },
      [PracticePage.idOf(address), typeof text === "string" ? text : "", pattern] as const,
    ).catch(async (error: unknown) => {
      throw new Error(`${address} shows ${JSON.stringify(await this.text(address).catch(() => "nothing"))}, not ${text}`, { cause: error });
    });
  }

  /** The number that a drawn cell shows, read from its text. */
  async number(address: string): Promise<number> {
    return Number((await this.text(address)).replace(",", "."));
  }

  /** The formula line's text. */
  formula(): Promise<string> {
    return this.page.getByRole("textbox", { name: "Formula line" }).inputValue();
  }

  active(): Promise<string | null> {
    return this.page.locator("#grid").getAttribute("aria-activedescendant");
  }

  async isActive(address: string): Promise<void> {
    await this.page.waitForFunction((id) => document.getElementById("grid")?.getAttribute("aria-activedescendant") === id, PracticePage.idOf(address)).catch(async () => {
      expect(await this.active()).toBe(PracticePage.idOf(address));
    });
  }

  async sheet(name: string): Promise<void> {
    await this.page.getByRole("tab", { name, exact: true }).click();
    await this.page.locator(`#grid[aria-label="Sheet ${name}"]`).waitFor();
    await this.page.waitForFunction(() => document.querySelector(".cell") !== null);
  }

  /** An empty sheet to work on. */
  async newSheet(): Promise<void> {
    await this.page.getByRole("button", { name: "Sheet", exact: true }).click();
    await this.page.getByRole("menuitem", { name: "New sheet" }).click();
    await this.page.locator("#grid[aria-label^='Sheet Sheet']").waitFor();
  }

  said(): Promise<string> {
    return this.page.locator(".said").innerText();
  }

  async says(text: string | RegExp): Promise<void> {
    await this.page.locator(".said", { hasText: text }).waitFor();
  }

  /** Everything typed has been stored. */
  async kept(): Promise<void> {
    await this.page.locator(".kept", { hasText: "Kept on this computer" }).waitFor();
  }

  /** Pastes text the way another program's text arrives. */
  async pasteText(text: string): Promise<void> {
    await this.page.evaluate((plain) => {
      const data = new DataTransfer();
      data.setData("text/plain", plain);
      document.getElementById("grid")!.dispatchEvent(new ClipboardEvent("paste", { clipboardData: data, bubbles: true, cancelable: true }));
    }, text);
  }
}
