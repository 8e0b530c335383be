import type { Finding } from "../finding";
import type { Aside, Recognised } from "../recognise";

/** A totals row or column inside the selection (mistake 19), told by its label or by its sums. Says which. */
export function totalsSelected({ asides, selection }: Recognised, span: (aside: Aside) => Finding["span"]): Finding[] {
  const totals = asides.filter((aside) => aside.role === "total");
  if (totals.length === 0) return [];
  const [first, ...others] = totals;
  return [
    {
      code: "totalsSelected",
      severity: "stop",
      span: span(first),
      also: others.map(span).filter((place) => place !== null),
      remedy: selection ? "narrowSelection" : undefined,
      details: {
        lines: totals.map((aside) => [aside.line, aside.index + 1, aside.label]),
      },
    },
  ];
}
