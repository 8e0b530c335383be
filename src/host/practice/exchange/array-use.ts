/**
 * Which formulas a file must mark as able to spill. A formula without the mark is read by today's programs as one of
 * old, in which an operator meeting a range takes the one cell level with it; the mark does no harm where it is not needed.
 */
import type { Expression } from "../engine/expression";
import { readFormula } from "../engine/formula";

/** Functions that take whole ranges as they are and give one value. */
const AGGREGATES = new Set(
  (
    "SUM PRODUCT SUMSQ AVERAGE MIN MAX MEDIAN STDEV STDEV.S STDEV.P VAR VAR.S VAR.P GEOMEAN HARMEAN AVEDEV SKEW KURT COUNT COUNTA COUNTBLANK SUMPRODUCT SUMXMY2 CORREL SLOPE " +
    "INTERCEPT RSQ NPV IRR GCD LCM AND OR XOR " +
    "ROWS COLUMNS MDETERM"
  ).split(" "),
);

/** Functions whose results are single values when their arguments are. */
export const SINGLE_VALUED = /^(ABS|SIGN|SQRT|EXP|LN|LOG|LOG10|POWER|INT|TRUNC|ROUND|ROUNDUP|ROUNDDOWN|CEILING|FLOOR|MROUND|MOD|QUOTIENT|PI|IF|IFERROR|IFNA|NOT|TRUE|FALSE|NA|IS[A-Z]+|N|T|TODAY|NOW|DATE|TIME|YEAR|MONTH|DAY|HOUR|MINUTE|SECOND|WEEKDAY|EDATE|EOMONTH|DAYS|TEXT|LEN|LEFT|RIGHT|MID|UPPER|LOWER|TRIM|FIND|SEARCH|SUBSTITUTE|REPLACE|VALUE|CONCATENATE|SIN|COS|TAN|RAND|RANDBETWEEN|PMT|PV|FV|NPER|RATE)$/;

export function mayUseArrays(formula: string): boolean {
  const { expression } = readFormula(formula);
  return expression !== null && (isTable(expression) || usesTables(expression));
}

/** True where the expression may give more than one value. */
function isTable(expression: Expression): boolean {
  switch (expression.kind) {
    case "literal": return false;
    case "reference": return expression.rect !== null && expression.rect.rows * expression.rect.columns > 1;
    case "unary": return expression.operator === "#" || (expression.operator !== "@" && isTable(expression.operand));
    case "binary": return expression.operator === ":" || isTable(expression.left) || isTable(expression.right);
    case "call":
      if (AGGREGATES.has(expression.name)) return false;
      return !SINGLE_VALUED.test(expression.name) || expression.parameters.some((entry) => entry !== null && isTable(entry));
    default: return true;
  }
}

/** True where something inside works on tables although the whole gives one value. */
function usesTables(expression: Expression): boolean {
  switch (expression.kind) {
    case "unary": return usesTables(expression.operand);
    case "binary": return isTable(expression) || usesTables(expression.left) || usesTables(expression.right);
    case "call":
      return expression.parameters.some((entry) => entry !== null && (usesTables(entry) || (isTable(entry) && entry.kind !== "reference")));
    default: return false;
  }
}
