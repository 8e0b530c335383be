import type { Cells, Reading } from "../table/rate-table";

/** One arrow as the cells state it, with the cell that says so (in the range, from 0). */
export interface Claim {
  readonly from: string;
  readonly to: string;
  readonly rate: number;
  readonly row: number;
  readonly column: number;
}

/**
 * What each arrow claims. A range that does not read as a table for some fault elsewhere still claims the arrows that can
 * be read: positive numbers off the diagonal, or beside two names in a list.
 */
export function claimsOf(cells: Cells, reading: Reading): Claim[] {
  const { layout, table } = reading;
  if (!layout) return [];
  const name = (state: number): string => layout.names?.[state] ?? `State ${state + 1}`;
  if (table) return table.arrows.map(({ from, to, rate, place }) => ({ from: name(from), to: name(to), rate, ...place }));
  const { row, column, rows, columns } = layout.body;
  const claims: Claim[] = [];
  for (let r = 0; r < rows; r++) {
    const line = cells[row + r] ?? [];
    if (layout.form === "list") {
      const [from, to, rate] = line.slice(column, column + 3);
      if (typeof from === "string" && typeof to === "string" && isRate(rate)) claims.push({ from: from.trim(), to: to.trim(), rate, row: row + r, column: column + 2 });
      continue;
    }
    for (let c = 0; c < columns; c++) {
      const rate = line[column + c];
      if (r !== c && isRate(rate)) claims.push({ from: name(r), to: name(c), rate, row: row + r, column: column + c });
    }
  }
  return claims;
}

function isRate(value: unknown): value is number {
  return typeof value === "number" && value > 0;
}
