import type { Detail } from "../chain/problem";

export type Severity = "stop" | "warning" | "note";

/** Cells inside the audited range, from 0. */
export interface Span {
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
}

/** A finding is data: the sentence catalogue in `cells/sentences` words it, the pane offers its remedy. */
export interface Finding {
  /** Rule or problem code, such as "rowSum" or "totalsSelected". */
  readonly code: string;
  readonly severity: Severity;
  /** True where only a person can decide: the pane asks once, `CHECK` stays silent unless a severity is set by labels. */
  readonly asks?: boolean;
  readonly span: Span | null;
  readonly details: Readonly<Record<string, Detail>>;
  /** Code of an automatic remedy that the pane offers, such as "clearDiagonal". */
  readonly remedy?: string;
}
