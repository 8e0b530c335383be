/**
 * Typing into a cell, in the cell itself or in the formula line: one edit at a time, shown in both.
 *
 * While a formula waits for a range, the arrow keys and the mouse point at cells and the range is written into the
 * formula (`point`); after F2 or a click into the text the arrow keys move the caret (`caret`).
 */
import { cellText } from "../engine";
import { el } from "./dom";
import type { Drafts } from "./drafts";
import { Field } from "./field";
import { isFormula, rangeText, takesRange, turnAbsolute, usedRanges } from "./formula-text";
import { GUTTER, HEADS, type Grid } from "./grid";
import type { Help } from "./help";
import type { Outlines } from "./outlines";
import { PercentTyping } from "./percent-typing";
import { areaBetween, jumped, stepped, wander, type Cell, type Direction } from "./selection";
import type { Session } from "./session";

interface Edit {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
  /** The cell's text before. */
  readonly before: string;
  text: string;
  arrows: "point" | "caret";
  origin: Field;
  readonly percent: PercentTyping;
  /** The range being pointed at, and where it stands in the text. */
  pointed: { start: number; end: number; anchor: Cell; head: Cell } | null;
}

const directions: Readonly<Record<string, Direction>> = { ArrowUp: "up", ArrowDown: "down", ArrowLeft: "left", ArrowRight: "right" };

export class Editor {
  readonly bar = new Field("bar", "Formula line");
  private readonly inCell = new Field("in-cell", "Cell");
  /** The part of the sheet below and right of the headings: what lies over a cell ends at its edges. */
  readonly floor = el("div", { class: "floor" }, this.inCell.element);
  private edit: Edit | null = null;

  constructor(
    private readonly session: Session,
    private readonly grid: Grid,
    private readonly outlines: Outlines,
    private readonly help: Help,
    private readonly drafts: Drafts,
  ) {
    for (const field of [this.bar, this.inCell]) this.listen(field);
    help.onAccept = (text, caret) => this.retype(text, caret, false);
    session.settle = () => void this.commit();
    session.on("selection", () => this.showActive());
    session.on("readonly", () => this.showActive());
    session.on("sheet", () => this.lookElsewhere());
    session.book.on("change", () => this.showActive());
    grid.onDraw(() => this.place());
    this.inCell.element.hidden = true;
    this.showActive();
  }

  get open(): boolean {
    return this.edit !== null;
  }

  /** True when a click on a cell should write that cell's range into the formula. */
  get pointing(): boolean {
    const { edit } = this;
    return edit !== null && isFormula(edit.text) && (edit.pointed !== null || takesRange(edit.text, edit.origin.caret, this.session.book.locale));
  }

  private listen(field: Field): void {
    const { input } = field;
    input.addEventListener("focus", () => {
      if (!this.edit) this.begin({ field, arrows: "caret" });
      else if (this.edit.origin !== field) this.edit.origin = field;
    });
    input.addEventListener("pointerdown", () => {
      if (this.edit) this.edit.arrows = "caret";
    });
    input.addEventListener("input", () => {
      if (!this.edit) return;
      this.edit.origin = field;
      const { text, caret } = this.edit.percent.next(field);
      this.retype(text, caret, true);
    });
    input.addEventListener("keydown", (event) => this.key(event));
    input.addEventListener("click", () => this.edit && this.help.follow(field, false));
    input.addEventListener("blur", () => this.help.close());
  }

  /** Opens an edit of the active cell; `text` replaces what the cell holds. */
  begin(options: { text?: string; field?: Field; arrows: "point" | "caret" }): void {
    const { session } = this;
    if (session.readOnly !== null) {
      session.say(session.readOnly);
      return;
    }
    if (this.edit) return;
    const { row, column } = session.active;
    const { input: before, format } = session.book.view(session.sheet, row, column);
    const field = options.field ?? this.inCell;
    const text = options.text ?? before;
    this.edit = { sheet: session.sheet, row, column, before, text, arrows: options.arrows, origin: field, pointed: null, percent: new PercentTyping(format, text, session.book.locale) };
    this.outlines.copy(null);
    this.outlines.editing(true);
    this.inCell.element.hidden = false;
    this.grid.reveal(session.active);
    this.place();
    this.draw(text.length);
    field.input.focus({ preventScroll: true });
    if (options.text !== undefined) this.keepDraft();
  }

