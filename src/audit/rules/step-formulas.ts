import { bodySpan, entrySpan, stateName, type Context, type Rule } from "../context";
import { meansPercent } from "../words";

/**
 * Transition probabilities made by a formula that does not give them (mistake 27): EXP cell by cell, I + Q·t, or a short series.
 * Told by results that no probability can take, and from the sheet by EXP( in the cells of the table. exp(−q·t) of one exit rate,
 * outside a table, is a survival and right.
 */
export const stepFormulas: Rule = (context) => {
  const { body, kind, options, captions, layout } = context;
  const n = body.size;
  if (body.form === "list" || n < 2) return [];
  const stop = (code: string, details = {}) => [{ code, severity: "stop" as const, span: bodySpan(context), details }];
  const formulas = options.facts?.formulas;
  if (formulas) {
    let filled = 0;
    let exponentials = 0;
    for (let i = 0; i < n; i++)
      for (let j = 0; j < n; j++) {
        const formula = formulas[layout.body.row + i]?.[layout.body.column + j] ?? "";
        if (formula !== "") filled++;
        if (formula.startsWith("=") && /\bEXP\s*\(/iu.test(formula) && !/1\s*-\s*EXP/iu.test(formula)) exponentials++;
      }
    if (exponentials >= 3 && exponentials > filled / 2) return stop("exponentialCells", { cells: exponentials });
  }
  if (everyCellExponential(context)) return stop("exponentialCells", { cells: 0 });
  if (kind === "complement" && body.values.some((value, at) => at % (n + 1) !== 0 && value > 1)) return stop("linearSteps");
  if (captions.some((text) => /\bprob|\bP\s*\(\s*t\s*\)|\bafter\b.*\b(steps?|cycles?|years?|hours?|days?)\b/iu.test(text) && !meansPercent(text) && !/\brates?\b|\bper\b/iu.test(text))) {
    for (let i = 0; i < n; i++)
      for (let j = 0; j < n; j++) {
        const value = body.values[i * n + j];
        if (!(value > 1 + 1e-9) && !(value < -1e-9 && i !== j)) continue;
        return [{ code: "outsideUnit", severity: "stop", span: entrySpan(context, i, j), details: { value, fromName: stateName(context, i), toName: stateName(context, j) } }];
      }
  }
  return [];
};

/** exp(q·t) entry by entry: 1 where there is no arrow, above 1 where there is one, between 0 and 1 on the diagonal. */
function everyCellExponential({ body }: Context): boolean {
  let above = 0;
  let diagonal = 0;
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const value = body.values[i * body.size + j];
      if (i === j) {
        if (!(value > 0 && value <= 1)) return false;
        if (value < 1) diagonal++;
      } else {
        if (!(value >= 1)) return false;
        if (value > 1) above++;
      }
    }
  return above > 0 && diagonal > 0;
}
