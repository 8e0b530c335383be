import { communicatingClasses } from "../../chain/classes";
import { rowSpan, stateName, type Rule } from "../context";

/**
 * States that the chain never enters (mistake 15). With a start: what no path from it reaches. Without one: a table has one
 * beginning, wherever it stands in the list (worst state first is common), so a single group without arrows in is taken for
 * it; of several, the one that holds the first state, else the one that reaches most. States without any arrow, in or out, are
 * reported here once, and not again as having no exit.
 */
export const unreachable: Rule = (context) => {
  const { chain, kind, start } = context;
  if (kind === "columnsSum" || kind === "complement" || chain.arrowCount === 0) return [];
  const unseen = start ? beyond(chain.size, start, context) : withoutEntry(context);
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

function beyond(size: number, start: Float64Array, { chain }: Parameters<Rule>[0]): number[] {
  const seen = reach(chain, Array.from({ length: size }, (_, i) => i).filter((i) => start[i] > 0));
  return Array.from({ length: size }, (_, i) => i).filter((i) => !seen[i]);
}

function withoutEntry({ chain }: Parameters<Rule>[0]): number[] {
  const { classOf, classes } = communicatingClasses(chain);
  const entered = new Uint8Array(classes.length);
  for (const [from, to] of chain.arrows()) if (classOf[from] !== classOf[to]) entered[classOf[to]] = 1;
  const sources = classes.filter((_, k) => !entered[k]);
  if (sources.length < 2) return [];
  let beginning = sources.find((members) => members.includes(0));
  if (!beginning) {
    let most = -1;
    for (const members of sources) {
      const reached = reach(chain, [...members]).reduce((sum, one) => sum + one, 0);
      if (reached > most) [most, beginning] = [reached, members];
    }
  }
  return sources.filter((members) => members !== beginning).flatMap((members) => [...members]).sort((a, b) => a - b);
}

function reach(chain: Parameters<Rule>[0]["chain"], from: readonly number[]): Uint8Array {
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