  /** Opens an edit that was left unfinished when the page closed. */
  resume(sheet: string, row: number, column: number, text: string): void {
    this.session.go({ sheet, row, column, rows: 1, columns: 1 });
    this.begin({ text, arrows: "caret" });
  }

  /** Takes what was typed into its cell. False when it was refused; the edit then stays open. */
  commit(): boolean {
    const { edit, session } = this;
    if (!edit) return true;
    const { sheet, row, column, text } = edit;
    const { book } = session;
    const { anchor } = book.view(sheet, row, column);
    if (text !== edit.before) {
      if (!session.perform([{ kind: "type", sheet, row, column, text }], `typing in ${cellText(row, column)}`)) return false;
      this.drafts.settle();
    } else this.drafts.drop();
    this.close();
    if (text === edit.before) return true;
    // Whatever was said before is about something else by now. A result that filled the cell has lost its room there.
    const blocked = anchor && book.view(sheet, anchor.row, anchor.column).sentence;
    session.say(book.view(sheet, row, column).sentence ?? (blocked ? `${cellText(anchor.row, anchor.column)}: ${blocked}` : ""));
    return true;
  }

  cancel(): void {
    this.drafts.drop();
    this.close();
  }

  private close(): void {
    const { edit } = this;
    if (!edit) return;
    const focused = document.activeElement === this.bar.input || document.activeElement === this.inCell.input;
    this.edit = null;
    this.outlines.editing(false);
    this.help.close();
    this.inCell.element.hidden = true;
    if (this.session.sheet !== edit.sheet) this.session.show(edit.sheet);
    this.showActive();
    if (focused) this.grid.element.focus({ preventScroll: true });
  }

  /** Another sheet is shown while a formula waits for a range: typing goes on in the formula line. */
  private lookElsewhere(): void {
    const { edit } = this;
    if (!edit) return;
    if (edit.sheet !== this.session.sheet && edit.origin !== this.bar) {
      const { caret } = edit.origin;
      edit.origin = this.bar;
      this.bar.input.setSelectionRange(caret, caret);
    }
    edit.origin.input.focus({ preventScroll: true });
    this.draw(edit.origin.caret);
  }

  /** Writes a range into the formula, over the one pointed at before. */
  point(anchor: Cell, head: Cell): void {
    const { edit, session } = this;
    if (!edit) return;
    const area = areaBetween(anchor, head);
    const name = session.sheet === edit.sheet ? null : session.sheetName();
    const written = rangeText(area, name);
    const { start, end } = edit.pointed ?? { start: edit.origin.caret, end: edit.origin.caret };
    edit.pointed = { start, end: start + written.length, anchor, head };
    edit.text = edit.text.slice(0, start) + written + edit.text.slice(end);
    this.keepDraft();
    this.draw(start + written.length);
    this.help.follow(edit.origin, false);
    edit.origin.input.focus({ preventScroll: true });
    this.grid.reveal(head);
  }

  /** The other corner of the range pointed at moves; used by dragging and by shift and a click. */
  extendPoint(head: Cell): void {
    const pointed = this.edit?.pointed;
    if (pointed) this.point(pointed.anchor, head);
  }

  private retype(text: string, caret: number, typed: boolean): void {
    const { edit } = this;
    if (!edit) return;
    edit.text = text;
    edit.pointed = null;
    this.keepDraft();
    this.draw(caret);
    this.help.follow(edit.origin, typed);
  }

  private keepDraft(): void {
    const { edit } = this;
    if (edit) this.drafts.keep({ sheet: edit.sheet, sheetName: this.session.sheetName(edit.sheet), row: edit.row, column: edit.column, text: edit.text });
  }

  private draw(caret: number): void {
    const { edit, session } = this;
    if (!edit) return;
    const ranges = usedRanges(edit.text, session.book, edit.sheet);
    for (const field of [this.bar, this.inCell]) field.show(edit.text, ranges, field === edit.origin ? caret : undefined);
    this.outlines.mark(ranges.flatMap((range) => (range.area ? [{ area: range.area, mark: range.mark }] : [])));
    this.help.place();
  }

