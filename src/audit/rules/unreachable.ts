import { communicatingClasses } from "../../chain/classes";
import type { Generator } from "../../chain/generator";
import { possibleArrows } from "../body";
import { rowSpan, stateName, type Context, type Rule } from "../context";
import { finalWithoutEntry } from "./columns-sum";
import { meansBeginning, meansFinal } from "../words";

/**
 * States that the chain never enters (mistake 15). With a start: what no path from it reaches. Without one the beginning is taken to
 * be the group without arrows in that holds the first state. A single state without arrows in that stands elsewhere may still be the
 * beginning: by its name ("As new"), in a list, whose order says nothing, or last in a table that puts its worst state first. One
 * finding for all. Cells that cannot be read count as arrows.
 */
export const unreachable: Rule = (context) => {
  const { chain, kind, start } = context;
  if (kind === "columnsSum" || kind === "complement" || chain.arrowCount === 0) return [];
  const turned = finalWithoutEntry(context); // reported as a table that seems transposed
  const unseen = (start ? beyond(context, start) : withoutEntry(context)).filter((state) => state !== turned);
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

function withoutEntry(context: Context): number[] {
  const chain = possibleArrows(context.body);
  const { classOf, classes } = communicatingClasses(chain);
  const entered = new Uint8Array(classes.length);
  for (const [from, to] of chain.arrows()) if (classOf[from] !== classOf[to]) entered[classOf[to]] = 1;
  const sources = classes.filter((_, k) => !entered[k]);
  const first = sources.find((members) => members.includes(0));
  if (sources.length === 1 && (first || mayBegin(context, sources[0]))) return [];
  return sources.filter((members) => members !== first).flatMap((members) => [...members]).sort((a, b) => a - b);
}

function mayBegin({ body, chain }: Context, members: Int32Array): boolean {
  const [state] = members;
  if (members.length > 1 || body.form === "list" || meansBeginning(body.nameOf(state))) return true;
  if (state !== body.size - 1) return false;
  let back = 0;
  let on = 0;
  for (const [from, to] of chain.arrows()) if (from !== state) {
    if (to < from) back++;
    else on++;
  }
  return chain.exitRate[0] === 0 || meansFinal(body.nameOf(0)) || back > on;
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
