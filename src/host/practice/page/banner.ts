import { el } from "./dom";

/** A line over the page for what concerns all of it, with the words that answer it. */
export class Banner {
  readonly element = el("div", { class: "banner", role: "status", hidden: true });

  show(sentence: string, words: readonly HTMLElement[]): void {
    this.element.replaceChildren(el("p", {}, sentence), ...words);
    this.element.hidden = false;
  }

  hide(): void {
    this.element.hidden = true;
  }
}
