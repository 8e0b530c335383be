import { widthOf } from "../../table/cell";
import type { SheetRule } from "../context";
import type { Finding } from "../finding";

/** Hidden or filtered-out rows or columns inside the range (mistake 24): they are read like any other, and nobody sees them. */
export const hidden: SheetRule = ({ cells, facts }) => {
  const width = widthOf(cells);
  const rows = (facts.hiddenRows ?? []).filter((row) => row >= 0 && row < cells.length);
  const columns = (facts.hiddenColumns ?? []).filter((column) => column >= 0 && column < width);
  if (rows.length + columns.length === 0) return [];
  const [span, ...also]: NonNullable<Finding["span"]>[] = [
    ...rows.map((row) => ({ row, column: 0, rows: 1, columns: width })),
    ...columns.map((column) => ({ row: 0, column, rows: cells.length, columns: 1 })),
  ];
  return [{ code: "hiddenLines", severity: "warning", span, also, details: { rows: rows.length, columns: columns.length } }];
};
