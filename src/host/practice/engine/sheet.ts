/** One sheet: what was entered, and beside it what the formulas made of it. */
import { columnOf, contains, enclosing, keyOf, rowOf, type Rect } from "./address";
import type { FormulaCell } from "./formula-cell";
import type { Scalar } from "./value";

/** What a person put into a cell. Never changed in place, so that undo can keep the old one. */
export interface Content {
  readonly value: Scalar;
  /** Canonical spelling with its equals sign, or null. */
  readonly formula: string | null;
  readonly format: string;
  readonly bold: boolean;
}

export const EMPTY: Content = { value: null, formula: null, format: "General", bold: false };
export const isEmpty = (content: Content): boolean => content.value === null && content.formula === null;
export const isDefault = (content: Content): boolean => isEmpty(content) && content.format === "General" && !content.bold;

/** Everything about a sheet that is not in its cells. Never changed in place. */
export interface SheetProperties {
  readonly name: string;
  readonly hidden: boolean;
  readonly widths: ReadonlyMap<number, number>;
  readonly hiddenRows: ReadonlySet<number>;
  readonly hiddenColumns: ReadonlySet<number>;
  readonly merged: readonly Rect[];
}

export const newProperties = (name: string): SheetProperties => ({
  name,
  hidden: false,
  widths: new Map(),
  hiddenRows: new Set(),
  hiddenColumns: new Set(),
  merged: [],
});

export class Sheet {
  readonly contents = new Map<number, Content>();
  readonly formulas = new Map<number, FormulaCell>();
  /** Cells filled by the formula of another cell. */
  readonly spilled = new Map<number, { readonly owner: FormulaCell; readonly value: Scalar }>();
  private bounds: Rect | null | undefined = null;

  constructor(
    readonly id: string,
    public properties: SheetProperties,
  ) {}

  setContent(key: number, content: Content | undefined): void {
    if (content === undefined) this.contents.delete(key);
    else this.contents.set(key, content);
    this.touched(key, content !== undefined && !isEmpty(content));
  }

  setSpilled(key: number, owner: FormulaCell, value: Scalar): void {
    this.spilled.set(key, { owner, value });
    this.touched(key, true);
  }

  clearSpilled(key: number): void {
    this.spilled.delete(key);
    this.touched(key, false);
  }

  /** Keeps the bounds as long as they only grow; a cell emptied on their edge makes them be counted anew. */
  private touched(key: number, filled: boolean): void {
    const { bounds } = this;
    if (bounds === undefined) return;
    const row = rowOf(key);
    const column = columnOf(key);
    if (filled) {
      if (bounds !== null && contains(bounds, row, column)) return;
      const cell = { row, column, rows: 1, columns: 1 };
      this.bounds = bounds === null ? cell : enclosing(bounds, cell);
    } else if (bounds) {
      const onEdge = row === bounds.row || column === bounds.column || row === bounds.row + bounds.rows - 1 || column === bounds.column + bounds.columns - 1;
      if (onEdge) this.bounds = undefined;
    }
  }

  /** The smallest area that holds every filled cell, spilled ones too. */
  used(): Rect | null {
    if (this.bounds === undefined) this.bounds = this.countBounds();
    return this.bounds;
  }

  private countBounds(): Rect | null {
    let top = Infinity;
    let left = Infinity;
    let bottom = -1;
    let right = -1;
    const include = (key: number) => {
      const row = rowOf(key);
      const column = columnOf(key);
      if (row < top) top = row;
      if (row > bottom) bottom = row;
      if (column < left) left = column;
      if (column > right) right = column;
    };
    this.contents.forEach((content, key) => {
      if (!isEmpty(content)) include(key);
    });
    this.spilled.forEach((_, key) => include(key));
    return bottom < 0 ? null : { row: top, column: left, rows: bottom - top + 1, columns: right - left + 1 };
  }

  /** The value in a cell, whoever put it there, as it stands at the moment. */
  valueAt(row: number, column: number): Scalar {
    const key = keyOf(row, column);
    const formula = this.formulas.get(key);
    if (formula) return formula.value;
    const content = this.contents.get(key);
    if (content && content.value !== null) return content.value;
    return this.spilled.get(key)?.value ?? null;
  }
}

export function eachCell(rect: Rect, visit: (row: number, column: number) => void): void {
  for (let row = rect.row; row < rect.row + rect.rows; row++) {
    for (let column = rect.column; column < rect.column + rect.columns; column++) visit(row, column);
  }
}
