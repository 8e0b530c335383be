/**
 * What the page holds beside the book itself: which sheet is shown, what is selected on it, whether it may be changed.
 * Every change of the book goes through `perform`, so that a refusal always reaches the person as a sentence.
 */
import { COLUMN_LIMIT, EditRefused, ROW_LIMIT, areaText, type Area, type Book, type Edit } from "../engine";
import { Axis } from "./axis";
import { at, areaOf, inside, over, type Cell, type Ground, type Selection } from "./selection";

export const ROW_HEIGHT = 27;

export type SessionEvent = "selection" | "sheet" | "readonly" | "opened";

export class Session implements Ground {
  readonly rows = new Axis(ROW_LIMIT, ROW_HEIGHT);
  readonly columns: Axis;
  private shown: string;
  private mergedAreas: readonly Area[] = [];
  private readonly selections = new Map<string, Selection>();
  private readonly listeners = new Map<SessionEvent, Set<() => void>>();
  /** Why nothing can be changed, or null. */
  private closed: string | null = null;
  /** Run before every command: the open edit is taken into its cell first. */
  settle: () => void = () => undefined;
  /** Says a sentence to the person; set by the page. */
  say: (sentence: string) => void = () => undefined;

  constructor(readonly book: Book, usualWidth: number) {
    this.columns = new Axis(COLUMN_LIMIT, usualWidth);
    this.shown = this.firstShown();
    this.measure();
    book.on("sheets", () => {
      this.measure();
      if (!book.sheets().some((sheet) => sheet.id === this.shown)) this.show(this.firstShown());
      else if (this.hiddenSheet(this.shown)) this.show(this.firstShown());
    });
  }

  private firstShown(): string {
    const sheets = this.book.sheets();
    return (sheets.find((sheet) => !sheet.hidden) ?? sheets[0]!).id;
  }

  private hiddenSheet(id: string): boolean {
    return this.book.sheets().some((sheet) => sheet.id === id && sheet.hidden);
  }

  /** Reads widths, hidden lines and merged areas of the shown sheet. */
  private measure(): void {
    const rows = new Map<number, number>();
    for (const row of this.book.hiddenRows(this.shown)) rows.set(row, 0);
    this.rows.setSizes(rows);
    const columns = new Map<number, number>(this.book.widths(this.shown));
    for (const column of this.book.hiddenColumns(this.shown)) columns.set(column, 0);
    this.columns.setSizes(columns);
    this.mergedAreas = this.book.merged(this.shown);
  }

  get sheet(): string {
    return this.shown;
  }

  sheetName(id = this.shown): string {
    return this.book.sheets().find((sheet) => sheet.id === id)?.name ?? "";
  }

  get selection(): Selection {
    return this.selections.get(this.shown) ?? at(0, 0);
  }

  get active(): Cell {
    return this.selection.active;
  }

  /** The selected cells as the engine addresses them. */
  get area(): Area {
    return { sheet: this.shown, ...areaOf(this.selection) };
  }

  get readOnly(): string | null {
    return this.closed;
  }

  close(reason: string | null): void {
    this.closed = reason;
    this.tell("readonly");
  }

  show(id: string): void {
    if (id === this.shown) return;
    this.shown = id;
    this.measure();
    this.tell("sheet");
    this.tell("selection");
  }

  select(selection: Selection): void {
    this.selections.set(this.shown, selection);
    this.tell("selection");
  }

  go(area: Area): void {
    this.selections.set(area.sheet, over(area));
    if (area.sheet !== this.shown) this.show(area.sheet);
    else this.tell("selection");
  }

  /** After another workbook was opened in place; `follow` when it is the same one, brought up to date. */
  reopened(follow = false): void {
    if (!follow) this.selections.clear();
    if (!follow || !this.book.sheets().some((sheet) => sheet.id === this.shown && !sheet.hidden)) this.shown = this.firstShown();
    this.measure();
    this.tell("opened");
    this.tell("sheet");
    this.tell("selection");
  }

  /** Applies edits as one undo step. False when they were refused; the reason has then been said. */
  perform(edits: readonly Edit[], label: string): boolean {
    return this.attempt(() => void this.book.apply([...edits], label));
  }

  /** Runs something that changes the book; a refusal becomes a sentence. */
  attempt(change: () => void): boolean {
    if (this.closed !== null) {
      this.say(this.closed);
      return false;
    }
    try {
      change();
      return true;
    } catch (error) {
      if (!(error instanceof EditRefused)) throw error;
      this.say(error.message);
      return false;
    }
  }

  filled(row: number, column: number): boolean {
    return this.book.scalar(this.shown, row, column) !== null;
  }

  /** The merged areas of the shown sheet. */
  get merged(): readonly Area[] {
    return this.mergedAreas;
  }

  mergedAt(row: number, column: number): Area | null {
    return this.mergedAreas.find((area) => inside(area, { row, column })) ?? null;
  }

  used(): { rows: number; columns: number } {
    const used = this.book.used(this.shown);
    return used ? { rows: used.row + used.rows, columns: used.column + used.columns } : { rows: 1, columns: 1 };
  }

  address(): string {
    return areaText(this.area, null);
  }

  on(event: SessionEvent, listener: () => void): () => void {
    const listeners = this.listeners.get(event) ?? new Set();
    this.listeners.set(event, listeners.add(listener));
    return () => void listeners.delete(listener);
  }

  private tell(event: SessionEvent): void {
    for (const listener of this.listeners.get(event) ?? []) listener();
  }
}
