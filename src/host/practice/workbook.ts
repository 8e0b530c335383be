/** The practice workbook as the pane sees it. */
import type { Fact, HostValue, Place, RangeAddress, RangeReading, SheetInfo, SheetLook, Workbook, WorkbookEvent, Write } from "../../pane/workbook";
import { cellText, COLUMN_LIMIT, ROW_LIMIT, Fault, type Area, type Book, type CellView, type Edit, type Scalar } from "./engine";

/** Pixels that a character of the sheet's font takes, about. */
const CHARACTER_WIDTH = 8;

/** What the adapter needs of the page: the selection, and the open edit taken into its cell before anything is read or written. */
export interface PageView {
  readonly selection: Area;
  settle(): void;
  select(area: Area): void;
  onSelection(listener: () => void): () => void;
  /** Why nothing can be changed, or null. */
  readonly readOnly: string | null;
}

export class PracticeWorkbook implements Workbook {
  readonly host = "practice";

  constructor(private readonly book: Book, private readonly page: PageView) {}

  async sheets(): Promise<readonly SheetInfo[]> {
    return this.book.sheets().map((sheet) => ({
      name: sheet.name,
      hidden: sheet.hidden,
      used: sheet.used && this.address(sheet.used),
    }));
  }

  async selection(): Promise<RangeAddress> {
    return this.address(this.page.selection);
  }

  async read(range: RangeAddress): Promise<RangeReading> {
    await this.book.whenIdle();
    const area = this.area(range);
    const cells = this.views(area);
    return {
      address: range,
      values: cells.map((row) => row.map((cell) => cell.value)),
      formulas: cells.map((line, r) => line.map((_, c) => this.content(area.sheet, area.row + r, area.column + c))),
      formats: cells.map((row) => row.map((cell) => cell.format)),
      texts: cells.map((row) => row.map((cell) => cell.text)),
      facts: {
        hiddenRows: this.book.hiddenRows(area.sheet).filter((row) => row >= area.row && row < area.row + area.rows),
        hiddenColumns: this.book.hiddenColumns(area.sheet).filter((column) => column >= area.column && column < area.column + area.columns),
        merged: this.book
          .merged(area.sheet)
          .filter((merged) => meets(merged, area))
          .map((merged) => this.address(merged)),
        neighbours: this.neighbours(area),
        calculation: "automatic",
      },
    };
  }

