/**
 * The workbook: what a page or a test does with it. Sheets are addressed by their id, rows and columns from 0.
 * Longer than most files, since it is the engine's one door: each member is a few lines over the files beside it.
 */
import { columnOf, keyOf, rowOf, type Area, type Rect } from "./address";
import { Calculation } from "./calculation";
import type { CustomFunctionHost } from "./custom-functions";
import { EditRefused, perform, sheetNameProblem, type Edit } from "./edits";
import { entryText } from "./entry";
import { FILE_VERSION, readFile, writeSheet, type BookFile } from "./file";
import { BUSY } from "./formula-cell";
import { CANONICAL, type Locale } from "./locale";
import { formatValue } from "./number-format";
import { EMPTY, newProperties, Sheet, type Content } from "./sheet";
import { apply, Transaction, type Change, type Ground } from "./transaction";
import { Fault, type Scalar } from "./value";

export const DEFAULT_WIDTH = 98;
const UNDO_LIMIT = 200;

export interface CellView {
  /** The formula bar's text, in the local spelling. */
  readonly input: string;
  /** "" for a blank cell, an error's code for an error. */
  readonly value: number | string | boolean;
  readonly text: string;
  readonly kind: "blank" | "number" | "text" | "logical" | "error";
  readonly format: string;
  readonly bold: boolean;
  /** Explains an error. */
  readonly sentence: string | null;
  /** The cell whose formula filled this one. */
  readonly anchor: { readonly row: number; readonly column: number } | null;
  /** At the cell with the formula: the size of what it fills, where that is more than one cell. */
  readonly extent: { readonly rows: number; readonly columns: number } | null;
  /** The value is still being worked out. */
  readonly busy: boolean;
}

const BLANK: CellView = Object.freeze({ input: "", value: "", text: "", kind: "blank", format: "General", bold: false, sentence: null, anchor: null, extent: null, busy: false });

export interface SheetView {
  readonly id: string;
  readonly name: string;
  readonly hidden: boolean;
  readonly used: Area | null;
}

export interface BookOptions {
  readonly locale?: Locale;
  readonly functions?: CustomFunctionHost;
  /** Longest stretch of recalculation in milliseconds before the page gets its turn; no limit by default. */
  readonly sliceMs?: number;
  readonly now?: () => Date;
  readonly random?: () => number;
}

/** Cells by sheet id whose value or content changed; `everything` when a whole workbook was opened. */
export interface CellsChanged {
  readonly cells: ReadonlyMap<string, ReadonlySet<number>>;
  readonly everything: boolean;
}

interface Listeners {
  change: Set<(event: CellsChanged) => void>;
  sheets: Set<() => void>;
  store: Set<(key: string) => void>;
}

export class Book {
  readonly locale: Locale;
  readonly store: { get(key: string): unknown; set(key: string, value: unknown): void };
  private readonly list: Sheet[] = [];
  private readonly ground: Ground = { sheets: this.list, names: [] };
  private byId = new Map<string, Sheet>();
  private readonly calculation: Calculation;
  private readonly undoStack: Change[] = [];
  private readonly redoStack: Change[] = [];
  private readonly listeners: Listeners = { change: new Set(), sheets: new Set(), store: new Set() };
  private readonly idle = new Set<() => void>();
  private readonly sliceMs: number;
  private kept: Record<string, unknown> = {};
  private lastId = 0;
  private scheduled = false;

  constructor(options: BookOptions = {}) {
    this.locale = options.locale ?? CANONICAL;
    this.sliceMs = options.sliceMs ?? Infinity;
    this.calculation = new Calculation({
      locale: this.locale,
      functions: options.functions ?? null,
      sheets: () => this.list,
      sheetById: (id) => this.byId.get(id),
      sheetId: (name) => this.list.find((sheet) => sheet.properties.name.toLowerCase() === name.toLowerCase())?.id ?? null,
      named: (name, sheet) => {
        const found = this.ground.names.filter((entry) => entry.name.toUpperCase() === name && (entry.sheet === undefined || entry.sheet === sheet));
        return (found.find((entry) => entry.sheet !== undefined) ?? found[0])?.formula ?? null;
      },
      now: options.now ?? (() => new Date()),
      random: options.random ?? Math.random,
      settled: () => this.schedule(),
    });
    this.store = {
      get: (key) => this.kept[key],
      set: (key, value) => {
        this.kept = { ...this.kept, [key]: value };
        this.listeners.store.forEach((listener) => listener(key));
      },
    };
    options.functions?.onChange(() => this.recalculate());
    this.replaceSheets([new Sheet(this.nextId(), newProperties("Sheet1"))]);
  }

