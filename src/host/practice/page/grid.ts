/**
 * The sheet on screen. Only the cells in view are elements; rows and cells that scroll out are used again for those that
 * scroll in. The browser's own scrolling moves them, so drawing is needed only when lines enter.
 *
 * Accessibility: an ARIA grid that keeps the focus itself and names its active cell by `aria-activedescendant`; the
 * active cell is therefore drawn even when it is scrolled out of view. So is the first cell of a merged area of which
 * any part is in view, since that cell is drawn over the whole area.
 *
 * Browsers end an element at some height (17 million pixels in one, 33 in others). The scrolled surface therefore
 * grows with the rows in use, and where even that is too high, drawn positions are shifted against scrolled ones.
 * Longer than most files, since drawing, scrolling and the active cell share one picture of what is in view.
 */
import { COLUMN_LIMIT, ROW_LIMIT, cellText, columnText, type CellView } from "../engine";
import { fitted, TextMeasure } from "./cell-text";
import { el, set } from "./dom";
import { areaOf, inside, type Area, type Cell } from "./selection";
import { ROW_HEIGHT, type Session } from "./session";

export const HEADS = 28;
export const GUTTER = 56;
const SPARE_ROWS = 4;
const SPARE_COLUMNS = 2;
/** Blank lines kept below and to the right of what is filled or looked at. */
const ROOM = 120;
const TALLEST = 15_000_000;
/** Kept free beyond a revealed cell: its outline and the field over it stand out a little. */
const MARGIN = 6;

const MOST_PRINTED_ROWS = 2_000;
const MOST_PRINTED_COLUMNS = 60;

interface RowParts {
  readonly row: HTMLElement;
  readonly head: HTMLElement;
  readonly cells: Map<number, CellParts>;
  at: number;
  drawnAt: string;
}

interface CellParts {
  readonly cell: HTMLElement;
  readonly text: HTMLElement;
  /** What was last drawn, so that nothing is written twice. */
  drawn: string;
}

interface Lines {
  readonly first: number;
  readonly last: number;
}

export class Grid {
  readonly element: HTMLElement;
  /** Holds everything that lies over the cells, in the same coordinates. */
  readonly above: HTMLElement;
  readonly measure = new TextMeasure();
  private readonly sizer: HTMLElement;
  private readonly heads: HTMLElement;
  private readonly corner: HTMLElement;
  private readonly rowsInView = new Map<number, RowParts>();
  private readonly spareRows: RowParts[] = [];
  private readonly headsInView = new Map<number, HTMLElement>();
  private height = 0;
  private width = 0;
  private frame = 0;
  private stale = true;
  private printing = false;
  private columnsDrawn: Lines = { first: 0, last: -1 };
  /** Cells drawn although they are out of view: row to columns. */
  private farCells: ReadonlyMap<number, readonly number[]> = new Map();
  private readonly afterDraw = new Set<() => void>();

  constructor(private readonly session: Session) {
    this.above = el("div", { class: "above", "aria-hidden": "true" });
    this.corner = el("div", { class: "corner", role: "columnheader", "aria-label": "All cells" });
    this.heads = el("div", { class: "heads", role: "row", "aria-rowindex": 1 }, this.corner);
    this.sizer = el("div", { class: "sizer", role: "presentation" }, this.heads, this.above);
    this.element = el(
      "div",
      { class: "grid", id: "grid", role: "grid", tabindex: 0, "aria-rowcount": ROW_LIMIT + 1, "aria-colcount": COLUMN_LIMIT + 1, "aria-multiselectable": "true" },
      this.sizer,
    );
    this.element.addEventListener("scroll", () => this.drawSoon(false), { passive: true });
    addEventListener("beforeprint", () => this.print(true));
    addEventListener("afterprint", () => this.print(false));
    new ResizeObserver(() => this.drawSoon(false)).observe(this.element);
    session.book.on("change", () => this.drawSoon(true));
    session.book.on("sheets", () => this.drawSoon(true));
    session.on("selection", () => this.drawSoon(true));
    session.on("sheet", () => {
      this.height = this.width = 0;
      this.reveal(session.active);
      this.drawSoon(true);
    });
  }

  /** On paper there is no scrolling: everything filled is drawn, from the first cell on. */
  private print(printing: boolean): void {
    this.printing = printing;
    const used = this.session.used();
    this.sizer.style.height = printing ? `${this.top(Math.min(used.rows, MOST_PRINTED_ROWS))}px` : `${this.height}px`;
    this.sizer.style.width = printing ? `${this.left(Math.min(used.columns, MOST_PRINTED_COLUMNS))}px` : `${this.width}px`;
    this.stale = true;
    this.draw();
  }

  /** Called after each drawing; outlines and floating sentences place themselves then. */
  onDraw(listener: () => void): void {
    this.afterDraw.add(listener);
  }

