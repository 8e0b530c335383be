import type { CellFault, Cells, CellValue } from "./rate-table";

const DASHES = new Set(["-", "–", "—", "−"]);

/** The cell at a place; ragged rows and places outside read as blank. */
export function cellAt(cells: Cells, row: number, column: number): CellValue {
  return cells[row]?.[column] ?? "";
}

/** Columns of the widest row. A loop, because a whole column has more rows than a call takes arguments. */
export function widthOf(cells: Cells): number {
  let width = 0;
  for (const row of cells) if (row.length > width) width = row.length;
  return width;
}

export function isFault(cell: CellValue): cell is CellFault {
  return typeof cell === "object" && cell !== null && "fault" in cell;
}

/** Nothing typed: what a host sends for a blank cell as `""` or `null`. A blank may also arrive as 0, see `isVoid`. */
export function isEmpty(cell: CellValue): boolean {
  return cell === null || cell === undefined || (typeof cell === "string" && cell.trim() === "");
}

export function isDash(cell: CellValue): boolean {
  return typeof cell === "string" && DASHES.has(cell.trim());
}

/** No arrow and no heading: blank, 0 (a host may send blanks so) or a lone dash. */
export function isVoid(cell: CellValue): boolean {
  return cell === 0 || isEmpty(cell) || isDash(cell);
}

/** Text in the sense of a heading or a name: neither blank nor a lone dash. */
export function isText(cell: CellValue): cell is string {
  return typeof cell === "string" && !isEmpty(cell) && !isDash(cell);
}

/** What planners write on the diagonal for "not applicable". */
export function isDiagonalMark(cell: CellValue): boolean {
  return typeof cell === "string" && /^(n\/a|x)$/i.test(cell.trim());
}

/**
 * The number that a text cell would be if its writer's marks were taken away (decimal comma, blanks and apostrophes
 * between digits, a percent sign, a typographic minus), or null. Never computed with: it words the remedy.
 */
export function numberInText(text: string): number | null {
  let digits = text.replace(/[\s\u00a0\u2009\u202f'’]/g, "").replace(/−/g, "-");
  const percent = digits.endsWith("%");
  if (percent) digits = digits.slice(0, -1);
  if (digits.includes(",") && digits.includes("."))
    digits = digits.lastIndexOf(",") > digits.lastIndexOf(".") ? digits.replace(/\./g, "").replace(",", ".") : digits.replace(/,/g, "");
  else digits = digits.replace(",", ".");
  if (!/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(digits)) return null;
  const value = Number(digits) / (percent ? 100 : 1);
  return Number.isFinite(value) ? value : null;
}

/** Two names are one when they differ only in case, outer blanks or composed letters. */
export function nameKey(name: string): string {
  return name.trim().normalize("NFC").toLowerCase();
}