  // --- looking -------------------------------------------------------------------------------------------------

  sheets(): SheetView[] {
    return this.list.map((sheet) => this.describe(sheet));
  }

  sheetNamed(name: string): SheetView | null {
    const sheet = this.list.find((entry) => entry.properties.name.toLowerCase() === name.toLowerCase());
    return sheet ? this.describe(sheet) : null;
  }

  /** The name itself if it can be used, else the nearest that can. */
  freeName(name: string): string {
    const taken = this.list.map((sheet) => sheet.properties.name);
    const base = name.replace(/[\\/?*[\]:]/g, " ").replace(/^'+|'+$/g, "").trim().slice(0, 31) || "Sheet";
    for (let number = 1; ; number++) {
      const candidate = number === 1 ? base : `${base.slice(0, 31 - String(number).length - 1)} ${number}`;
      if (sheetNameProblem(candidate, taken) === null) return candidate;
    }
  }

  view(sheetId: string, row: number, column: number): CellView {
    const sheet = this.byId.get(sheetId);
    if (!sheet) return BLANK;
    const key = keyOf(row, column);
    const content = sheet.contents.get(key);
    const formula = sheet.formulas.get(key);
    const owner = formula ? null : (sheet.spilled.get(key)?.owner ?? null);
    if (!content && !owner) return BLANK;
    const format = content?.format ?? "General";
    const value = sheet.valueAt(row, column);
    const busy = value === BUSY || (formula ?? owner)?.marked === true;
    return {
      input: content ? entryText(content.value, content.formula, format, this.locale) : "",
      value: value === null ? "" : value instanceof Fault ? value.code : value,
      text: value === BUSY ? "…" : formatValue(value, format, this.locale),
      kind: kindOf(value),
      format,
      bold: content?.bold ?? false,
      sentence: value instanceof Fault ? value.sentence : null,
      anchor: owner ? { row: owner.row, column: owner.column } : null,
      extent: formula && formula.extent.rows * formula.extent.columns > 1 ? { rows: formula.extent.rows, columns: formula.extent.columns } : null,
      busy,
    };
  }

  /** What was entered into a cell, as it is kept. */
  content(sheetId: string, row: number, column: number): Content {
    return this.byId.get(sheetId)?.contents.get(keyOf(row, column)) ?? EMPTY;
  }

  /** The formula in its canonical spelling, or null. */
  formula(sheetId: string, row: number, column: number): string | null {
    return this.byId.get(sheetId)?.contents.get(keyOf(row, column))?.formula ?? null;
  }

  width(sheetId: string, column: number): number {
    return this.byId.get(sheetId)?.properties.widths.get(column) ?? DEFAULT_WIDTH;
  }

  /** Widths of the columns that differ from the default. */
  widths(sheetId: string): ReadonlyMap<number, number> {
    return this.byId.get(sheetId)?.properties.widths ?? new Map<number, number>();
  }

  hiddenRow(sheetId: string, row: number): boolean {
    return this.byId.get(sheetId)?.properties.hiddenRows.has(row) ?? false;
  }

  hiddenColumn(sheetId: string, column: number): boolean {
    return this.byId.get(sheetId)?.properties.hiddenColumns.has(column) ?? false;
  }

  hiddenRows(sheetId: string): number[] {
    return [...(this.byId.get(sheetId)?.properties.hiddenRows ?? [])].sort((a, b) => a - b);
  }

  hiddenColumns(sheetId: string): number[] {
    return [...(this.byId.get(sheetId)?.properties.hiddenColumns ?? [])].sort((a, b) => a - b);
  }

