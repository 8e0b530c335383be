import { Problem } from "../../chain/problem";
import { bodySpan, type Rule } from "../context";

/** Formulas about a time until something, which without targets mean the absorbing states. */
export const UNTIL: ReadonlySet<string> = new Set(["MEANABSORPTION", "ABSORPTIONSD", "ABSORPTIONPROB", "TIMEBEFORE", "QUASISTATIONARY"]);

/**
 * A time to failure asked of a table in which nothing is final, and no target named (mistake 17). Seen only where the formulas that
 * read the table are known; the formula itself refuses with the same sentence.
 */
export const noTarget: Rule = (context) => {
  const { chain, options, kind } = context;
  if (kind !== "rates") return [];
  for (let i = 0; i < chain.size; i++) if (chain.rowStart[i] === chain.rowStart[i + 1]) return [];
  const asking = (options.asked ?? []).filter((question) => UNTIL.has(question.name) && !question.hasTargets);
  if (asking.length === 0) return [];
  return [{ code: "noTarget", severity: "stop", problem: new Problem("noTargets"), span: bodySpan(context), details: { name: asking[0].name, where: asking[0].where, formulas: asking.length } }];
};
