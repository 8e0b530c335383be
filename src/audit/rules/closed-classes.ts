import { communicatingClasses } from "../../chain/classes";
import { Problem } from "../../chain/problem";
import { possibleArrows } from "../body";
import { rowSpan, stateName, type Rule } from "../context";
import { meansFinalAmong } from "../words";

/**
 * Two or more groups that are never left (mistake 18): long-run shares then depend on the start. A stop without a start, in the
 * words with which long-run formulas refuse; a note
 * where every such group is a single state under a final name (cured and dead: competing ends are no mistake). Silent with a start.
 * Cells that cannot be read count as arrows.
 */
export const closedClasses: Rule = (context) => {
  const { chain, body, layout, kind, start } = context;
  if (start || chain.arrowCount === 0 || kind === "columnsSum" || kind === "complement") return [];
  const { classes, closed } = communicatingClasses(possibleArrows(body));
  const ends = classes.filter((_, k) => closed[k]);
  if (ends.length < 2) return [];
  const final = ends.every((members) => members.length === 1 && meansFinalAmong(body.nameOf(members[0]), layout.names ?? []));
  const names = Array.from({ length: body.size }, (_, state) => stateName(context, state));
  const refusal = new Problem("severalClosedClasses", { classes: ends.map((members) => [...members]), names }, "noAnswer");
  return [
    {
      code: "closedClasses",
      ...(final ? {} : { problem: refusal }),
      severity: final ? "note" : "stop",
      span: rowSpan(context, ends[1][0]),
      also: ends.slice(2).map((members) => rowSpan(context, members[0])),
      details: { classes: ends.map((members) => [...members].map((state) => names[state])), final },
    },
  ];
};
