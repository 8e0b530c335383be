import type { Detail, Problem } from "../chain/problem";
import { ambiguousNumber } from "./words";
import { cellSpan, type Finding, type Span } from "./finding";

/**
 * The reader's problems as findings: a kind once, its first problem word for word, the other places beside it. What a formula refuses
 * is a stop. Mistakes 1, 3, 13, 14, 21 and 22 arrive here.
 */
export function findingsFrom(problems: readonly Problem[]): Finding[] {
  const byCode = new Map<string, Problem[]>();
  for (const problem of problems) {
    const same = byCode.get(problem.code);
    if (same) same.push(problem);
    else byCode.set(problem.code, [problem]);
  }
  return [...byCode.values()].map((same) => {
    const [first, ...others] = same;
    return {
      code: first.code,
      severity: "stop",
      span: spanOf(first),
      also: others.map(spanOf).filter((span): span is Span => span !== null),
      problem: first,
      remedy: remedyOf(same),
      details: { ...first.details, places: same.length, ...causeOf(first) },
    };
  });
}

const REMEDIES: Readonly<Record<string, string>> = {
  rowSum: "clearDiagonal",
  rowSumRounded: "clearDiagonal",
  diagonalPositive: "clearDiagonal",
  diagonalWithoutExits: "clearDiagonal",
};

function remedyOf(same: readonly Problem[]): string | undefined {
  if (same[0].code === "rateIsText") {
    return same.some((problem) => !ambiguousNumber(String(problem.details.found))) ? "convertText" : undefined;
  }
  if (same.some((problem) => problem.details.total)) return undefined; // probabilities: clearing the diagonal would pass them off as rates
  return REMEDIES[same[0].code];
}

/** Why a positive diagonal is likely positive: a minus sign that got lost. */
function causeOf(problem: Problem): Record<string, Detail> {
  const { given, exits } = problem.details;
  if (problem.code !== "diagonalPositive" || typeof given !== "number" || typeof exits !== "number") return {};
  return { lostMinus: Math.abs(given - exits) <= 1e-6 * exits };
}

/** The cells that a problem names in `details.span`; null where it concerns the whole range. */
export function spanOf(problem: Problem): Span | null {
  const span = problem.details.span;
  if (!Array.isArray(span)) return null;
  const [row, column, rows, columns] = span as number[];
  return rows === 1 && columns === 1 ? cellSpan(row, column) : { row, column, rows, columns };
}
