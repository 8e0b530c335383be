import { entrySpan, type Rule } from "../context";
import type { Span } from "../finding";

/** Rates that the sheet shows as 0 although they are not: their format has too few digits, and a reader takes them for no arrow. */
export const shownAsZero: Rule = (context) => {
  const { body, options } = context;
  const texts = options.facts?.texts;
  if (!texts) return [];
  const places: Span[] = [];
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const place = body.placeOf(i, j);
      if (i === j || !place || !(body.values[i * body.size + j] > 0)) continue;
      if (/^[-−]?0([.,]0+)?(e[+-]?0+)?\s*%?$/iu.test((texts[place.row]?.[place.column] ?? "").trim())) places.push(entrySpan(context, i, j));
    }
  if (places.length === 0) return [];
  const [span, ...also] = places;
  return [{ code: "shownAsZero", severity: "note", span, also, details: { rates: places.length } }];
};