  /** Draws with the next frame; `stale` when contents may have changed, not only the place. */
  drawSoon(stale: boolean): void {
    this.stale ||= stale;
    if (this.frame === 0) this.frame = requestAnimationFrame(() => this.draw());
  }

  // Places. All pixels are those of the scrolled surface.

  private get shift(): number {
    const { rows } = this.session;
    if (rows.length + HEADS <= TALLEST || this.height < TALLEST) return 0;
    const room = this.element.clientHeight;
    const scrolled = this.element.scrollTop / Math.max(1, TALLEST - room);
    return Math.round(scrolled * (rows.length + HEADS - TALLEST));
  }

  left(column: number): number {
    return GUTTER + this.session.columns.start(column);
  }

  top(row: number): number {
    return HEADS + this.session.rows.start(row) - this.shift;
  }

  box(area: Area): { left: number; top: number; width: number; height: number } {
    const left = this.left(area.column);
    const top = this.top(area.row);
    return { left, top, width: this.left(area.column + area.columns) - left, height: this.top(area.row + area.rows) - top };
  }

  /** The cell under a point of the window; the nearest one when the point is on a heading or outside. */
  cellAt(clientX: number, clientY: number): Cell & { onRowHead: boolean; onColumnHead: boolean } {
    const frame = this.element.getBoundingClientRect();
    const x = clientX - frame.left;
    const y = clientY - frame.top;
    return {
      row: this.session.rows.at(Math.max(0, Math.max(y, HEADS) + this.element.scrollTop + this.shift - HEADS)),
      column: this.session.columns.at(Math.max(0, Math.max(x, GUTTER) + this.element.scrollLeft - GUTTER)),
      onRowHead: x < GUTTER,
      onColumnHead: y < HEADS,
    };
  }

  /** Whole rows that fit the view: the step of Page Up and Page Down. */
  pageRows(): number {
    return Math.max(1, Math.floor((this.element.clientHeight - HEADS) / ROW_HEIGHT) - 1);
  }

  /** Scrolls as little as needed to bring a cell into view. */
  reveal(cell: Cell): void {
    this.resize(cell);
    const { element } = this;
    const left = this.left(cell.column);
    const right = left + this.session.columns.size(cell.column);
    if (left - GUTTER < element.scrollLeft) element.scrollLeft = left - GUTTER;
    else if (right + MARGIN > element.scrollLeft + element.clientWidth) element.scrollLeft = Math.min(left - GUTTER, right + MARGIN - element.clientWidth);
    const top = this.top(cell.row);
    const bottom = top + this.session.rows.size(cell.row);
    if (top - HEADS < element.scrollTop) this.scrollRows(cell.row, 0);
    else if (bottom + MARGIN > element.scrollTop + element.clientHeight) this.scrollRows(cell.row, element.clientHeight - HEADS - ROW_HEIGHT - MARGIN);
  }

  /** Scrolls so that a row begins `below` pixels under the headings. */
  private scrollRows(row: number, below: number): void {
    const wanted = this.session.rows.start(row) - below;
    const total = this.session.rows.length + HEADS;
    const room = this.element.clientHeight;
    this.element.scrollTop = this.height < TALLEST ? wanted : (wanted * (TALLEST - room)) / (total - room);
  }

  /** The surface holds what is filled, what is selected and what is in view, with room beyond. */
  private resize(cell: Cell): void {
    const { session, element } = this;
    const used = session.used();
    const lastRow = Math.max(used.rows, cell.row, session.rows.at(element.scrollTop + this.shift + element.clientHeight)) + ROOM;
    const lastColumn = Math.max(used.columns, cell.column, session.columns.at(element.scrollLeft + element.clientWidth)) + ROOM / 4;
    const height = Math.min(TALLEST, HEADS + session.rows.start(Math.min(ROW_LIMIT, lastRow)));
    const width = GUTTER + session.columns.start(Math.min(COLUMN_LIMIT, lastColumn));
    // It grows while one scrolls and shrinks with a new sheet only, so that the view never jumps; but where drawn and
    // scrolled positions differ, it also shrinks as soon as they need not.
    if (height > this.height || (this.height === TALLEST && height < TALLEST / 2)) {
      const top = session.rows.at(element.scrollTop + this.shift);
      const shifts = height === TALLEST || this.height === TALLEST;
      this.sizer.style.height = `${(this.height = height)}px`;
      if (shifts) this.scrollRows(top, 0);
    }
    if (width !== this.width) this.sizer.style.width = `${(this.width = Math.max(width, this.width))}px`;
  }

  // Drawing

