import { isText, isVoid, nameKey, numberInText, widthOf } from "../../table/cell";
import type { Cells, CellValue } from "../../table/rate-table";
import { textOf } from "../body";
import type { Finding } from "../finding";
import type { SheetRule } from "../context";
import { meansTotal } from "../words";

/**
 * A range that is one row or column short of its table (mistake 20), told by the filled cells just outside: the same name heads the next
 * column and the next row; or, without headings, rates go on both to the right and below. Totals, notes and costs beside a
 * table do neither. A label without its column is told by the refusal itself.
 */
export const rangeShort: SheetRule = ({ cells, layout, facts }) => {
  const around = facts.neighbours;
  if (!around || layout?.form === "list") return [];
  const rows = cells.length;
  const columns = widthOf(cells);
  const headings = layout?.headings ?? headingsByText(cells);
  const top = headings === "both" || headings === "top" ? 1 : 0;
  const left = headings === "both" || headings === "left" ? 1 : 0;
  const shape = rows - top - (columns - left);
  const right = numbers(around.right.slice(top), rows - top);
  const below = numbers(around.below.slice(left), columns - left);
  const report = (down: number, along: number, name: string): Finding[] => [
    {
      code: "rangeShort",
      severity: "warning",
      span: along > 0 ? { row: 0, column: columns, rows: rows + down, columns: 1 } : { row: rows, column: 0, rows: 1, columns },
      remedy: "widenSelection",
      details: { name, rows: down, columns: along, range: [0, 0, rows + down, columns + along] },
    },
  ];
  if (headings === "both") {
    const nextColumn = labelOf(around.right[0]);
    const nextRow = labelOf(around.below[0]);
    const onLeft = new Set(cells.slice(1).map((row) => nameKey(textOf(row[0]))));
    const onTop = new Set((cells[0] ?? []).slice(1).map((name) => nameKey(textOf(name))));
    if (nextColumn && nextRow && nameKey(nextColumn) === nameKey(nextRow) && right + below > 0) return report(1, 1, nextColumn);
    if (nextColumn && shape > 0 && onLeft.has(nameKey(nextColumn)) && !onTop.has(nameKey(nextColumn))) return report(0, 1, nextColumn);
    if (nextRow && shape < 0 && onTop.has(nameKey(nextRow)) && !onLeft.has(nameKey(nextRow))) return report(1, 0, nextRow);
    return [];
  }
  if (headings !== "none") return [];
  const sums = cells.every((row, i) => Math.abs(total(row) - Number(around.right[i] ?? 0)) <= 1e-9 * Math.abs(Number(around.right[i] ?? 0)));
  if (sums || rows < 2) return [];
  if (shape === 0 && right >= rows - 1 && below >= columns - 1) return report(1, 1, "");
  if (shape === 1 && right >= rows - 1 && below === 0) return report(0, 1, "");
  if (shape === -1 && below >= columns - 1 && right === 0) return report(1, 0, "");
  return [];
};

function headingsByText(cells: Cells): "both" | "none" | "other" {
  const top = (cells[0] ?? []).slice(1).some((value) => labelOf(value) !== null);
  const left = cells.slice(1).some((row) => labelOf(row[0] ?? null) !== null);
  return top && left ? "both" : top || left ? "other" : "none";
}

function labelOf(value: CellValue | undefined): string | null {
  return value !== undefined && isText(value) && numberInText(value) === null && !meansTotal(value) ? value.trim() : null;
}

function numbers(values: readonly CellValue[], length: number): number {
  return values.slice(0, length).filter((value) => typeof value === "number" && !isVoid(value)).length;
}

function total(row: readonly CellValue[]): number {
  return row.reduce<number>((sum, value) => (typeof value === "number" ? sum + value : sum), 0);
}
