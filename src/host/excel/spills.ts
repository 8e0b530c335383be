/** Which cells hold a formula's overflow. The host's `formulas` do not tell such a cell from a typed one. */
import { type RangeAddress } from "../../pane/workbook";
import { rangeAt } from "./place";

/** Beyond this the question, which is asked cell by cell, is not put; the cells then count as typed. */
const MOST_ASKED = 5000;

/** For each cell whether it is filled by a formula in another cell; null where none is, or where there are too many to ask. */
export async function spilledCells(context: Excel.RequestContext, at: RangeAddress, formulas: readonly (readonly unknown[])[]): Promise<boolean[][] | null> {
  if (at.rows * at.columns > MOST_ASKED) return null;
  const range = rangeAt(context, at);
  const parents = formulas.map((row, i) =>
    // A blank cell may be spilled into as well, but has no formula to hide.
    row.map((formula, j) => (formula === "" ? null : range.getCell(i, j).getSpillParentOrNullObject().load("rowIndex, columnIndex"))),
  );
  await context.sync();
  return parents.map((row, i) =>
    row.map((parent, j) => parent !== null && !parent.isNullObject && (parent.rowIndex !== at.row + i || parent.columnIndex !== at.column + j)),
  );
}

/** Contents as typed: "" where a cell is blank or filled from elsewhere, an apostrophe before text that looks like a formula. */
export function contentsOf(range: Pick<Excel.Range, "formulas" | "values">, spilled: readonly (readonly boolean[])[] | null): string[][] {
  return range.formulas.map((row: unknown[], i) => row.map((content, j) => (spilled?.[i][j] ? "" : typed(content, range.values[i][j]))));
}

function typed(content: unknown, value: unknown): string {
  if (typeof content === "boolean") return content ? "TRUE" : "FALSE";
  return isFormula(content, value) || !String(content).startsWith("=") ? String(content ?? "") : `'${String(content)}`;
}

/** The host gives text that begins with "=" as it gives a formula; but the text is its own value. */
export const isFormula = (content: unknown, value: unknown): content is string => typeof content === "string" && content.startsWith("=") && content !== value;