  /** Draws at once what is pending. */
  draw(): void {
    cancelAnimationFrame(this.frame);
    this.frame = 0;
    const { session, element } = this;
    this.resize(session.active);
    if (this.printing) {
      const used = session.used();
      const last = { rows: Math.min(used.rows, MOST_PRINTED_ROWS) - 1, columns: Math.min(used.columns, MOST_PRINTED_COLUMNS) - 1 };
      this.drawLines({ first: 0, last: last.rows }, { first: 0, last: last.columns });
      return;
    }
    const rows: Lines = {
      first: Math.max(0, session.rows.at(element.scrollTop + this.shift) - SPARE_ROWS),
      last: Math.min(ROW_LIMIT - 1, session.rows.at(element.scrollTop + this.shift + element.clientHeight) + SPARE_ROWS),
    };
    const columns: Lines = {
      first: Math.max(0, session.columns.at(element.scrollLeft) - SPARE_COLUMNS),
      last: Math.min(COLUMN_LIMIT - 1, session.columns.at(element.scrollLeft + element.clientWidth) + SPARE_COLUMNS),
    };
    this.drawLines(rows, columns);
    for (const listener of this.afterDraw) listener();
  }

  private drawLines(rows: Lines, columns: Lines): void {
    const { session, element } = this;
    const far = this.far(rows, columns);
    const moved = columns.first !== this.columnsDrawn.first || columns.last !== this.columnsDrawn.last || !sameCells(far, this.farCells);
    this.columnsDrawn = columns;
    this.farCells = far;
    for (const [row, parts] of this.rowsInView) {
      if (!within(rows, row) && !far.has(row)) {
        this.rowsInView.delete(row);
        this.spareRows.push(parts);
      }
    }
    if (moved || this.stale) this.drawHeads(columns);
    for (let row = rows.first; row <= rows.last; row += 1) this.drawRow(row, columns, moved);
    for (const row of far.keys()) if (!within(rows, row)) this.drawRow(row, columns, moved);
    for (const parts of this.spareRows.splice(0)) parts.row.remove();
    set(element, "aria-activedescendant", cellId(session.active));
    this.stale = false;
  }

  private far(rows: Lines, columns: Lines): Map<number, number[]> {
    const { session } = this;
    const far = new Map<number, number[]>();
    const met = session.merged.filter((area) => area.row <= rows.last && area.row + area.rows > rows.first && area.column <= columns.last && area.column + area.columns > columns.first);
    for (const { row, column } of [session.active, ...met]) {
      if (within(rows, row) && within(columns, column)) continue;
      far.set(row, [...(far.get(row) ?? []), column]);
    }
    return far;
  }

  private drawHeads(columns: Lines): void {
    const { session } = this;
    const area = areaOf(session.selection);
    const whole = area.rows === ROW_LIMIT;
    for (const [column, head] of this.headsInView) {
      if (column < columns.first || column > columns.last) {
        head.remove();
        this.headsInView.delete(column);
      }
    }
    for (let column = columns.first; column <= columns.last; column += 1) {
      let head = this.headsInView.get(column);
      if (!head) {
        head = el("div", { class: "head", role: "columnheader", "aria-colindex": column + 2 }, columnText(column));
        this.headsInView.set(column, head);
        this.heads.append(head);
      }
      const chosen = column >= area.column && column < area.column + area.columns;
      head.className = `head${chosen ? " touched" : ""}${chosen && whole ? " chosen" : ""}`;
      place(head, this.left(column), session.columns.size(column));
    }
  }

  private drawRow(row: number, columns: Lines, moved: boolean): void {
    const { session } = this;
    let parts = this.rowsInView.get(row);
    const fresh = !parts;
    if (!parts) {
      parts = this.spareRows.pop() ?? newRow();
      this.rowsInView.set(row, parts);
      parts.at = row;
      set(parts.row, "aria-rowindex", row + 2);
      parts.head.textContent = String(row + 1);
      if (!parts.row.isConnected) this.sizer.insertBefore(parts.row, this.above);
    }
    const size = session.rows.size(row);
    const top = `${this.top(row)}px`;
    if (parts.drawnAt !== top + size) {
      parts.row.style.top = top;
      parts.row.hidden = size === 0;
      parts.drawnAt = top + size;
    }
    if (!fresh && !moved && !this.stale) return;
    const area = areaOf(session.selection);
    const chosen = row >= area.row && row < area.row + area.rows;
    parts.head.className = `rowhead${chosen ? " touched" : ""}${chosen && area.columns === COLUMN_LIMIT ? " chosen" : ""}`;
    const far = this.farCells.get(row) ?? [];
    const spare: CellParts[] = [];
    for (const [column, cell] of parts.cells) {
      if (!within(columns, column) && !far.includes(column)) {
        parts.cells.delete(column);
        spare.push(cell);
      }
    }
    for (let column = columns.first; column <= columns.last; column += 1) this.drawCell(parts, column, area, spare);
    for (const column of far) if (!within(columns, column)) this.drawCell(parts, column, area, spare);
    for (const cell of spare) cell.cell.remove();
  }

