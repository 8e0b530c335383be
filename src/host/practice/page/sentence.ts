/**
 * The sentence of an error, at its cell: shown while the cell is active or under the mouse, kept while the mouse is on
 * the sentence itself, closed with Escape.
 */
import { cellText } from "../engine";
import type { Announcer } from "./announce";
import { el } from "./dom";
import type { Editor } from "./editor";
import { GUTTER, HEADS, type Grid } from "./grid";
import type { Cell } from "./selection";
import type { Session } from "./session";

export class Sentence {
  readonly element = el("div", { class: "sentence", role: "tooltip", id: "sentence", hidden: true });
  private hovered: Cell | null = null;
  private dismissed = "";

  constructor(
    private readonly session: Session,
    private readonly grid: Grid,
    private readonly editor: Editor,
    private readonly announcer: Announcer,
  ) {
    grid.element.addEventListener("pointermove", (event) => {
      if (event.buttons !== 0) return;
      const hit = grid.cellAt(event.clientX, event.clientY);
      const next = hit.onRowHead || hit.onColumnHead ? null : { row: hit.row, column: hit.column };
      if (next?.row === this.hovered?.row && next?.column === this.hovered?.column) return;
      this.hovered = next;
      this.draw();
    });
    grid.element.addEventListener("pointerleave", (event) => {
      if (event.relatedTarget instanceof Node && this.element.contains(event.relatedTarget)) return;
      this.hovered = null;
      this.draw();
    });
    this.element.addEventListener("pointerleave", () => {
      this.hovered = null;
      this.draw();
    });
    session.on("selection", () => {
      this.dismissed = "";
    });
    grid.onDraw(() => this.draw());
  }

  close(): void {
    this.dismissed = this.key(this.cell());
    this.draw();
  }

  private key(cell: Cell | null): string {
    return cell ? `${this.session.sheet} ${cell.row} ${cell.column}` : "";
  }

  /** The cell whose sentence is due: the one under the mouse before the active one. */
  private cell(): Cell | null {
    const { session, hovered } = this;
    for (const cell of [hovered, session.active]) {
      if (cell && session.book.view(session.sheet, cell.row, cell.column).sentence !== null) return cell;
    }
    return null;
  }

  private draw(): void {
    const { session, grid, element } = this;
    const active = session.book.view(session.sheet, session.active.row, session.active.column);
    // While something is typed, the names that complete it are spoken instead.
    if (!this.editor.open) this.announcer.speak(active.sentence === null ? "" : `${cellText(session.active.row, session.active.column)} ${active.text}: ${active.sentence}`);
    const cell = this.editor.open ? null : this.cell();
    const sentence = cell && session.book.view(session.sheet, cell.row, cell.column).sentence;
    const scroller = grid.element;
    const box = cell && grid.box({ ...cell, rows: 1, columns: 1 });
    const left = box ? box.left - scroller.scrollLeft : 0;
    const top = box ? box.top - scroller.scrollTop : 0;
    const inView = box !== null && left + box.width > GUTTER && left < scroller.clientWidth && top + box.height > HEADS && top < scroller.clientHeight;
    element.hidden = !cell || !sentence || !inView || this.dismissed === this.key(cell);
    if (element.hidden || !box || !sentence) return;
    if (element.textContent !== sentence) element.textContent = sentence;
    const below = top + box.height + 4;
    element.style.left = `${Math.max(4, Math.min(left, scroller.clientWidth - element.offsetWidth - 8))}px`;
    element.style.top = below + element.offsetHeight > scroller.clientHeight ? `${Math.max(4, top - element.offsetHeight - 4)}px` : `${below}px`;
  }
}
