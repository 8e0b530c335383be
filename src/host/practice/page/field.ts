/**
 * A field for formulas: a text area over a copy of its text. The copy underlines each range in its own kind of line and
 * gives the field its size, so that long formulas wrap instead of scrolling out of sight.
 */
import { el } from "./dom";
import type { UsedRange } from "./formula-text";
import { MARKS } from "./outlines";

export class Field {
  readonly element: HTMLElement;
  readonly input: HTMLTextAreaElement;
  private readonly copy: HTMLElement;

  constructor(kind: string, label: string) {
    this.input = el("textarea", {
      class: "field-input",
      rows: 1,
      spellcheck: "false",
      autocomplete: "off",
      autocapitalize: "off",
      "aria-label": label,
      "aria-autocomplete": "list",
      "aria-multiline": "false",
    });
    this.copy = el("div", { class: "field-copy", "aria-hidden": "true" });
    this.element = el("div", { class: `field ${kind}` }, this.copy, this.input);
  }

  get text(): string {
    return this.input.value;
  }

  get caret(): number {
    return this.input.selectionEnd;
  }

  /** Shows a text with its ranges underlined; keeps the caret where the text is already there. */
  show(text: string, ranges: readonly UsedRange[], caret?: number): void {
    if (this.input.value !== text) this.input.value = text;
    if (caret !== undefined) this.input.setSelectionRange(caret, caret);
    const parts: (Node | string)[] = [];
    let from = 0;
    for (const range of ranges) {
      parts.push(text.slice(from, range.start), el("u", { class: `mark${range.mark % MARKS}` }, text.slice(range.start, range.end)));
      from = range.end;
    }
    // A closing space keeps the line of a trailing line end, and room for the caret.
    parts.push(`${text.slice(from)}\u200b `);
    this.copy.replaceChildren(...parts);
  }
}
