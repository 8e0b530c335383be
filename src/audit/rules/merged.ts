import { widthOf } from "../../table/cell";
import type { SheetRule } from "../context";

/**
 * Merged cells among the rates (mistake 25): all but the first cell of a merged area read as blank, so arrows vanish. Merged headings
 * above or beside the rates do no harm.
 */
export const merged: SheetRule = ({ cells, layout, facts }) => {
  const width = widthOf(cells);
  const body = layout?.body ?? { row: Math.min(2, cells.length), column: 1, rows: cells.length, columns: width };
  const inside = (facts.merged ?? []).filter(
    ({ row, column, rows, columns }) =>
      rows * columns > 1 && row < body.row + body.rows && body.row < row + rows && column < body.column + body.columns && body.column < column + columns && row < cells.length && column < width,
  );
  if (inside.length === 0) return [];
  const [span, ...also] = inside;
  return [{ code: "mergedCells", severity: "stop", span, also, details: { areas: inside.length } }];
};