  /** What stands in a cell, spelled so that every host spells it alike; nothing where another cell's result stands. */
  private content(sheet: string, row: number, column: number): string {
    const { formula, value } = this.book.content(sheet, row, column);
    if (formula !== null) return formula;
    if (typeof value === "boolean") return value ? "TRUE" : "FALSE";
    const text = String(shown(value));
    // Text that would read as a formula keeps the apostrophe that made it text.
    return typeof value === "string" && /^['=]/.test(text) ? `'${text}` : text;
  }

  private views(area: Area): CellView[][] {
    return Array.from({ length: area.rows }, (_, r) => Array.from({ length: area.columns }, (__, c) => this.book.view(area.sheet, area.row + r, area.column + c)));
  }

  /** Without formats and texts, which cost most: whole sheets are looked through this way. */
  async scan(range: RangeAddress): Promise<Pick<RangeReading, "address" | "values" | "formulas">> {
    await this.book.whenIdle();
    const area = this.area(range);
    const values: HostValue[][] = [];
    const formulas: string[][] = [];
    for (let row = area.row; row < area.row + area.rows; row += 1) {
      const line: HostValue[] = [];
      const contents: string[] = [];
      for (let column = area.column; column < area.column + area.columns; column += 1) {
        const value = shown(this.book.scalar(area.sheet, row, column));
        line.push(value);
        contents.push(this.content(area.sheet, row, column));
      }
      values.push(line);
      formulas.push(contents);
    }
    return { address: range, values, formulas };
  }

  private neighbours(area: Area): Fact<{ above: HostValue[]; below: HostValue[]; left: HostValue[]; right: HostValue[] }> {
    const value = (row: number, column: number): HostValue => (row < 0 || column < 0 || row >= ROW_LIMIT || column >= COLUMN_LIMIT ? "" : this.book.view(area.sheet, row, column).value);
    const across = (row: number): HostValue[] => Array.from({ length: area.columns }, (_, c) => value(row, area.column + c));
    const down = (column: number): HostValue[] => Array.from({ length: area.rows }, (_, r) => value(area.row + r, column));
    return { above: across(area.row - 1), below: across(area.row + area.rows), left: down(area.column - 1), right: down(area.column + area.columns) };
  }

  async write(batch: readonly Write[], label: string): Promise<void> {
    this.change(
      batch.flatMap((write) => this.edits(this.sheetId(write.sheet), write)),
      label,
    );
    await this.book.whenIdle();
  }

  async addSheet(name: string, cells: Write["cells"], formats?: Write["formats"]): Promise<string> {
    const free = this.book.freeName(name);
    const id = crypto.randomUUID();
    this.change([{ kind: "addSheet", id, name: free }, ...this.edits(id, { row: 0, column: 0, cells, formats })], `sheet ${free}`);
    await this.book.whenIdle();
    return free;
  }

  private change(edits: readonly Edit[], label: string): void {
    this.page.settle();
    if (this.page.readOnly !== null) throw new Error(this.page.readOnly);
    this.book.apply([...edits], label);
  }

  private edits(sheet: string, write: Pick<Write, "row" | "column" | "cells" | "formats">): Edit[] {
    const edits: Edit[] = [];
    write.cells.forEach((line, r) =>
      line.forEach((value, c) => {
        const row = write.row + r;
        const column = write.column + c;
        const format = write.formats?.[r]?.[c];
        if (typeof value === "string" && value.startsWith("'")) {
          edits.push({ kind: "type", sheet, row, column, text: value });
          if (format !== undefined) edits.push({ kind: "format", area: { sheet, row, column, rows: 1, columns: 1 }, format });
        } else if (value !== undefined) edits.push({ kind: "put", sheet, row, column, value, ...(format === undefined ? {} : { format }) });
        else if (format !== undefined) edits.push({ kind: "format", area: { sheet, row, column, rows: 1, columns: 1 }, format });
      }),
    );
    return edits;
  }

  async placeFormula(place: Place, formula: string, size: { readonly rows: number; readonly columns: number }, label: string): Promise<void> {
    const sheet = this.sheetId(place.sheet);
    if (place.row + size.rows > ROW_LIMIT || place.column + size.columns > COLUMN_LIMIT) throw new Error(`${cellText(place.row, place.column)} is too near the edge of the sheet for ${size.rows} × ${size.columns} cells.`);
    await this.book.whenIdle();
    for (let row = place.row; row < place.row + size.rows; row += 1) {
      for (let column = place.column; column < place.column + size.columns; column += 1) {
        const filled = this.book.view(sheet, row, column).kind !== "blank" || this.book.content(sheet, row, column).formula !== null;
        if (filled) throw new Error(`${cellText(row, column)} is filled; the answer needs ${size.rows} × ${size.columns} empty cells from ${cellText(place.row, place.column)} on.`);
      }
    }
    this.change([{ kind: "put", sheet, row: place.row, column: place.column, value: formula }], label);
    await this.book.whenIdle();
  }

  async presentSheet(sheet: string, look: SheetLook): Promise<void> {
    const id = this.sheetId(sheet);
    const columns = look.columnWidths.length;
    this.change(
      [
        ...look.columnWidths.map((characters, column): Edit => ({ kind: "width", sheet: id, column, width: Math.round(characters * CHARACTER_WIDTH) })),
        ...look.boldRows.map((row): Edit => ({ kind: "format", area: { sheet: id, row, column: 0, rows: 1, columns }, bold: true })),
      ],
      `look of ${sheet}`,
    );
  }

  async select(range: RangeAddress): Promise<void> {
    const area = this.area(range);
    if (this.book.sheets().some((sheet) => sheet.id === area.sheet && sheet.hidden)) throw new Error(`Sheet ${range.sheet} is hidden. Show it first.`);
    this.page.select(area);
  }

  async undo(): Promise<void> {
    this.page.settle();
    if (this.page.readOnly !== null) throw new Error(this.page.readOnly);
    this.book.undo();
    await this.book.whenIdle();
  }

  on(event: WorkbookEvent, listener: () => void): () => void {
    return event === "selection" ? this.page.onSelection(listener) : this.book.on(event, listener);
  }

  readonly store = {
    get: async (key: string): Promise<unknown> => this.book.store.get(key),
    set: async (key: string, value: unknown): Promise<void> => {
      if (this.page.readOnly !== null) throw new Error(this.page.readOnly);
      this.book.store.set(key, value);
    },
  };

  private sheetId(name: string): string {
    const sheet = this.book.sheetNamed(name);
    if (!sheet) throw new Error(`There is no sheet named ${name}.`);
    return sheet.id;
  }

  private area(range: RangeAddress): Area {
    if (range.row < 0 || range.column < 0 || range.row + range.rows > ROW_LIMIT || range.column + range.columns > COLUMN_LIMIT) {
      throw new Error(`${range.rows} × ${range.columns} cells do not fit there on the sheet ${range.sheet}.`);
    }
    return { sheet: this.sheetId(range.sheet), row: range.row, column: range.column, rows: range.rows, columns: range.columns };
  }

  private address(area: Area): RangeAddress {
    const sheet = this.book.sheets().find((entry) => entry.id === area.sheet)?.name ?? "";
    return { sheet, row: area.row, column: area.column, rows: area.rows, columns: area.columns };
  }
}

function shown(value: Scalar): HostValue {
  return value === null ? "" : value instanceof Fault ? value.code : value;
}

function meets(a: Area, b: Area): boolean {
  return a.row < b.row + b.rows && b.row < a.row + a.rows && a.column < b.column + b.columns && b.column < a.column + a.columns;
}
