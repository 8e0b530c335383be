/**
 * Formulas that a file does not mark as able to spill. Programs read such a one as formulas were read before there were
 * spilling results: where a single value is wanted, a range stands for its one cell level with the formula. Here, as in
 * today's programs, that is written with the mark @, so that an old workbook opens with its old results.
 */
import { parse, tokenize, type AstExpression } from "@borgar/fx";
import { parseArea, splitSheet } from "../engine";
import { functionName } from "../engine/formula";
import { SINGLE_VALUED } from "./array-use";

/** What the place of an expression takes: one cell, a range as it stands, or whole tables throughout. */
type Place = "cell" | "range" | "table";

/** Functions that work on whole tables even in formulas of old. */
const TABLE_FUNCTIONS = /^(SUMPRODUCT|MMULT|MINVERSE|MDETERM|TRANSPOSE|LOOKUP|FREQUENCY|LINEST|LOGEST|TREND|GROWTH|CORREL|SLOPE|INTERCEPT|RSQ|SUMX2MY2|SUMX2PY2|SUMXMY2|CTMC\..*)$/;

/** Parameters that take a single value although others of the same function take ranges, from 0. */
const SINGLE_PARAMETERS: Readonly<Record<string, readonly number[]>> = {
  VLOOKUP: [0, 2, 3], HLOOKUP: [0, 2, 3], MATCH: [0, 2], INDEX: [1, 2], COUNTIF: [1], SUMIF: [1], AVERAGEIF: [1], LARGE: [1], SMALL: [1], RANK: [0, 2], NPV: [0],
};

/** Puts the mark @ where the old reading takes one cell of a range. The formula comes and goes with its equals sign. */
export function markOldReading(formula: string): string {
  if (!/[:#]/.test(formula)) return formula;
  const marks: number[] = [];
  try {
    visit(parse(tokenize(formula, { withLocation: true }), { looseRefCalls: true }), "cell", marks);
  } catch {
    return formula;
  }
  return marks.sort((a, b) => b - a).reduce((text, at) => `${text.slice(0, at)}@${text.slice(at)}`, formula);
}

function visit(node: AstExpression | null, place: Place, marks: number[]): void {
  if (node === null) return;
  switch (node.type) {
    case "ReferenceIdentifier": {
      const rect = parseArea(splitSheet(node.value).address);
      if (place === "cell" && rect && rect.rows * rect.columns > 1 && node.loc) marks.push(node.loc[0]!);
      return;
    }
    case "UnaryExpression":
      if (node.operator !== "#" && node.operator !== "@") visit(node.arguments[0]!, place === "table" ? "table" : "cell", marks);
      return;
    case "BinaryExpression":
      if (node.operator === ":" || node.operator === " " || node.operator === ",") return;
      for (const side of node.arguments) visit(side, place === "table" ? "table" : "cell", marks);
      return;
    case "CallExpression": {
      const callee = node.callee as { type: string; name?: string };
      const name = callee.type === "Identifier" ? functionName(callee.name!) : "";
      const inside = place === "table" || TABLE_FUNCTIONS.test(name) ? "table" : SINGLE_VALUED.test(name) ? "cell" : "range";
      const single = SINGLE_PARAMETERS[name] ?? [];
      node.arguments.forEach((parameter, index) => visit(parameter as AstExpression | null, inside === "range" && single.includes(index) ? "cell" : inside, marks));
      return;
    }
    default:
      // LET and LAMBDA came together with spilling results; constants have nothing to mark.
      return;
  }
}