  merged(sheetId: string): Area[] {
    return (this.byId.get(sheetId)?.properties.merged ?? []).map((rect) => ({ sheet: sheetId, ...rect }));
  }

  used(sheetId: string): Area | null {
    const rect = this.byId.get(sheetId)?.used() ?? null;
    return rect && { sheet: sheetId, ...rect };
  }

  /** How many formulas outside the area follow it, directly or through others. */
  dependents(area: Area): number {
    return this.calculation.followers(area);
  }

  /** The areas that the formula in a cell reads. */
  precedents(sheetId: string, row: number, column: number): Area[] {
    return [...(this.byId.get(sheetId)?.formulas.get(keyOf(row, column))?.reads ?? [])];
  }

  /** The canonical scalar behind a cell, null when blank; for the exchange with files and for tests. */
  scalar(sheetId: string, row: number, column: number): Scalar {
    return this.byId.get(sheetId)?.valueAt(row, column) ?? null;
  }

  // --- changing ------------------------------------------------------------------------------------------------

  /** Makes the edits as one step of undo. @throws EditRefused when one cannot be made; then none is. */
  apply(edits: readonly Edit[], label: string): { readonly addedSheets: readonly string[] } {
    const before = new Set(this.list);
    this.change(label, (transaction) => {
      const ground = { transaction, locale: this.locale, sheets: this.list, nextId: () => this.nextId() };
      for (const edit of edits) perform(edit, ground);
    });
    return { addedSheets: this.list.filter((sheet) => !before.has(sheet)).map((sheet) => sheet.id) };
  }

  /** For operations that work on contents directly; the same rules as `apply`. */
  change(label: string, work: (transaction: Transaction, sheetById: (id: string) => Sheet) => void): void {
    const transaction = new Transaction(label, this.ground);
    try {
      work(transaction, (id) => {
        const sheet = this.list.find((entry) => entry.id === id);
        if (!sheet) throw new EditRefused("The sheet is no longer there.");
        return sheet;
      });
    } catch (error) {
      transaction.rollBack();
      throw error;
    }
    const change = transaction.finish();
    if (change.cells.size + change.properties.size === 0 && !change.order) return;
    this.undoStack.push(change);
    if (this.undoStack.length > UNDO_LIMIT) this.undoStack.shift();
    this.redoStack.length = 0;
    this.follow(change);
  }

  get undoLabel(): string | null {
    return this.undoStack.at(-1)?.label ?? null;
  }

  get redoLabel(): string | null {
    return this.redoStack.at(-1)?.label ?? null;
  }

  /** Takes the last step back; gives its label and the cells it concerned, null when there is none. */
  undo(): { readonly label: string; readonly touched: Area | null } | null {
    return this.travel(this.undoStack, this.redoStack, "before");
  }

  redo(): { readonly label: string; readonly touched: Area | null } | null {
    return this.travel(this.redoStack, this.undoStack, "after");
  }

  private travel(from: Change[], to: Change[], side: "before" | "after"): { label: string; touched: Area | null } | null {
    const change = from.pop();
    if (!change) return null;
    to.push(change);
    apply(change, side, this.ground);
    this.follow(change);
    return { label: change.label, touched: touchedBy(change) };
  }

  /** Brings values and listeners up to date with a change to the contents. */
  private follow(change: Change): void {
    this.byId = new Map(this.list.map((sheet) => [sheet.id, sheet]));
    const renamed = [...change.properties.values()].some((entry) => entry.before.name !== entry.after.name);
    const layout = change.order !== null || change.properties.size > 0;
    if (change.order || renamed) this.calculation.restart();
    else {
      change.cells.forEach((entries, sheet) =>
        entries.forEach(({ before = EMPTY, after = EMPTY }, key) => {
          // Formats alone change what is drawn, not what follows.
          if (before.value === after.value && before.formula === after.formula) this.calculation.note(sheet, key);
          else this.calculation.contentChanged(sheet, rowOf(key), columnOf(key));
        }),
      );
      change.properties.forEach((entry, sheet) => {
        for (const rect of [...entry.before.merged, ...entry.after.merged]) this.calculation.areaChanged({ sheet: sheet.id, ...rect });
      });
    }
    this.calculation.markVolatile();
    this.calculate(false);
    if (layout) this.listeners.sheets.forEach((listener) => listener());
  }

