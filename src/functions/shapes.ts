import { cellsFrom, checkSpillWith, withHeadings, type Answer } from "../cells/answer";
import { readFlag, type Argument } from "../cells/argument";
import type { NumberRange } from "../cells/numbers";
import { labelsOf } from "../cells/states";
import type { Problem } from "../chain/problem";
import type { RateTable } from "../table/rate-table";

type States = Pick<RateTable, "names" | "size">;
type Missing = (row: number, column: number, value: number) => Problem;

/**
 * The shapes that answers spill in. Each is made before the question is asked, so that a spill which the host cannot show
 * is refused before any work, and turned into cells by the answer.
 */

/** n × n, from-states down and to-states across; names on top and on the left. */
export function square(states: States, headings: Argument): (values: ArrayLike<number>, missing?: Missing) => Answer {
  return table(states.size, states.size, headings, () => ({ top: labelsOf(states), left: labelsOf(states) }));
}

/** 1 × n under the to-states; names on top. */
export function row(states: States, headings: Argument): (values: ArrayLike<number>, missing?: Missing) => Answer {
  return table(1, states.size, headings, () => ({ top: labelsOf(states), left: null }));
}

/** n × 1 beside the from-states; names on the left. */
export function column(states: States, headings: Argument): (values: ArrayLike<number>, missing?: Missing) => Answer {
  return table(states.size, 1, headings, () => ({ top: null, left: labelsOf(states) }));
}

/** Any other shape with its own headings. */
export function table(
  rows: number,
  columns: number,
  headings: Argument,
  lines: () => { top: readonly string[] | null; left: readonly (string | number)[] | null },
): (values: ArrayLike<number>, missing?: Missing) => Answer {
  const { top, left } = readFlag(headings, "headings") ? lines() : { top: null, left: null };
  checkSpillWith(true, rows, columns, { top: top !== null, left: left !== null });
  return (values, missing) => withHeadings(cellsFrom(values, rows, columns, missing), top, left);
}

/** The shape of the range that was asked for. */
export function asGiven({ rows, columns }: NumberRange): (values: ArrayLike<number>, missing?: Missing) => Answer {
  checkSpillWith(false, rows, columns, {});
  return (values, missing) => cellsFrom(values, rows, columns, missing);
}

/** Rows of equal length, one after another. */
export function joined(rows: readonly Float64Array[]): Float64Array {
  const width = rows[0]?.length ?? 0;
  const all = new Float64Array(rows.length * width);
  rows.forEach((values, i) => all.set(values, i * width));
  return all;
}
