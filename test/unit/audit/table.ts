import type { Cells, CellValue } from "../../../src/table/rate-table";
import { audit, type AuditOptions } from "../../../src/audit/audit";
import type { Finding } from "../../../src/audit/finding";

/** A square table with both headings: a corner word, names, and rows of cells. */
export function headed(corner: CellValue, names: readonly string[], rows: readonly (readonly CellValue[])[]): Cells {
  return [[corner, ...names], ...rows.map((row, i) => [names[i], ...row])];
}

export const codes = (findings: readonly Finding[]): string[] => findings.map((finding) => finding.code);

/** Codes of stops and warnings only. */
export function complaints(cells: Cells, options?: AuditOptions): string[] {
  return audit(cells, options).filter((finding) => finding.severity !== "note").map((finding) => finding.code);
}

export function findingOf(cells: Cells, code: string, options?: AuditOptions): Finding | undefined {
  return audit(cells, options).find((finding) => finding.code === code);
}
