import { communicatingClasses } from "../../chain/classes";
import { rowSpan, stateName, type Context, type Rule } from "../context";
import { UNTIL } from "./no-target";
import { meansFinalAmong, unitsIn } from "../words";

/**
 * A row without exits whose label does not sound final (mistake 16): a forgotten repair, or a final state under a name that the
 * audit does not know. Without names nothing can be told from such a row: a note, and so it is for a mere code ("S4") at the end of a
 * chain that never returns to any state, such as wear without repair. The only such state is meant where a formula waits for it without naming targets; of several, one may be
 * the mistake that such a formula takes for an end. A table without any arrow is one finding.
 */
export const noExit: Rule = (context) => {
  const { chain, body, kind, layout, options } = context;
  if (kind === "columnsSum" || kind === "complement") return [];
  const entered = new Uint8Array(chain.size);
  for (const [, to] of chain.arrows()) entered[to] = 1;
  if (chain.arrowCount === 0) {
    if (context.reading.problems.length > 0) return [];
    return [{ code: "noArrows", severity: "warning", span: layout.body, details: { states: chain.size } }];
  }
  const ends: number[] = [];
  for (let i = 0; i < chain.size; i++)
    if (chain.rowStart[i] === chain.rowStart[i + 1] && !unreadableRow(context, i) && entered[i]) ends.push(i);
  if (ends.length === 1 && options.asked?.some(({ name, hasTargets }) => UNTIL.has(name) && !hasTargets)) return [];
  const named = layout.names !== null && !(ends.every((state) => saysNothing(body.nameOf(state))) && neverReturns(chain));
  const doubtful = layout.names !== null ? ends.filter((state) => !meansFinalAmong(body.nameOf(state), layout.names ?? []) && !allDown(context, state)) : ends;
  if (doubtful.length === 0) return [];
  const [span, ...also] = doubtful.map((state) => rowSpan(context, state));
  return [
    {
      code: "noExit",
      severity: named ? "warning" : "note",
      span,
      also,
      details: { states: doubtful, names: doubtful.map((state) => stateName(context, state)), named },
    },
  ];
};

/** "3 down" of three units in a group without any repair is final by design, such as a group with no crew. */
function allDown(context: Context, state: number): boolean {
  if (context.body.long) return false;
  const counts = Array.from({ length: context.body.size }, (_, i) => unitsIn(context.body.nameOf(i)));
  if (counts.some((count) => count === null)) return false;
  const down = counts.map((count) => (count!.down ? count!.count : -count!.count));
  if (down[state] !== Math.max(...down)) return false;
  for (const [from, to] of context.chain.arrows()) if (down[to] < down[from]) return false;
  return true;
}

function saysNothing(name: string): boolean {
  return !/\p{L}{3,}/u.test(name.replace(/\b(state|stage|level|step|class|grade|node)\b/giu, ""));
}

function neverReturns(chain: Context["chain"]): boolean {
  return communicatingClasses(chain).classes.length === chain.size;
}

function unreadableRow({ body }: Context, state: number): boolean {
  for (let j = 0; j < body.size; j++) if (Number.isNaN(body.values[state * body.size + j]) || body.values[state * body.size + j] < 0) return true;
  return false;
}
