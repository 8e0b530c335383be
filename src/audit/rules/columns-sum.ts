import { bodySpan, type Rule } from "../context";

/**
 * The other convention, columns from and rows to (mistake 4). Seen where a given diagonal makes every column sum to zero
 * and not every row. Where nothing is given, only a person knows: `largestArrow` asks, and an answer "columns" ends here.
 */
export const columnsSum: Rule = (context) => {
  const answered = context.options.answers?.largestArrow === "columns";
  if (context.kind !== "columnsSum" && !answered) return [];
  return [{ code: "columnsSum", severity: "stop", span: bodySpan(context), remedy: "transposeCopy", details: { answered } }];
};