  /** The formula line shows the active cell while nothing is being typed. */
  private showActive(): void {
    const { session } = this;
    this.bar.input.readOnly = session.readOnly !== null;
    if (this.edit) return;
    const { row, column } = session.active;
    const view = session.book.view(session.sheet, row, column);
    // A cell that another one fills shows that one's formula, which is where it can be changed.
    const source = view.anchor ? session.book.view(session.sheet, view.anchor.row, view.anchor.column).input : view.input;
    this.bar.element.classList.toggle("borrowed", view.anchor !== null);
    const ranges = usedRanges(source, session.book, session.sheet);
    this.bar.show(source, ranges);
    this.outlines.mark(ranges.flatMap((range) => (range.area ? [{ area: range.area, mark: range.mark }] : [])));
  }

  private place(): void {
    const { edit, grid } = this;
    if (!edit) return;
    const away = edit.sheet !== this.session.sheet;
    const { element } = this.inCell;
    element.classList.toggle("away", away);
    if (away) return;
    const box = grid.box(this.session.mergedAt(edit.row, edit.column) ?? { row: edit.row, column: edit.column, rows: 1, columns: 1 });
    const left = box.left - grid.element.scrollLeft - GUTTER;
    element.style.left = `${left}px`;
    element.style.top = `${box.top - grid.element.scrollTop - HEADS}px`;
    element.style.minWidth = `${box.width + 1}px`;
    element.style.maxWidth = `${Math.max(box.width + 1, grid.element.clientWidth - GUTTER - left - 8)}px`;
    this.help.place();
  }

  private key(event: KeyboardEvent): void {
    const { edit, help, session } = this;
    if (event.isComposing || !edit) return;
    const done = (): void => {
      event.preventDefault();
      event.stopPropagation();
    };
    if (help.open && (event.key === "ArrowDown" || event.key === "ArrowUp")) {
      done();
      help.move(event.key === "ArrowDown" ? 1 : -1);
    } else if (help.open && (event.key === "Tab" || (event.key === "Enter" && help.choosing))) {
      done();
      help.accept();
    } else if (event.key === "Escape") {
      done();
      if (help.open) help.closeNames();
      else this.cancel();
    } else if (event.key === "Enter" && event.altKey) {
      done();
      edit.origin.input.setRangeText("\n", edit.origin.input.selectionStart, edit.origin.input.selectionEnd, "end");
      this.retype(edit.origin.text, edit.origin.caret, false);
    } else if (event.key === "Enter" || event.key === "Tab") {
      done();
      this.finish(event.key === "Enter" ? (event.shiftKey ? "up" : "down") : event.shiftKey ? "left" : "right");
    } else if (event.key === "F2") {
      done();
      edit.arrows = edit.arrows === "caret" ? "point" : "caret";
    } else if (event.key === "F4") {
      const turned = turnAbsolute(edit.text, edit.origin.caret, session.book.locale);
      done();
      if (turned) this.retype(turned.text, turned.caret, false);
    } else if (event.key in directions && edit.arrows === "point") this.arrow(event, directions[event.key]!, done);
    else if (event.key in directions || event.key === "Home" || event.key === "End") requestAnimationFrame(() => this.edit && help.follow(edit.origin, false));
  }

  private arrow(event: KeyboardEvent, direction: Direction, done: () => void): void {
    const edit = this.edit!;
    const { session } = this;
    if (!isFormula(edit.text)) {
      done();
      this.finish(direction);
    } else if (this.pointing) {
      done();
      const move = event.ctrlKey || event.metaKey ? jumped : stepped;
      const from = edit.pointed ? edit.pointed.head : session.sheet === edit.sheet ? edit : session.active;
      const head = move(session, { row: from.row, column: from.column }, direction);
      this.point(event.shiftKey && edit.pointed ? edit.pointed.anchor : head, head);
    } else edit.arrows = "caret"; // the key moves the caret: an unfinished formula is never taken by an arrow key
  }

  private finish(direction: Direction): void {
    if (!this.commit()) return;
    this.session.select(wander(this.session, this.session.selection, direction));
    this.grid.reveal(this.session.active);
  }
}

