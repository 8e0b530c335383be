/** The number format that a formula's own form asks for: a date stays a date when days are added to it. */
import type { Expression } from "./expression";
import { readFormula } from "./formula";
import { isDateFormat } from "./number-format";

const DATES = new Set(["TODAY", "DATE", "EDATE", "EOMONTH", "WORKDAY", "DATEVALUE"]);

/** `formatAt` gives the format of a cell on the named sheet (null: the formula's own). */
export function impliedFormat(formula: string, formatAt: (sheetName: string | null, row: number, column: number) => string): string | null {
  const { expression } = readFormula(formula);
  return expression && formatOf(expression, formatAt);
}

function formatOf(expression: Expression, formatAt: (sheetName: string | null, row: number, column: number) => string): string | null {
  switch (expression.kind) {
    case "call":
      if (DATES.has(expression.name)) return "yyyy-mm-dd";
      return expression.name === "NOW" ? "yyyy-mm-dd hh:mm" : expression.name === "TIME" ? "hh:mm" : null;
    case "reference": {
      if (!expression.rect) return null;
      const format = formatAt(expression.sheetName, expression.rect.row, expression.rect.column);
      return isDateFormat(format) ? format : null;
    }
    case "unary":
      return expression.operator === "#" || expression.operator === "@" ? formatOf(expression.operand, formatAt) : null;
    case "binary": {
      if (expression.operator !== "+" && expression.operator !== "-") return null;
      const left = formatOf(expression.left, formatAt);
      const right = formatOf(expression.right, formatAt);
      // A date less a date is a number of days.
      if (left !== null && right !== null) return null;
      return expression.operator === "-" ? left : (left ?? right);
    }
    default:
      return null;
  }
}
