/** Sheets that a step over the whole workbook has to leave alone. */
import { type Place } from "../../pane/workbook";

/** Of the sheets these places are on, the protected ones. */
export async function protectedSheets(context: Excel.RequestContext, places: readonly Place[]): Promise<ReadonlySet<string>> {
  const names = [...new Set(places.map((one) => one.sheet))];
  const protections = names.map((name) => context.workbook.worksheets.getItem(name).protection.load("protected"));
  await context.sync();
  return new Set(names.filter((_, i) => protections[i].protected));
}

export const refusalFor = (sheet: string, count: number): string =>
  `The sheet "${sheet}" is protected; its ${count === 1 ? "formula was" : `${count} formulas were`} left as ${count === 1 ? "it is" : "they are"}.`;
