import { bodySpan, type Rule } from "../context";
import { meansMeanTime, meansRate } from "../words";

/**
 * Mean times in rate cells (mistake 11): a label says MTBF, MTTR or mean time, or the person answered so. The hint from the
 * numbers alone (first state holding less than half of the long run) is too weak for a warning: `largestArrow` asks.
 */
export const meanTimes: Rule = (context) => {
  const { kind, captions, options } = context;
  if (kind !== "rates") return [];
  const answered = options.answers?.largestArrow === "meanTime";
  const label = captions.find((text) => meansMeanTime(text) && !meansRate(text));
  if (!answered && label === undefined) return [];
  return [{ code: "meanTimes", severity: "warning", span: bodySpan(context), remedy: "invertMeanTimes", details: { label: label ?? null, answered } }];
};
