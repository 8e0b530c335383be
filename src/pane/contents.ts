import { overlap } from "./address";
import { SCAN_CELLS, type HostValue, type RangeAddress, type SheetInfo, type Workbook } from "./workbook";

export interface Contents {
  readonly address: RangeAddress;
  readonly values: readonly (readonly HostValue[])[];
  readonly formulas: readonly (readonly string[])[];
}

/** Values and formulas of a range of any size, read in bands of rows so that no single call grows beyond the host's limits. */
export async function contentsOf(workbook: Workbook, range: RangeAddress): Promise<Contents> {
  const values: (readonly HostValue[])[] = [];
  const formulas: (readonly string[])[] = [];
  const band = Math.max(1, Math.floor(SCAN_CELLS / range.columns));
  for (let done = 0; done < range.rows; done += band) {
    const part = { ...range, row: range.row + done, rows: Math.min(band, range.rows - done) };
    const reading = await (workbook.scan ? workbook.scan(part) : workbook.read(part));
    values.push(...reading.values);
    formulas.push(...reading.formulas);
  }
  return { address: range, values, formulas };
}

/** The part of a range that holds anything at all, by the sheet's used range; null when there is none. */
export function usedPart(sheets: readonly SheetInfo[], range: RangeAddress): RangeAddress | null {
  const used = sheets.find((sheet) => sheet.name === range.sheet)?.used;
  return used ? overlap(used, range) : null;
}
