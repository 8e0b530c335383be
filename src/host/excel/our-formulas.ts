/** Where the workbook's formulas of ours are, whether or not the add-in is registered there. */
import { type FormulaPlace, type HostValue } from "../../pane/workbook";
import { isFormula } from "./spills";

/** What Excel writes for a function that was not registered when the workbook was opened or saved. */
const UNREGISTERED = /_xldudf_CTMC_([A-Za-z0-9_]+)(?=\s*\()/gi;
const OURS = /(?:^|[^A-Za-z0-9_.])(?:CTMC\.|_xldudf_CTMC_)[A-Za-z0-9_.]+\s*\(/i;

/** A formula without what stands in quotation marks, so that words inside text are not taken for functions. */
const withoutText = (formula: string): string => formula.replace(/"(?:[^"]|"")*"/g, '""');

export const isOurs = (formula: string): boolean => formula.startsWith("=") && OURS.test(withoutText(formula));

/** The formula as people know it, with CTMC. before each name; text inside it is left alone. */
export const spelled = (formula: string): string =>
  formula
    .split(/("(?:[^"]|"")*")/)
    .map((part, i) => (i % 2 === 1 ? part : part.replace(UNREGISTERED, "CTMC.$1")))
    .join("");

export interface FoundFormula extends FormulaPlace {
  /** As the host holds it. */
  readonly held: string;
  readonly value: HostValue;
}

/** So many cells are asked for at once: values and formulas together stay well under the web's 5 MB an answer. */
const CELLS_AT_ONCE = 20_000;

/**
 * Every formula of ours, sheet by sheet through the used ranges, hidden sheets included (the host's own search skips
 * them). Cells that a formula spills into hold no formula of their own: the host gives their values.
 */
export async function ourFormulas(context: Excel.RequestContext): Promise<FoundFormula[]> {
  const sheets = context.workbook.worksheets.load("items/name");
  await context.sync();
  const used = sheets.items.map((sheet) => sheet.getUsedRangeOrNullObject(true).load("rowIndex, columnIndex, rowCount, columnCount"));
  await context.sync();
  const found: FoundFormula[] = [];
  for (const [i, sheet] of sheets.items.entries()) {
    const range = used[i];
    if (range.isNullObject) continue;
    const rows = Math.max(1, Math.floor(CELLS_AT_ONCE / range.columnCount));
    for (let from = 0; from < range.rowCount; from += rows) {
      const count = Math.min(rows, range.rowCount - from);
      const block = sheet.getRangeByIndexes(range.rowIndex + from, range.columnIndex, count, range.columnCount).load("formulas, values");
      // One answer at a time is the point here: all at once could exceed what the host may send.
      // eslint-disable-next-line office-addins/no-context-sync-in-loop
      await context.sync();
      for (const [r, cells] of (block.formulas as unknown[][]).entries()) {
        for (const [c, held] of cells.entries()) {
          if (!isFormula(held, block.values[r][c]) || !isOurs(held)) continue;
          found.push({
            sheet: sheet.name,
            row: range.rowIndex + from + r,
            column: range.columnIndex + c,
            held,
            formula: spelled(held),
            value: block.values[r][c] as HostValue,
          });
        }
      }
    }
  }
  return found;
}
