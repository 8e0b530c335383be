import type { Locator, Page } from "playwright-core";

/** The pane as a person uses it, in whatever page it stands. */
export class PanePart {
  readonly root: Locator;

  constructor(readonly page: Page) {
    this.root = page.locator(".sr-pane");
  }

  async ready(): Promise<this> {
    await this.root.locator(".sr-place").waitFor();
    return this;
  }

  /** Waits until the pane looks at a place, such as "Chiller rates A4:F9". */
  async looksAt(place: string): Promise<void> {
    await this.root.locator(".sr-place", { hasText: place }).waitFor();
  }

  async counts(text: string | RegExp): Promise<void> {
    await this.root.locator(".sr-counts", { hasText: text }).waitFor();
  }

  finding(code: string): Locator {
    return this.root.locator(`[data-finding="${code}"]`);
  }

  arrow(title: string): Locator {
    return this.root.locator(`[data-arrow="${title}"]`);
  }

  word(name: string | RegExp): Locator {
    return this.root.getByRole("button", { name, ...(typeof name === "string" ? { exact: true } : {}) });
  }

  tab(name: string): Locator {
    return this.root.getByRole("tab", { name, exact: true });
  }

  /** Sideways overflow of the pane's parts in pixels: 0 when everything fits. */
  overflow(): Promise<number> {
    return this.root.evaluate((root) => {
      const right = root.getBoundingClientRect().right;
      const parts = [...root.querySelectorAll("*")].filter((part) => part.closest(".sr-scroll") === null);
      return Math.max(0, ...parts.map((part) => Math.ceil(part.getBoundingClientRect().right - right)));
    });
  }

  /** Words, tabs and other controls smaller than 24 by 24 pixels. */
  smallTargets(): Promise<string[]> {
    return this.root.evaluate((root) =>
      [...root.querySelectorAll<HTMLElement>("button, summary, input")]
        .filter((target) => target.offsetParent !== null && (target.getBoundingClientRect().height < 23.5 || target.getBoundingClientRect().width < 23.5))
        .map((target) => target.textContent ?? target.tagName),
    );
  }

  focused(): Promise<string> {
    return this.page.evaluate(() => document.activeElement?.textContent ?? "");
  }
}
