import { bodySpan, type Rule } from "../context";
import { meansProbability, saysRate } from "../words";

/**
 * Single probabilities typed as rates (mistake 7): a label beside the table speaks of probability, risk or percent, and all
 * numbers lie in 0..1. State names are not asked: "At risk" is a state. Without such a label only a person knows: `largestArrow`.
 */
export const probabilityLabel: Rule = (context) => {
  const { kind, body, captions, options } = context;
  if (kind !== "rates") return [];
  const answered = options.answers?.largestArrow === "probability";
  const label = captions.find((text) => meansProbability(text) && !saysRate(text));
  if (!answered && (label === undefined || !body.values.every((value, at) => at % (body.size + 1) === 0 || Number.isNaN(value) || (value >= 0 && value <= 1)))) return [];
  const largest = Math.max(...body.exits);
  return [
    {
      code: "probabilityLabel",
      severity: "warning",
      span: bodySpan(context),
      details: { label: label ?? null, answered, largest, rate: largest < 1 ? -Math.log1p(-largest) : null },
    },
  ];
};
