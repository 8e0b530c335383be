import { cellSpan, type Span } from "../finding";
import type { Rule, SheetRule } from "../context";

/** Manual calculation (mistake 26): the figures on the sheet may be older than the rates. */
export const manualCalculation: SheetRule = ({ facts }) =>
  facts.calculation === "manual" ? [{ code: "manualCalculation", severity: "warning", span: null, details: {} }] : [];

/**
 * Pasted constants among formulas (mistake 26): most rates are formulas and a few are plain numbers, which no longer follow. At least
 * three formulas, and at most one constant for every four of them; zeros and the diagonal do not count.
 */
export const pastedConstants: Rule = ({ body, options }) => {
  const formulas = options.facts?.formulas;
  if (!formulas) return [];
  const constants: Span[] = [];
  let following = 0;
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const place = body.placeOf(i, j);
      const value = body.values[i * body.size + j];
      if (!place || i === j || !(value > 0)) continue;
      const content = formulas[place.row]?.[place.column];
      if (content === undefined) continue;
      if (content.startsWith("=") || content === "") following++; // "" under a value: spilled into
      else constants.push(cellSpan(place.row, place.column));
    }
  if (constants.length === 0 || following < 3 || constants.length * 4 > following) return [];
  const [span, ...also] = constants;
  return [{ code: "pastedConstants", severity: "warning", span, also, details: { constants: constants.length, formulas: following } }];
};
