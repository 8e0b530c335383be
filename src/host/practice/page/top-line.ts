/** The line at the top: the name, the sheets, and the words that act on the whole workbook. */
import type { Commands } from "./commands";
import { el, set, word } from "./dom";
import type { Session } from "./session";

export class TopLine {
  readonly element: HTMLElement;
  private readonly undo: HTMLButtonElement;
  private readonly redo: HTMLButtonElement;

  constructor(private readonly session: Session, commands: Commands, sheets: HTMLElement, words: readonly HTMLElement[]) {
    this.undo = word("Undo", () => commands.undo());
    this.redo = word("Redo", () => commands.redo());
    this.element = el("header", { class: "top-line" }, el("h1", {}, "Stayrate"), sheets, el("div", { class: "words" }, this.undo, this.redo, ...words));
    for (const event of ["change", "sheets"] as const) session.book.on(event, () => this.draw());
    session.on("readonly", () => this.draw());
    session.on("opened", () => this.draw());
    this.draw();
  }

  /** A word that can do nothing now stays in its place, said to be unavailable. */
  private draw(): void {
    const { book, readOnly } = this.session;
    for (const [button, name, label] of [
      [this.undo, "Undo", book.undoLabel],
      [this.redo, "Redo", book.redoLabel],
    ] as const) {
      const able = label !== null && readOnly === null;
      set(button, "aria-disabled", able ? null : "true");
      set(button, "title", able ? `${name} ${label}` : `Nothing to ${name.toLowerCase()}`);
    }
  }
}
