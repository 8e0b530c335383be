import { bodySpan, rowSpan, stateName, type Rule } from "../context";
import type { Finding } from "../finding";
import { timeUnits } from "../words";

/** Hours in a year, in a month, in a day: ratios that a forgotten conversion leaves between rates. */
const FACTORS: readonly (readonly [factor: number, words: string])[] = [[8760, "hours in a year"], [730, "hours in a month"], [24, "hours in a day"]];

/**
 * Two time units in one table (mistake 10), such as MTBF in years beside MTTR in hours. A warning where labels name different
 * units. From the numbers only a note: a repair in hours beside failures in years, all typed per hour, has the same spread and is right.
 */
export const units: Rule = (context) => {
  const { captions, chain, kind } = context;
  const findings: Finding[] = [];
  const named = [...new Set(captions.flatMap(timeUnits))];
  if (named.length > 1) findings.push({ code: "unitsDiffer", severity: "warning", span: bodySpan(context), details: { units: named } });
  if (kind !== "rates") return findings;
  let [slow, fast] = [-1, -1];
  for (let i = 0; i < chain.size; i++) {
    const exit = chain.exitRate[i];
    if (exit === 0) continue;
    if (slow < 0 || exit < chain.exitRate[slow]) slow = i;
    if (fast < 0 || exit > chain.exitRate[fast]) fast = i;
  }
  if (slow < 0 || slow === fast) return findings;
  const ratio = chain.exitRate[fast] / chain.exitRate[slow];
  const factor = FACTORS.find(([value]) => Math.abs(ratio / value - 1) <= 0.02);
  if (ratio > 1e6 || factor) {
    findings.push({
      code: "rateSpread",
      severity: "note",
      span: rowSpan(context, fast),
      also: [rowSpan(context, slow)],
      details: { fast: stateName(context, fast), slow: stateName(context, slow), ratio, factor: factor?.[0] ?? null, words: factor?.[1] ?? null },
    });
  }
  return findings;
};
