/** One change to the workbook, recorded so that it can be taken back and made again. */
import type { NameRecord } from "./file";
import type { Content, Sheet, SheetProperties } from "./sheet";

/** What a change may touch beside the sheets themselves. */
export interface Ground {
  readonly sheets: Sheet[];
  names: readonly NameRecord[];
}

export interface Change {
  readonly label: string;
  readonly cells: ReadonlyMap<Sheet, ReadonlyMap<number, { readonly before: Content | undefined; readonly after: Content | undefined }>>;
  readonly properties: ReadonlyMap<Sheet, { readonly before: SheetProperties; readonly after: SheetProperties }>;
  readonly order: { readonly before: readonly Sheet[]; readonly after: readonly Sheet[] } | null;
  readonly names: { readonly before: readonly NameRecord[]; readonly after: readonly NameRecord[] } | null;
}

/** Makes changes at once and keeps what was there before. */
export class Transaction {
  private readonly cells = new Map<Sheet, Map<number, { before: Content | undefined; after: Content | undefined }>>();
  private readonly properties = new Map<Sheet, { before: SheetProperties; after: SheetProperties }>();
  private order: { before: readonly Sheet[]; after: readonly Sheet[] } | null = null;
  private names: { before: readonly NameRecord[]; after: readonly NameRecord[] } | null = null;

  constructor(
    private readonly label: string,
    private readonly ground: Ground,
  ) {}

  setContent(sheet: Sheet, key: number, content: Content | undefined): void {
    let entries = this.cells.get(sheet);
    if (!entries) this.cells.set(sheet, (entries = new Map()));
    const known = entries.get(key);
    if (known) known.after = content;
    else entries.set(key, { before: sheet.contents.get(key), after: content });
    sheet.setContent(key, content);
  }

  setProperties(sheet: Sheet, change: Partial<SheetProperties>): void {
    const after = { ...sheet.properties, ...change };
    const known = this.properties.get(sheet);
    if (known) known.after = after;
    else this.properties.set(sheet, { before: sheet.properties, after });
    sheet.properties = after;
  }

  setOrder(sheets: readonly Sheet[]): void {
    const own = this.ground.sheets;
    this.order = { before: this.order?.before ?? [...own], after: sheets };
    own.splice(0, own.length, ...sheets);
  }

  /** Replaces the formulas that names stand for. */
  changeNames(change: (formula: string) => string): void {
    const after = this.ground.names.map((entry) => ({ ...entry, formula: change(entry.formula) }));
    this.names = { before: this.names?.before ?? this.ground.names, after };
    this.ground.names = after;
  }

  finish(): Change {
    return { label: this.label, cells: this.cells, properties: this.properties, order: this.order, names: this.names };
  }

  /** Takes everything back, when an edit in the middle of a batch is refused. */
  rollBack(): void {
    apply(this.finish(), "before", this.ground);
  }
}

export function apply(change: Change, side: "before" | "after", ground: Ground): void {
  if (change.order) ground.sheets.splice(0, ground.sheets.length, ...change.order[side]);
  if (change.names) ground.names = change.names[side];
  change.properties.forEach((entry, sheet) => (sheet.properties = entry[side]));
  change.cells.forEach((entries, sheet) => entries.forEach((entry, key) => sheet.setContent(key, entry[side])));
}
