import { communicatingClasses } from "../../chain/classes";
import { distributions } from "../../chain/distribution";
import { stationaryShares } from "../../chain/stationary";
import { bodySpan, stateName, type Rule } from "../context";

/** Formulas that give long-run figures when no time is given. */
const LONG_RUN = new Set(["STATIONARY", "UPDOWN", "FLOWS", "COSTRATE", "AVAILABILITY"]);

/**
 * Long-run figures used for a date at which the long run has not come (mistake 30): the formulas that read the table ask for both, and
 * at the latest date some state's share still differs by more than 1 % of the time.
 */
export const longRun: Rule = (context) => {
  const { chain, options, kind, layout, start } = context;
  const asked = options.asked ?? [];
  const whole = asked.find((question) => LONG_RUN.has(question.name) && !question.hasTimes);
  const times = asked.flatMap((question) => (question.name === "COST" || question.name === "COSTUNTIL" ? [] : question.times)).filter((time) => time > 0);
  if (!whole || times.length === 0 || kind !== "rates" || chain.size > 200 || !context.reading.table) return [];
  if (communicatingClasses(chain).closed.filter(Boolean).length !== 1) return [];
  const time = Math.max(...times);
  const begin = start ?? Float64Array.from({ length: layout.size }, (_, i) => (i === 0 ? 1 : 0));
  const [then] = distributions(chain, begin, [time]);
  const last = stationaryShares(chain);
  let worst = 0;
  for (let i = 1; i < chain.size; i++) if (Math.abs(then[i] - last[i]) > Math.abs(then[worst] - last[worst])) worst = i;
  if (!(Math.abs(then[worst] - last[worst]) > 0.01)) return [];
  return [
    {
      code: "longRunNotReached",
      severity: "note",
      span: bodySpan(context),
      details: { time, name: stateName(context, worst), then: then[worst], last: last[worst], where: whole.where },
    },
  ];
};
