import { nameOf } from "../chain/named";
import type { RateTable } from "./rate-table";

/** One difference: a state found on one side only, or an arrow whose rate differs. */
export type CompareRow =
  | { readonly kind: "onlyBefore" | "onlyAfter"; readonly state: string }
  | {
      readonly kind: "arrow";
      readonly from: string;
      readonly to: string;
      /** 0 where there was no arrow. */
      readonly before: number;
      /** 0 where there is none any more. */
      readonly after: number;
      /** after ÷ before: 0 for an arrow that is gone, `NaN` for a new one. */
      readonly ratio: number;
    };

type Side = Pick<RateTable, "generator" | "names">;

/**
 * What has changed between two tables?
 *
 * States are matched by name without regard to case and outer spaces, or by number where either table has no names.
 *
 * @param before - the earlier table
 * @param after - the later table
 * @returns states found on one side only, first those of `before`; then each arrow that differs, by row of `before` and then
 *   those only `after` has a place for; arrows of states found on one side only are listed too. Empty when nothing differs
 *
 * *Method*: rates are compared exactly; a table that was typed again with rounded rates differs.
 *
 * @example compareTables(read(first), read(second)) // [{ kind: "arrow", from: "up", to: "down", before: 1, after: 2, ratio: 2 }]
 */
export function compareTables(before: Side, after: Side): CompareRow[] {
  const named = before.names !== null && after.names !== null;
  const names = before.names ?? after.names;
  const keyOf = (side: Side, state: number): string => (named ? nameOf(side.names, state).trim().toLowerCase() : String(state));
  const textOf = (side: Side, state: number): string => nameOf(side.names ?? names, state);

  // one numbering for both: the states of `before`, then those only `after` has
  const numberOf = new Map<string, number>();
  const texts: string[] = [];
  const enter = (side: Side): Int32Array => Int32Array.from({ length: side.generator.size }, (_, state) => {
    const key = keyOf(side, state);
    const known = numberOf.get(key);
    if (known !== undefined) return known;
    numberOf.set(key, texts.push(textOf(side, state)) - 1);
    return texts.length - 1;
  });
  const [placeBefore, placeAfter] = [enter(before), enter(after)];
  const rows: CompareRow[] = [];
  const inAfter = new Set(placeAfter);
  placeBefore.forEach((place) => {
    if (!inAfter.has(place)) rows.push({ kind: "onlyBefore", state: texts[place] });
  });
  placeAfter.forEach((place) => {
    if (place >= placeBefore.length) rows.push({ kind: "onlyAfter", state: texts[place] });
  });

  const arrows = new Map<number, { before: number; after: number }>();
  const count = texts.length;
  for (const [from, to, rate] of before.generator.arrows())
    arrows.set(placeBefore[from] * count + placeBefore[to], { before: rate, after: 0 });
  for (const [from, to, rate] of after.generator.arrows()) {
    const key = placeAfter[from] * count + placeAfter[to];
    const found = arrows.get(key);
    if (found) found.after = rate;
    else arrows.set(key, { before: 0, after: rate });
  }
  for (const [key, arrow] of [...arrows].sort(([a], [b]) => a - b)) {
    if (arrow.before === arrow.after) continue;
    rows.push({
      kind: "arrow",
      from: texts[Math.floor(key / count)],
      to: texts[key % count],
      ...arrow,
      ratio: arrow.before === 0 ? NaN : arrow.after / arrow.before,
    });
  }
  return rows;
}
