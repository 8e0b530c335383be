import { rowSpan, stateName, type Rule } from "../context";
import { cellSpan } from "../finding";
import { meansPercent, meansProbability, saysRate } from "../words";

/**
 * Each exit turned into a probability by itself although exits compete (mistake 8): 0.3 and 0.5 a year leave 0.2065 and 0.3442,
 * not 0.2592 and 0.3935. Seen where the probabilities of one row's exits exceed 1 (the diagonal, made up to 1, is negative; or a
 * label says probability), and from the sheet by two formulas 1−EXP(−…) in one row.
 */
export const competingExits: Rule = (context) => {
  const { body, kind, captions, options, layout } = context;
  if (body.form === "list") return [];
  const n = body.size;
  const below1 = body.values.every((value, at) => at % (n + 1) === 0 || (value >= 0 && value <= 1));
  const labelled = kind === "rates" && captions.some((text) => meansProbability(text) && !meansPercent(text) && !saysRate(text));
  if ((kind === "complement" || labelled) && below1) {
    const over = Array.from({ length: n }, (_, i) => i).filter((i) => body.exits[i] > 1 + 1e-9);
    if (over.length > 0) {
      const [first, ...others] = over;
      return [
        {
          code: "competingExits",
          severity: "stop",
          span: rowSpan(context, first),
          also: others.map((state) => rowSpan(context, state)),
          details: { name: stateName(context, first), sum: body.exits[first] },
        },
      ];
    }
  }
  const formulas = options.facts?.formulas;
  if (!formulas) return [];
  for (let i = 0; i < n; i++) {
    const row = layout.body.row + i;
    const cells = Array.from({ length: n }, (_, j) => layout.body.column + j).filter((column) => /^=\s*1\s*-\s*EXP\s*\(\s*-/iu.test(formulas[row]?.[column] ?? ""));
    if (cells.length >= 2) {
      const [first, ...others] = cells;
      return [
        {
          code: "competingFormulas",
          severity: "stop",
          span: cellSpan(row, first),
          also: others.map((column) => cellSpan(row, column)),
          details: { name: stateName(context, i), cells: cells.length },
        },
      ];
    }
  }
  return [];
};
