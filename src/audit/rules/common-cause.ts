import { rowSpan, stateName, type Rule } from "../context";
import { unitsDown } from "./repair-pattern";

/**
 * No arrow from all units up to all units down (mistake 29): a shared cause is left out, or was found negligible. Either is the
 * planner's to state. Only where labels count the units.
 */
export const commonCause: Rule = (context) => {
  if (context.kind !== "rates") return [];
  const down = unitsDown(context);
  if (!down) return [];
  const allUp = down.indexOf(0);
  const allDown = down.indexOf(Math.max(...down));
  if (allUp < 0 || down[allDown] < 2 || context.chain.rateOf(allUp, allDown) > 0) return [];
  return [{ code: "commonCause", severity: "note", span: rowSpan(context, allUp), details: { upName: stateName(context, allUp), downName: stateName(context, allDown) } }];
};
