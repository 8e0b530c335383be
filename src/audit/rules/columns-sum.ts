import { textOf } from "../body";
import { bodySpan, type Rule } from "../context";
import { meansFrom, meansTo } from "../words";

/**
 * The other convention, columns from and rows to (mistake 4). Seen where a given diagonal makes every column sum to zero
 * and not every row, or where a list's headings say to before from. Else only a person knows: `largestArrow` asks, and an
 * answer "columns" ends here.
 */
export const columnsSum: Rule = (context) => {
  const { cells, layout } = context;
  if (layout.form === "list" && layout.headings === "top") {
    const [first, second] = [textOf(cells[0]?.[0]), textOf(cells[0]?.[1])];
    if (meansTo(first) && meansFrom(second)) return [{ code: "listReversed", severity: "stop", span: { row: 0, column: 0, rows: 1, columns: 2 }, remedy: "transposeCopy", details: { first, second } }];
  }
  const answered = context.options.answers?.largestArrow === "columns";
  if (context.kind !== "columnsSum" && !answered) return [];
  return [{ code: "columnsSum", severity: "stop", span: bodySpan(context), remedy: "transposeCopy", details: { answered } }];
};
