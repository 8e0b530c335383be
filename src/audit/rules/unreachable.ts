import { communicatingClasses } from "../../chain/classes";
import type { Generator } from "../../chain/generator";
import { possibleArrows } from "../body";
import { rowSpan, stateName, type Context, type Rule } from "../context";

/**
 * States that the chain never enters (mistake 15). With a start: what no path from it reaches. Without one a table has one beginning:
 * a single group without arrows in is taken for it, unless it is one state in the middle of a square table (worst state first is
 * common, the beginning in the middle is not; in a list the order says nothing). Of several such groups the one with the first state is the beginning; where none holds it, any may be.
 * One finding for all. Cells that cannot be read count as arrows.
 */
export const unreachable: Rule = (context) => {
  const { chain, kind, start } = context;
  if (kind === "columnsSum" || kind === "complement" || chain.arrowCount === 0) return [];
  const unseen = start ? beyond(context, start) : withoutEntry(context);
  if (unseen.length === 0) return [];
  const [span, ...also] = unseen.map((state) => rowSpan(context, state));
  return [
    {
      code: "unreachable",
      severity: "warning",
      span,
      also,
      details: { states: unseen, names: unseen.map((state) => stateName(context, state)), started: start !== null },
    },
  ];
};

function beyond({ body }: Context, start: Float64Array): number[] {
  const states = Array.from({ length: body.size }, (_, i) => i);
  const seen = reach(possibleArrows(body), states.filter((i) => start[i] > 0));
  return states.filter((i) => !seen[i]);
}

function withoutEntry({ body }: Context): number[] {
  const chain = possibleArrows(body);
  const { classOf, classes } = communicatingClasses(chain);
  const entered = new Uint8Array(classes.length);
  for (const [from, to] of chain.arrows()) if (classOf[from] !== classOf[to]) entered[classOf[to]] = 1;
  const sources = classes.filter((_, k) => !entered[k]);
  const first = sources.find((members) => members.includes(0));
  if (sources.length === 1 && (first || body.form === "list" || sources[0].length > 1 || sources[0].includes(body.size - 1))) return [];
  return sources.filter((members) => members !== first).flatMap((members) => [...members]).sort((a, b) => a - b);
}

function reach(chain: Generator, from: readonly number[]): Uint8Array {
  const seen = new Uint8Array(chain.size);
  const open = [...from];
  for (const state of open) seen[state] = 1;
  while (open.length > 0) {
    const state = open.pop()!;
    for (let k = chain.rowStart[state]; k < chain.rowStart[state + 1]; k++) {
      const next = chain.toState[k];
      if (!seen[next]) {
        seen[next] = 1;
        open.push(next);
      }
    }
  }
  return seen;
}
