import { scanBook, type BookScan, type BookSheet } from "../audit/book";
import { settle } from "../chain/steps";
import { contentsOf } from "./contents";
import type { Workbook } from "./workbook";

/** Most cells of one sheet that are looked through; beyond, only its first rows are, and that is said. */
export const SHEET_CELLS = 1_000_000;
/** Most cells of a workbook that are looked through unasked, for the rules that compare tables and formulas. */
export const UNASKED_CELLS = 200_000;

export interface Scanned {
  readonly scan: BookScan;
  /** Sheets that were too large to be looked through whole, with the last row seen. */
  readonly cut: readonly { readonly sheet: string; readonly lastRow: number }[];
}

export interface ScanOptions {
  readonly signal: AbortSignal;
  /** Give up (resolve to null) when the workbook holds more than this. */
  readonly limit?: number;
  onProgress?(share: number): void;
}

/** Looks through every sheet, hidden ones too, in slices that leave the page responsive. */
export async function scanWorkbook(workbook: Workbook, options: ScanOptions): Promise<Scanned | null> {
  const { signal, limit = Infinity, onProgress } = options;
  const sheets = await workbook.sheets();
  const size = sheets.reduce((sum, { used }) => sum + (used ? used.rows * used.columns : 0), 0);
  if (size > limit) return null;
  const cut: Scanned["cut"][number][] = [];
  const inputs: BookSheet[] = [];
  for (const [at, { name, hidden, used }] of sheets.entries()) {
    signal.throwIfAborted();
    onProgress?.((0.5 * at) / sheets.length);
    if (!used) continue;
    const rows = Math.min(used.rows, Math.max(1, Math.floor(SHEET_CELLS / used.columns)));
    if (rows < used.rows) cut.push({ sheet: name, lastRow: used.row + rows });
    const { address, values, formulas } = await contentsOf(workbook, { ...used, rows });
    inputs.push({ name, hidden, row: address.row, column: address.column, values, formulas });
  }
  const scan = await settle(scanBook(inputs), {
    budgetMs: 12,
    sliceMs: 12,
    signal,
    onProgress: (share) => onProgress?.(0.5 + share / 2),
  });
  return { scan, cut };
}
