import { bodySpan, entrySpan, type Rule } from "../context";
import type { Span } from "../finding";
import { isPercentFormat } from "../formats";
import { fallShort } from "../kind";

/**
 * Percent typed as whole numbers (mistake 6): a positive diagonal and rows that sum to 100. From the sheet also: some rate
 * cells formatted as percent and others not; a stop only where the plain ones are above 1, so that 12 and 12 % stand side by side.
 */
export const percent: Rule = (context) => {
  const { kind, body, options } = context;
  if (kind === "percent") {
    return [{ code: "percentTable", severity: "stop", span: bodySpan(context), remedy: "dividePercent", details: { short: fallShort(body, 100) } }];
  }
  const formats = options.facts?.formats;
  if (!formats) return [];
  const withSign: Span[] = [];
  const without: Span[] = [];
  let above = false;
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const value = body.values[i * body.size + j];
      if (i === j || !(value > 0) || !body.placeOf(i, j)) continue;
      const span = entrySpan(context, i, j);
      if (isPercentFormat(formats[span.row]?.[span.column])) withSign.push(span);
      else {
        without.push(span);
        if (value > 1) above = true;
      }
    }
  if (withSign.length === 0 || without.length === 0) return [];
  const [span, ...also] = withSign.length <= without.length ? withSign : without;
  return [
    {
      code: "percentMixed",
      severity: above ? "stop" : "warning",
      span,
      also,
      details: { withSign: withSign.length, without: without.length, above },
    },
  ];
};
