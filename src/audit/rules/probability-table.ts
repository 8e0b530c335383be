import { bodySpan, rowSpan, type Rule } from "../context";
import { fallShort, lineSum } from "../kind";

/**
 * A table of transition probabilities where rates are expected (mistake 5): nothing negative, a positive diagonal, every
 * row sums to 1. Sums that miss 1 by rounding (mistake 14) are a warning of their own, since the conversion refuses them.
 */
export const probabilityTable: Rule = (context) => {
  if (context.kind !== "probability") return [];
  const findings = [
    { code: "probabilityTable", severity: "stop" as const, span: bodySpan(context), remedy: "convertProbability", details: { short: fallShort(context.body, 1) } },
  ];
  let worst = -1;
  let gap = 1e-9;
  let rows = 0;
  for (let i = 0; i < context.body.size; i++) {
    const { sum, entries } = lineSum(context.body, i, true);
    if (entries.length === 0 || !(Math.abs(sum - 1) > 1e-9)) continue;
    rows++;
    if (Math.abs(sum - 1) > gap) {
      gap = Math.abs(sum - 1);
      worst = i;
    }
  }
  if (worst < 0) return findings;
  const { sum } = lineSum(context.body, worst, true);
  return [
    ...findings,
    {
      code: "probabilitySums",
      severity: "warning" as const,
      span: rowSpan(context, worst),
      remedy: "rescaleRows",
      details: { sum, rows, state: worst },
    },
  ];
};
