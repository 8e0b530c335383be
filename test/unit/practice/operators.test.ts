import { describe, expect, test } from "vitest";
import { evaluate } from "./formulas.helper";

/**
 * Sources: [OF] OASIS Open Document Format for Office Applications, part "Recalculated Formula (OpenFormula)", section on
 * infix operators and their precedence; [ECMA] ECMA-376 part 1, 18.17.2 (operators) and 18.17.4 (dates and times).
 * The section numbers are from memory. [arithmetic] marks what follows from the numbers alone.
 */
const facts: readonly [formula: string, value: unknown, source: string][] = [
  ["=-2^2", 4, "OF, ECMA: the sign before a number binds tighter than ^"],
  ["=0-2^2", -4, "OF: subtraction binds looser than ^"],
  ["=1-2^2", -3, "OF: the same without a space"],
  ["=2^3^2", 64, "OF: operators of one rank go from left to right, ^ too"],
  ["=2^-1", 0.5, "OF: a sign may follow an operator"],
  ["=10%^2", 10 ** -2 * 1.0000000000000002, "OF: percent binds tighter than ^"],
  ["=-2%", -0.02, "arithmetic"],
  ["=50%%", 0.005, "OF: percent may be repeated"],
  ["=1+2*3", 7, "arithmetic"],
  ["=8/4/2", 1, "OF: from left to right"],
  ["=7-4-2", 1, "OF: from left to right"],
  ["=1&2+3", "15", "OF: & binds looser than +"],
  ["=1&2=12", false, "OF: comparison binds loosest, and text is no number"],
  ['=1&2="12"', true, "OF"],
  ["=1+1=2", true, "OF"],
  ["=1=1=1", false, "OF: from left to right, and TRUE is no number"],
  ['="a"="A"', true, "ECMA: comparing text does not see capitals"],
  ['="a"<"b"', true, "ECMA"],
  ['=1<"a"', true, "common practice: numbers come before text"],
  ['="z"<FALSE', true, "common practice: text comes before logical values"],
  ["=FALSE<TRUE", true, "ECMA"],
  ["=TRUE+1", 2, "ECMA: TRUE counts 1 in arithmetic"],
  ['="3"*"4"', 12, "ECMA: text that reads as a number is one in arithmetic"],
  ['=--"3"', 3, "common practice"],
  ["=1/0", "#DIV/0!", "ECMA"],
  ["=0/0", "#DIV/0!", "ECMA"],
  ["=1E308*10", "#NUM!", "ECMA: a result that no cell holds"],
  ['="abc"+1', "#VALUE!", "ECMA"],
  ["=(-8)^(1/3)", "#NUM!", "arithmetic: no real value"],
  ["=#N/A+1/0", "#N/A", "common practice: the first error wins"],
  ["={1,2;3,4}+{10;20}", [[11, 12], [23, 24]], "OF: a column is repeated"],
  ["={1,2}*{1;2}", [[1, 2], [2, 4]], "OF: row by column"],
  ["={1,2,3}+{1,2}", [[2, 4, "#N/A"]], "OF: no partner is #N/A"],
  ["=-{1,2}", [[-1, -2]], "OF"],
  ["={1,2}%", [[0.01, 0.02]], "OF"],
  ['={1,2}&"x"', [["1x", "2x"]], "OF"],
  ["={1,2}={1,3}", [[true, false]], "OF"],
  ["=SUM(A1:B2 B1:C1)", 10, "OF: a space takes what ranges have in common"],
  ["=A1 B2", "#NULL!", "ECMA: nothing in common"],
  ["=SUM(B2:A1)", 33, "ECMA: corners in any order"],
  ["=SUM(A:A)", 3, "ECMA: whole columns"],
  ["=SUM(1:1)", 11, "ECMA: whole rows"],
  ["=C9", 0, "common practice: a lone blank shows as 0"],
  ['=C9=""', true, "common practice: a blank equals an empty text"],
  ["=C9=0", true, "common practice: and 0"],
  ['=C9&"x"', "x", "common practice"],
  ["=Sheet1!A1+'Sheet1'!A2", 3, "ECMA: sheet names with and without quotes"],
  ["=Nowhere!A1", "#REF!", "ECMA"],
  ['="he said ""so"""', 'he said "so"', "ECMA: a quote in text is doubled"],
];

describe("operators", () => {
  for (const [formula, value, source] of facts) {
    test(`${formula} (${source})`, () => {
      expect(evaluate(formula, { A1: 1, A2: 2, B1: 10, B2: 20 })).toEqual(value);
    });
  }
});

test("@ takes the cell level with the formula", () => {
  expect(evaluate("=@A:A", { A100: 7 })).toBe(7);
  expect(evaluate("=@A1:A3", { A1: 1 })).toBe("#VALUE!");
});