  // --- calculating ---------------------------------------------------------------------------------------------

  /** Works every formula out anew. */
  recalculate(): void {
    this.calculation.restart();
    this.calculate(false);
  }

  get busy(): boolean {
    return this.calculation.unfinished || this.calculation.waitingForAnswers;
  }

  /** Resolves when no formula is marked and no answer is on its way. */
  whenIdle(): Promise<void> {
    if (!this.busy) return Promise.resolve();
    return new Promise((resolve) => this.idle.add(resolve));
  }

  private calculate(everything: boolean): void {
    this.calculation.run(this.sliceMs === Infinity ? Infinity : performance.now() + this.sliceMs);
    const cells = this.calculation.takeChanges();
    if (everything || cells.size > 0) this.listeners.change.forEach((listener) => listener({ cells, everything }));
    if (this.calculation.unfinished) this.schedule();
    else if (!this.busy) {
      this.idle.forEach((resolve) => resolve());
      this.idle.clear();
    }
  }

  private schedule(): void {
    if (this.scheduled) return;
    this.scheduled = true;
    setTimeout(() => {
      this.scheduled = false;
      this.calculate(false);
    }, 0);
  }

  // --- keeping -------------------------------------------------------------------------------------------------

  on<Name extends keyof Listeners>(event: Name, listener: Listeners[Name] extends Set<infer Listener> ? Listener : never): () => void {
    const listeners = this.listeners[event] as Set<unknown>;
    listeners.add(listener);
    return () => listeners.delete(listener);
  }

  toJSON(): BookFile {
    const { names } = this.ground;
    return { version: FILE_VERSION, ...(names.length > 0 && { names }), sheets: this.list.map(writeSheet), store: this.kept };
  }

  /** @throws FileRefused with a sentence when the record is damaged. */
  static fromJSON(file: unknown, options: BookOptions = {}): Book {
    const book = new Book(options);
    book.replaceWith(file);
    return book;
  }

  /** Opens another workbook in place of this one; undo starts afresh. @throws FileRefused, and leaves the book as it was. */
  replaceWith(file: unknown): void {
    const { sheets, names, store } = readFile(file);
    this.kept = store;
    this.ground.names = names;
    this.replaceSheets(sheets);
  }

  private replaceSheets(sheets: readonly Sheet[]): void {
    this.list.splice(0, this.list.length, ...sheets);
    this.byId = new Map(sheets.map((sheet) => [sheet.id, sheet]));
    this.undoStack.length = 0;
    this.redoStack.length = 0;
    this.calculation.restart();
    this.calculate(true);
    this.listeners.sheets.forEach((listener) => listener());
  }

  private nextId(): string {
    do this.lastId++;
    while (this.byId.has(`s${this.lastId}`));
    return `s${this.lastId}`;
  }

  private describe(sheet: Sheet): SheetView {
    const used = sheet.used();
    return { id: sheet.id, name: sheet.properties.name, hidden: sheet.properties.hidden, used: used && { sheet: sheet.id, ...used } };
  }
}

function kindOf(value: Scalar): CellView["kind"] {
  if (value === null) return "blank";
  if (value instanceof Fault) return "error";
  return typeof value === "number" ? "number" : typeof value === "boolean" ? "logical" : "text";
}

/** The smallest area around the cells of a change, on the sheet that has most of them. */
function touchedBy(change: Change): Area | null {
  const [sheet, entries] = [...change.cells].sort((a, b) => b[1].size - a[1].size)[0] ?? [];
  if (!sheet || !entries) return null;
  let top = Infinity;
  let left = Infinity;
  let bottom = -1;
  let right = -1;
  for (const key of entries.keys()) {
    top = Math.min(top, rowOf(key));
    bottom = Math.max(bottom, rowOf(key));
    left = Math.min(left, columnOf(key));
    right = Math.max(right, columnOf(key));
  }
  const rect: Rect = { row: top, column: left, rows: bottom - top + 1, columns: right - left + 1 };
  return { sheet: sheet.id, ...rect };
}
