/** Room for results of more than one cell. */
import { cellText, COLUMN_LIMIT, keyOf, overlap, ROW_LIMIT, type Rect } from "./address";
import type { FormulaCell } from "./formula-cell";
import { isEmpty } from "./sheet";
import { Fault } from "./value";

/** Why a result cannot be shown in the extent; null when it can. */
export function obstacle(cell: FormulaCell, extent: Rect): Fault | null {
  const { sheet } = cell;
  if (extent.row + extent.rows > ROW_LIMIT || extent.column + extent.columns > COLUMN_LIMIT) {
    return new Fault("#SPILL!", `The result has ${extent.rows} rows and ${extent.columns} columns and runs off the sheet.`);
  }
  const last = cellText(extent.row + extent.rows - 1, extent.column + extent.columns - 1);
  const room = `the result fills ${cellText(extent.row, extent.column)}:${last}`;
  const merged = sheet.properties.merged.find((area) => overlap(area, extent));
  if (merged) return new Fault("#SPILL!", `The merged cells at ${cellText(merged.row, merged.column)} are in the way: ${room}.`);
  for (let row = extent.row; row < extent.row + extent.rows; row++) {
    for (let column = extent.column; column < extent.column + extent.columns; column++) {
      if (row === cell.row && column === cell.column) continue;
      const key = keyOf(row, column);
      const content = sheet.contents.get(key);
      if (content && !isEmpty(content)) return new Fault("#SPILL!", `${cellText(row, column)} is in the way: ${room}. Empty it or move the formula.`);
      const owner = sheet.spilled.get(key)?.owner;
      if (owner && owner !== cell) return new Fault("#SPILL!", `The result of ${cellText(owner.row, owner.column)} is in the way at ${cellText(row, column)}: ${room}.`);
    }
  }
  return null;
}

/** The part of an extent that lies on the sheet. */
export const clipped = (rect: Rect): Rect => ({
  ...rect,
  rows: Math.min(rect.rows, ROW_LIMIT - rect.row),
  columns: Math.min(rect.columns, COLUMN_LIMIT - rect.column),
});
