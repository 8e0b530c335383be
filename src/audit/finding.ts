import type { Detail, Problem } from "../chain/problem";

export type Severity = "stop" | "warning" | "note";

/** Cells inside the audited range, from 0. May lie outside it (negative, or beyond the last) where a rule speaks of neighbours. */
export interface Span {
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
}

/** Where a finding is, in the table's own terms: states where the span is rates, lines of the range elsewhere. Numbers from 1. */
export interface Whereabouts {
  readonly row?: number;
  readonly rowName?: string;
  readonly column?: number;
  readonly columnName?: string;
  /** True where row and column count the lines of the given range, headings included. */
  readonly inRange?: boolean;
  /** True for the heading of that row or column. */
  readonly heading?: boolean;
}

/** A finding is data: the sentence catalogue in `cells/sentences` words it, the pane offers its remedy. */
export interface Finding {
  /** Rule or problem code, such as "rowSum" or "totalsSelected". */
  readonly code: string;
  readonly severity: Severity;
  /** True where only a person can decide: the pane asks once, `CHECK` stays silent unless a severity is set by labels. */
  readonly asks?: boolean;
  readonly span: Span | null;
  readonly where?: Whereabouts;
  readonly details: Readonly<Record<string, Detail>>;
  /** Code of an automatic remedy that the pane offers, such as "clearDiagonal". */
  readonly remedy?: string;
  /** Set where a formula refuses this range with the same sentence. */
  readonly problem?: Problem;
  /** Further places of the same kind: a kind is reported once. */
  readonly also?: readonly Span[];
}

export function cellSpan(row: number, column: number): Span {
  return { row, column, rows: 1, columns: 1 };
}
