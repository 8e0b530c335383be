/**
 * Everything drawn over the cells: the selection, the active cell, the ranges of the formula in hand, a spill's extent,
 * what was copied. Lines differ in kind as well as in colour.
 */
import type { Area as BookArea } from "../engine";
import { el } from "./dom";
import type { Grid } from "./grid";
import type { Area } from "./selection";
import { areaOf } from "./selection";
import type { Session } from "./session";

/** A range that the formula in hand uses; `mark` selects the kind of line, the same as under its text. */
export interface MarkedArea {
  readonly area: BookArea;
  readonly mark: number;
}

/** Kinds of line for the ranges of a formula (`mark0` … of practice.css). */
export const MARKS = 6;

export class Outlines {
  private readonly selection = el("div", { class: "outline selection" });
  private readonly active = el("div", { class: "outline active" });
  readonly handle = el("div", { class: "handle" });
  private readonly spill = el("div", { class: "outline spill" });
  private readonly copied = el("div", { class: "outline copied" });
  private readonly filling = el("div", { class: "outline filling" });
  private readonly marks: HTMLElement[] = [];
  private marked: readonly MarkedArea[] = [];
  private copiedArea: BookArea | null = null;
  private edited = false;
  private fillArea: Area | null = null;

  constructor(private readonly session: Session, private readonly grid: Grid) {
    grid.above.append(this.selection, this.spill, this.copied, this.filling, this.active, this.handle);
    grid.onDraw(() => this.place());
  }

  mark(areas: readonly MarkedArea[]): void {
    this.marked = areas;
    this.grid.drawSoon(false);
  }

  /** While a cell is edited there is nothing to fill from. */
  editing(open: boolean): void {
    this.edited = open;
    this.grid.drawSoon(false);
  }

  copy(area: BookArea | null): void {
    this.copiedArea = area;
    this.grid.drawSoon(false);
  }

  fill(area: Area | null): void {
    this.fillArea = area;
    this.grid.drawSoon(false);
  }

  private place(): void {
    const { session } = this;
    const { active } = session.selection;
    const area = areaOf(session.selection);
    const many = area.rows * area.columns > 1;
    this.at(this.selection, many ? area : null);
    this.at(this.active, session.mergedAt(active.row, active.column) ?? { ...active, rows: 1, columns: 1 });
    this.at(this.filling, this.fillArea);
    this.at(this.copied, this.copiedArea?.sheet === session.sheet ? this.copiedArea : null);
    this.at(this.spill, this.spillAround(active.row, active.column));
    const corner = this.grid.box(area);
    this.handle.style.left = `${corner.left + corner.width - 4}px`;
    this.handle.style.top = `${corner.top + corner.height - 4}px`;
    this.handle.hidden = this.edited || session.readOnly !== null;
    const shown = this.marked.filter((entry) => entry.area.sheet === session.sheet);
    while (this.marks.length < shown.length) {
      const mark = el("div");
      this.marks.push(mark);
      this.grid.above.prepend(mark);
    }
    this.marks.forEach((mark, i) => {
      const entry = shown[i];
      mark.className = entry ? `outline mark mark${entry.mark % MARKS}` : "outline mark";
      this.at(mark, entry?.area ?? null);
    });
  }

  /** The whole spill that a cell belongs to. */
  private spillAround(row: number, column: number): Area | null {
    const { book, sheet } = this.session;
    const view = book.view(sheet, row, column);
    const anchor = view.anchor ?? { row, column };
    const extent = view.anchor ? book.view(sheet, anchor.row, anchor.column).extent : view.extent;
    return extent ? { ...anchor, ...extent } : null;
  }

  private at(outline: HTMLElement, area: Area | null): void {
    outline.hidden = area === null;
    if (!area) return;
    const box = this.grid.box(area);
    // The line lies on the grid lines around the cells: one pixel out to the left and top, but not under the headings.
    const left = area.column === 0 ? 0 : 1;
    const top = area.row === 0 ? 0 : 1;
    outline.style.left = `${box.left - left}px`;
    outline.style.top = `${box.top - top}px`;
    outline.style.width = `${box.width + left}px`;
    outline.style.height = `${box.height + top}px`;
  }
}
