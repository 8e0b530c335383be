import { entrySpan, stateName, type Rule } from "../context";
import type { Span } from "../finding";

/**
 * An arrow listed with rate 0: nobody lists what cannot happen, so no event was seen. No event is no rate of 0; its upper bound
 * is what RATEINTERVAL gives. Lists only: in a square table 0 is how "no arrow" is written.
 */
export const zeroEvents: Rule = (context) => {
  const { body } = context;
  if (body.form !== "list") return [];
  const places: Span[] = [];
  let first: readonly [number, number] | null = null;
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      if (!body.typed[i * body.size + j] || body.values[i * body.size + j] !== 0) continue;
      first ??= [i, j];
      places.push(entrySpan(context, i, j));
    }
  if (!first) return [];
  const [span, ...also] = places;
  return [{ code: "zeroEvents", severity: "note", span, also, details: { fromName: stateName(context, first[0]), toName: stateName(context, first[1]), arrows: places.length } }];
};
