import { columnText } from "../engine";
import type { TextMeasure } from "./cell-text";
import type { Session } from "./session";

export const SMALLEST = 24;
const LARGEST = 800;

export function setWidth(session: Session, column: number, columns: number, width: number): void {
  const held = Math.max(SMALLEST, Math.min(LARGEST, width));
  session.perform([{ kind: "width", sheet: session.sheet, column, columns, width: held }], `width of column ${columnText(column)}`);
}

/** Makes columns as wide as their widest text, headings and numbers in full. */
export function fitColumns(session: Session, measure: TextMeasure, column: number, columns: number, label: string): void {
  const { book, sheet } = session;
  const used = book.used(sheet);
  const edits = [];
  for (let c = column; c < column + columns; c += 1) {
    let width = 0;
    if (used && c < used.column + used.columns) {
      for (let row = used.row; row < used.row + used.rows; row += 1) {
        const view = book.view(sheet, row, c);
        if (view.kind !== "blank") width = Math.max(width, measure.needed(view.text, view.bold));
      }
    }
    if (width > 0) edits.push({ kind: "width" as const, sheet, column: c, width: Math.max(SMALLEST, Math.min(LARGEST, width)) });
  }
  if (edits.length > 0) session.perform(edits, label);
}
