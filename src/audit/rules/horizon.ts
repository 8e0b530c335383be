import { bodySpan, type Rule } from "../context";

/**
 * A time in another unit than the rates (mistake 12): over the time asked for, the fastest state would leave less than once in a
 * thousand cases, or more than a million times. Needs the formulas that read the table.
 */
export const horizon: Rule = (context) => {
  const { chain, options, kind } = context;
  const fastest = chain.largestExit();
  if (kind !== "rates" || fastest === 0) return [];
  for (const question of options.asked ?? []) {
    const times = question.times.filter((time) => time > 0);
    if (times.length === 0) continue;
    const longest = Math.max(...times);
    const shortest = Math.min(...times);
    const time = longest * fastest < 1e-3 ? longest : shortest * fastest > 1e6 ? shortest : null;
    if (time === null) continue;
    return [{ code: "horizonUnit", severity: "warning", span: bodySpan(context), details: { time, where: question.where, jumps: time * fastest } }];
  }
  return [];
};
