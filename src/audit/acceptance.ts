import type { Cells, CellValue, Reading } from "../table/rate-table";
import type { Finding, Span } from "./finding";

/**
 * Is this the finding that a person accepted, with the values that it had then?
 *
 * The key holds the rule, the sheet, the state names, the state or arrow concerned, the evidence and the values in all its
 * places, exactly: the acceptance survives rows inserted above the table and changes elsewhere in it, and ends when a name, the
 * evidence or a value concerned changes. A finding about the whole table concerns every cell of it.
 *
 * @param finding - as the audit gave it, spans in the range
 * @param sheet - name of the sheet
 * @param cells - the audited range
 * @param reading - the range as read
 * @returns a text to be compared with that of a later audit
 */
export function acceptanceKey(finding: Finding, sheet: string, cells: Cells, reading: Reading): string {
  const { code, where, span, also = [] } = finding;
  const evidence = Object.entries(finding.details).filter(([name]) => name !== "span"); // the place, which is no evidence
  const body = reading.layout?.body ?? { row: 0, column: 0, rows: cells.length, columns: cells[0]?.length ?? 0 };
  const spans = span ? [span, ...also] : [body];
  return JSON.stringify([code, sheet, reading.layout?.names ?? null, where ?? null, evidence, spans.map((part) => valuesIn(cells, part))]);
}

/** Blank, and outside the range: null. */
function valuesIn(cells: Cells, { row, column, rows, columns }: Span): (CellValue | undefined)[][] {
  return Array.from({ length: rows }, (_, r) => Array.from({ length: columns }, (_, c) => cells[row + r]?.[column + c] ?? null));
}

/** The same key for the same finding on a sheet of another name. */
export function onSheet(key: string, sheet: string): string {
  const parts = JSON.parse(key) as unknown[];
  return JSON.stringify([parts[0], sheet, ...parts.slice(2)]);
}
