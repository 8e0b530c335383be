/** Formulas that lost their functions: Excel does not repair these by recalculating, only by being given them again. */
import { type FormulaPlace, type Outcome } from "../../pane/workbook";
import { ourFormulas, type FoundFormula } from "./our-formulas";
import { rangeAt } from "./place";
import { protectedSheets, refusalFor } from "./protected";
import { run } from "./run";

const isUnlinked = (found: FoundFormula): boolean => found.value === "#NAME?" || found.held !== found.formula;

export const unlinked = (): Promise<readonly FormulaPlace[]> =>
  run(async (context) => (await ourFormulas(context)).filter(isUnlinked).map(({ sheet, row, column, formula }) => ({ sheet, row, column, formula })));

export function relink(): Promise<Outcome> {
  return run(async (context) => {
    const lost = (await ourFormulas(context)).filter(isUnlinked);
    const closed = await protectedSheets(context, lost);
    const open = lost.filter((one) => !closed.has(one.sheet));
    for (const one of open) rangeAt(context, { ...one, rows: 1, columns: 1 }).formulas = [[one.formula]];
    await context.sync();
    return { done: open.length, refused: [...closed].map((sheet) => refusalFor(sheet, lost.filter((one) => one.sheet === sheet).length)) };
  });
}