  private drawCell(parts: RowParts, column: number, area: Area, spare: CellParts[]): void {
    const { session } = this;
    let cell = parts.cells.get(column);
    if (!cell) {
      cell = spare.pop() ?? newCell();
      parts.cells.set(column, cell);
      if (!cell.cell.isConnected) parts.row.append(cell.cell);
    }
    const row = parts.at;
    const view = session.book.view(session.sheet, row, column);
    const merged = session.mergedAt(row, column);
    const covered = merged !== null && (merged.row !== row || merged.column !== column);
    const { width, height } = merged ? this.box(merged) : { width: session.columns.size(column), height: ROW_HEIGHT };
    const text = view.kind === "blank" ? "" : fitted(view, width, this.measure, session.book.locale.decimal);
    const chosen = inside(area, { row, column });
    const active = session.active.row === row && session.active.column === column;
    const room = view.kind === "text" && !this.measure.fits(text, view.bold, width) ? this.roomFor(text, view, row, column) : width;
    const drawn = `${row},${column},${this.left(column)},${width},${height},${covered},${room},${view.kind},${view.bold},${view.busy},${chosen},${active},${view.anchor !== null},${view.extent !== null},${text},${view.sentence ?? ""}`;
    if (cell.drawn === drawn) return;
    cell.drawn = drawn;
    cell.cell.id = cellId({ row, column });
    set(cell.cell, "aria-colindex", column + 2);
    set(cell.cell, "aria-selected", chosen ? "true" : "false");
    set(cell.cell, "aria-label", active || view.sentence !== null || view.anchor !== null ? spoken(view, row, column) : null);
    cell.cell.className = classes(view, room > width);
    cell.cell.hidden = width === 0 || covered;
    place(cell.cell, this.left(column), width);
    cell.cell.style.height = height === ROW_HEIGHT ? "" : `${height}px`;
    set(cell.cell, "aria-rowspan", merged && merged.rows > 1 ? merged.rows : null);
    set(cell.cell, "aria-colspan", merged && merged.columns > 1 ? merged.columns : null);
    cell.text.style.width = room > width ? `${room - 1}px` : "";
    if (room > width) cell.text.style.setProperty("--own", `${width - 1}px`);
    if (cell.text.textContent !== text) cell.text.textContent = text;
  }

  /** Width over which a long text may run: its own cell and the blank ones after it, as far as it needs them. */
  private roomFor(text: string, view: CellView, row: number, column: number): number {
    const { session } = this;
    const needed = this.measure.needed(text, view.bold);
    let room = session.columns.size(column);
    for (let next = column + 1; next < COLUMN_LIMIT && room < needed && !session.filled(row, next); next += 1) room += session.columns.size(next);
    return room;
  }
}

function within(lines: Lines, line: number): boolean {
  return line >= lines.first && line <= lines.last;
}

function sameCells(a: ReadonlyMap<number, readonly number[]>, b: ReadonlyMap<number, readonly number[]>): boolean {
  return a.size === b.size && [...a].every(([row, columns]) => columns.join() === b.get(row)?.join());
}

function newRow(): RowParts {
  const head = el("div", { class: "rowhead", role: "rowheader", "aria-colindex": 1 });
  return { row: el("div", { class: "row", role: "row" }, head), head, cells: new Map(), at: -1, drawnAt: "" };
}

function newCell(): CellParts {
  const text = el("span");
  return { cell: el("div", { class: "cell", role: "gridcell" }, text), text, drawn: "" };
}

function classes(view: CellView, runs: boolean): string {
  let names = `cell ${view.kind}`;
  if (view.bold) names += " bold";
  if (view.anchor !== null || view.extent !== null) names += " spilled";
  if (view.busy) names += " busy";
  if (runs) names += " runs";
  return names;
}

function place(element: HTMLElement, left: number, width: number): void {
  element.style.left = `${left}px`;
  element.style.width = `${width}px`;
}

export function cellId(cell: Cell): string {
  return `r${cell.row}c${cell.column}`;
}

/** What a screen reader says of a cell. */
export function spoken(view: CellView, row: number, column: number): string {
  const parts = [cellText(row, column), view.kind === "blank" ? "blank" : view.text];
  if (view.sentence !== null) parts.push(view.sentence);
  if (view.anchor !== null) parts.push(`spilled from ${cellText(view.anchor.row, view.anchor.column)}`);
  if (view.extent !== null) parts.push(`fills ${view.extent.rows} by ${view.extent.columns} cells`);
  if (view.busy) parts.push("being worked out");
  return parts.join(", ");
}
