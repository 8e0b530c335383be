import { entrySpan, stateName, type Context, type Rule } from "../context";
import type { Finding } from "../finding";
import { unitsIn } from "../words";

/**
 * What the rates of a group of like units say about crews and units (mistake 28), as sentences to agree or disagree with: repairs at
 * μ, 2μ, 3μ mean as many crews as units down; failures at one rate, however many still run, ignore the number of units. A warning only
 * for the latter, and only where labels count units down or up: queues have equal arrivals. One repair that mends several units at once is noted.
 */
export const repairPattern: Rule = (context) => {
  if (context.kind !== "rates") return [];
  const levels = unitsDown(context);
  const labelled = levels !== null;
  const down = levels ?? birthDeathLevels(context);
  if (!down || isQueue(context)) return [];
  const { chain } = context;
  const failures: Step[] = [];
  const repairs: Step[] = [];
  const skips: Step[] = [];
  for (const [from, to, rate] of chain.arrows()) {
    const step = down[to] - down[from];
    if (step === 1) failures.push({ from, to, rate, level: down[from] });
    if (step === -1) repairs.push({ from, to, rate, level: down[from] });
    if (step < -1) skips.push({ from, to, rate, level: down[from] });
  }
  const findings: Finding[] = [];
  const report = (code: string, severity: "warning" | "note", steps: readonly Step[], details: Finding["details"]): void => {
    const [span, ...also] = steps.map((step) => entrySpan(context, step.from, step.to));
    findings.push({ code, severity, span, also, details });
  };
  if (oneALevel(failures) && failures.length >= 2 && failures.every((step) => same(step.rate, failures[0].rate))) {
    report("failuresIgnoreUnits", labelled ? "warning" : "note", failures, { rate: failures[0].rate, labelled });
  }
  const unit = repairs.find((step) => step.level === 1)?.rate;
  if (unit !== undefined && oneALevel(repairs) && repairs.length >= 2 && repairs.every((step) => same(step.rate, step.level * unit))) {
    report("crewsUnlimited", "note", repairs, { rate: unit, most: Math.max(...repairs.map((step) => step.level)) });
  }
  if (labelled && skips.length > 0) {
    report("repairMendsSeveral", "note", skips, { fromName: stateName(context, skips[0].from), toName: stateName(context, skips[0].to), arrows: skips.length });
  }
  return findings;
};

interface Step {
  readonly from: number;
  readonly to: number;
  readonly rate: number;
  readonly level: number;
}

/** Units down in each state by the labels; null where not every label counts units, or two states count the same. */
export function unitsDown({ body }: Pick<Context, "body">): number[] | null {
  const counts = Array.from({ length: body.size }, (_, i) => unitsIn(body.nameOf(i)));
  if (body.size < 3 || counts.some((count) => count === null)) return null;
  const allDown = counts.every((count) => count!.down);
  const allUp = counts.every((count) => !count!.down);
  if (!allDown && !allUp) return null;
  const finite = counts.map((count) => count!.count).filter(Number.isFinite);
  const most = counts.some((count) => count!.count === Infinity) ? Math.max(...finite) + 1 : Math.max(...finite);
  const levels = counts.map((count) => Math.min(count!.count, most)).map((count) => (allDown ? count : most - count));
  return new Set(levels).size === levels.length ? levels : null;
}

/** The states in their order when arrows join neighbours only, both ways: a birth-death table. */
function birthDeathLevels({ chain }: Context): number[] | null {
  if (chain.size < 3 || chain.arrowCount !== 2 * (chain.size - 1)) return null;
  for (const [from, to] of chain.arrows()) if (Math.abs(from - to) !== 1) return null;
  return Array.from({ length: chain.size }, (_, i) => i);
}

function isQueue({ body, captions }: Context): boolean {
  const words = /\b(present|queue|waiting|in system|level|customers?|calls?|jobs?|orders?|callers?|patients?|arrivals?|occupied|busy|tickets?|stock|in use)\b/iu;
  return captions.some((text) => words.test(text)) || Array.from({ length: body.size }, (_, i) => body.nameOf(i)).some((name) => words.test(name));
}

function oneALevel(steps: readonly Step[]): boolean {
  return new Set(steps.map((step) => step.level)).size === steps.length;
}

function same(a: number, b: number): boolean {
  return Math.abs(a - b) <= 1e-6 * Math.max(a, b);
}
