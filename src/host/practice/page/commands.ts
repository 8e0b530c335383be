/** What words, menus and keys do. Each takes the open edit into its cell first, so that nothing typed is passed over. */
import { areaText, cellText, fillDown, fillRight, type Area } from "../engine";
import type { Editor } from "./editor";
import { withDecimals, type NumberStyle, formatOf } from "./formats";
import type { Grid } from "./grid";
import type { Outlines } from "./outlines";
import type { Session } from "./session";
import { fitColumns, setWidth } from "./widths";

export class Commands {
  /** Set by the page: focuses the address box. */
  goTo: () => void = () => undefined;
  /** Set by the page: closes what floats over the sheet. */
  closeFloating: () => void = () => undefined;

  constructor(
    private readonly session: Session,
    private readonly grid: Grid,
    private readonly outlines: Outlines,
    private readonly editor: Editor,
  ) {}

  private run(act: () => void): void {
    if (this.editor.commit()) act();
  }

  /** The selection, held within what is filled where whole rows or columns are selected. */
  private worked(): Area {
    const { session } = this;
    const { area } = session;
    const used = session.used();
    const rows = Math.max(1, Math.min(area.rows, used.rows - area.row));
    const columns = Math.max(1, Math.min(area.columns, used.columns - area.column));
    return area.rows > 100_000 || area.columns > 10_000 ? { ...area, rows, columns } : area;
  }

  undo(): void {
    this.run(() => this.session.attempt(() => this.travel("undo")));
  }

  redo(): void {
    this.run(() => this.session.attempt(() => this.travel("redo")));
  }

  private travel(way: "undo" | "redo"): void {
    this.outlines.copy(null);
    const step = this.session.book[way]();
    this.session.say(step ? `${way === "undo" ? "Undone" : "Done again"}: ${step.label}.` : `Nothing to ${way}.`);
    // What has changed is brought into view, unless its sheet is hidden. Only its first cell is selected: the rectangle
    // around scattered cells holds others, and the pane takes a selected area for the table that someone means.
    const touched = step?.touched;
    if (!touched || !this.session.book.sheets().some((sheet) => sheet.id === touched.sheet && !sheet.hidden)) return;
    this.session.go({ ...touched, rows: 1, columns: 1 });
    this.grid.reveal(touched);
  }

  clear(): void {
    this.run(() => {
      const area = this.worked();
      const { session } = this;
      const { anchor } = session.book.view(session.sheet, session.active.row, session.active.column);
      if (anchor && area.rows * area.columns === 1) session.say(`${areaText(area)} is filled by the formula in ${cellText(anchor.row, anchor.column)}. Change or clear it there.`);
      else session.perform([{ kind: "clear", area }], `clearing ${areaText(area)}`);
    });
  }

  fillDown(): void {
    this.fill("down");
  }

  fillRight(): void {
    this.fill("right");
  }

  /** One cell alone takes over from the cell before it. */
  private fill(way: "down" | "right"): void {
    this.run(() => {
      let area = this.worked();
      if (way === "down" && area.rows === 1 && area.row > 0) area = { ...area, row: area.row - 1, rows: 2 };
      if (way === "right" && area.columns === 1 && area.column > 0) area = { ...area, column: area.column - 1, columns: 2 };
      this.session.attempt(() => (way === "down" ? fillDown : fillRight)(this.session.book, area));
    });
  }

  bold(): void {
    this.run(() => {
      const { session } = this;
      const { row, column } = session.active;
      const bold = !session.book.view(session.sheet, row, column).bold;
      session.perform([{ kind: "format", area: this.worked(), bold }], bold ? "bold" : "not bold");
    });
  }

  numbers(style: NumberStyle): void {
    this.run(() => this.session.perform([{ kind: "format", area: this.worked(), format: formatOf(style) }], `${style} numbers`));
  }

  decimals(by: 1 | -1): void {
    this.run(() => {
      const { session } = this;
      const { row, column } = session.active;
      const view = session.book.view(session.sheet, row, column);
      session.perform([{ kind: "format", area: this.worked(), format: withDecimals(view.format, by, view.value) }], by > 0 ? "one more decimal" : "one decimal fewer");
    });
  }

  fit(): void {
    this.run(() => {
      const { area } = this.session;
      fitColumns(this.session, this.grid.measure, area.column, area.columns, "fitting widths");
    });
  }

  usualWidth(): void {
    this.run(() => {
      const { area, sheet } = this.session;
      this.session.perform([{ kind: "width", sheet, column: area.column, columns: area.columns, width: null }], "usual widths");
    });
  }

  widen(by: number): void {
    this.run(() => {
      const { area, columns, active } = this.session;
      setWidth(this.session, area.column, area.columns, columns.size(active.column) + by);
    });
  }

  hide(axis: "rows" | "columns", hidden: boolean): void {
    this.run(() => {
      const { area, sheet } = this.session;
      const from = axis === "rows" ? area.row : area.column;
      const count = axis === "rows" ? area.rows : area.columns;
      this.session.perform([{ kind: axis === "rows" ? "hideRows" : "hideColumns", sheet, from, count, hidden }], `${hidden ? "hiding" : "showing"} ${axis}`);
    });
  }

  merge(merged: boolean): void {
    this.run(() => this.session.perform([{ kind: merged ? "merge" : "unmerge", area: this.worked() }], merged ? "merging cells" : "parting cells"));
  }

  nextSheet(by: 1 | -1): void {
    this.run(() => {
      const shown = this.session.book.sheets().filter((sheet) => !sheet.hidden);
      const here = shown.findIndex((sheet) => sheet.id === this.session.sheet);
      const next = shown[here + by];
      if (next) this.session.show(next.id);
    });
  }

  escape(): void {
    this.outlines.copy(null);
    this.closeFloating();
  }

  select(area: Area): void {
    this.run(() => {
      this.session.go(area);
      this.grid.reveal(area);
    });
  }
}
