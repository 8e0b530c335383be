import { isDash, isEmpty } from "../../table/cell";
import { cellSpan, type Span } from "../finding";
import type { Rule } from "../context";

/**
 * Blank cells among typed zeros or dashes (mistake 23): zero, or not known? Only the pane can tell a blank from a 0, and a table that
 * leaves every missing arrow blank means "no arrow".
 */
export const blanks: Rule = ({ cells, layout, body, options, kind }) => {
  if (!options.facts || body.form === "list" || kind === "probability" || kind === "percent") return [];
  const blank: Span[] = [];
  let said = 0;
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      if (i === j) continue;
      const row = layout.body.row + i;
      const column = layout.body.column + j;
      const cell = cells[row]?.[column] ?? null;
      if (isEmpty(cell)) blank.push(cellSpan(row, column));
      else if (cell === 0 || isDash(cell)) said++;
    }
  if (blank.length === 0 || said === 0) return [];
  const [span, ...also] = blank;
  return [{ code: "blanksAmongZeros", severity: "note", span, also, details: { blanks: blank.length, said } }];
};
