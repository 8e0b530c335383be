/** A formula in its cell: its present value, what it reads, and where it stands in a recalculation. */
import type { Area, Rect } from "./address";
import type { Formula } from "./formula";
import type { Sheet } from "./sheet";
import { Fault, type Scalar, type Value } from "./value";

/** The value of a cell whose answer is on its way. */
export const BUSY = new Fault("#BUSY!");

/** Answers of custom functions that came later than asked, by the order of the calls in the formula. */
export interface LateAnswers {
  readonly answers: Map<number, Value>;
  readonly cancels: Set<() => void>;
}

export class FormulaCell {
  value: Scalar = null;
  /** Where the result is shown; one cell unless it spills. */
  extent: Rect;
  /** Areas filed in the index of readers. */
  reads: Area[] = [];
  /** The area that a result fills or wants to fill, filed in the index of watchers. */
  watched: Area | null = null;
  marked = false;
  /** The marked formulas that it waits for; null before the first attempt. */
  asked: readonly FormulaCell[] | null = null;
  /** Place among the formulas asked for, from 1; 0 when not asked for. */
  order = 0;
  /** The earliest place that the formulas it waits for lead back to. */
  low = 0;
  /** Waits only for formulas asked for earlier. */
  parked = false;
  rounds = 0;
  /** The cells it fills were filled in the present run. */
  spilledNow = false;
  late: LateAnswers | null = null;

  constructor(
    readonly sheet: Sheet,
    readonly row: number,
    readonly column: number,
    readonly formula: Formula,
  ) {
    this.extent = { row, column, rows: 1, columns: 1 };
  }

  forgetWait(): void {
    this.asked = null;
    this.order = this.low = 0;
    this.parked = false;
  }

  get area(): Area {
    return { sheet: this.sheet.id, ...this.extent };
  }
}
