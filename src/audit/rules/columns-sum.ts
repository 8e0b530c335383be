import { textOf } from "../body";
import { bodySpan, rowSpan, stateName, type Context, type Rule } from "../context";
import type { Finding } from "../finding";
import { meansFinalAmong, meansFrom, meansTo } from "../words";

/**
 * The other convention, columns from and rows to (mistake 4). Seen where a given diagonal makes every column sum to zero
 * and not every row, or where a list's headings say to before from; a warning where a state with a final name has several exits
 * and nothing leads to it. Else only a person knows: `largestArrow` asks, and an answer "columns" ends here.
 */
export const columnsSum: Rule = (context) => {
  const { cells, layout } = context;
  if (layout.form === "list" && layout.headings === "top") {
    const [first, second] = [textOf(cells[0]?.[0]), textOf(cells[0]?.[1])];
    if (meansTo(first) && meansFrom(second)) return [{ code: "listReversed", severity: "stop", span: { row: 0, column: 0, rows: 1, columns: 2 }, remedy: "transposeCopy", details: { first, second } }];
  }
  const answered = context.options.answers?.largestArrow === "columns";
  if (context.kind !== "columnsSum" && !answered) return seemsTransposed(context);
  return [{ code: "columnsSum", severity: "stop", span: bodySpan(context), remedy: "transposeCopy", details: { answered } }];
};

function seemsTransposed(context: Context): Finding[] {
  const { body, kind, options } = context;
  if (body.form === "list" || kind === "complement" || kind === "empty" || options.answers?.largestArrow === "right") return [];
  const state = finalWithoutEntry(context);
  if (state < 0) return [];
  return [{ code: "seemsTransposed", severity: "warning", span: rowSpan(context, state), remedy: "transposeCopy", details: { name: stateName(context, state) } }];
}

/**
 * A state with a final name that has two exits or more while no cell of its column holds anything; −1 where there is none. With one
 * exit it may as well be a repair whose failure was forgotten.
 */
export function finalWithoutEntry({ body, layout }: Context): number {
  if (body.form === "list") return -1;
  for (let state = 0; state < body.size; state++) {
    if (exitsOf(body, state) < 2 || !meansFinalAmong(body.nameOf(state), layout.names ?? [])) continue;
    let entered = false;
    for (let from = 0; from < body.size; from++) if (from !== state && body.values[from * body.size + state] !== 0) entered = true;
    if (!entered) return state;
  }
  return -1;
}

function exitsOf({ size, values }: Context["body"], state: number): number {
  let exits = 0;
  for (let to = 0; to < size; to++) if (to !== state && values[state * size + to] > 0) exits++;
  return exits;
}
