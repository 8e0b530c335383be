import type { Generator } from "../chain/generator";
import type { Problem } from "../chain/problem";

/** A cell as it reaches a function or the audit. Error cells arrive as a `CellFault`. */
export type CellValue = number | string | boolean | null | CellFault;

export interface CellFault {
  readonly fault: string; // "#DIV/0!", "#N/A", …
}

export type Cells = readonly (readonly CellValue[])[];

/** A cell inside the given range, from 0, headings and margins counted. */
export interface Place {
  readonly row: number;
  readonly column: number;
}

/** What the range was taken for, before any rate is judged. */
export interface Layout {
  readonly form: "square" | "list";
  readonly headings: "both" | "top" | "left" | "none";
  /** Where the body (square form) or the first arrow row (list form) begins, and its extent, in the given range. */
  readonly body: { readonly row: number; readonly column: number; readonly rows: number; readonly columns: number };
  readonly size: number;
  /** State names; null where the table has none ("State 1" is then used where text is needed). */
  readonly names: readonly string[] | null;
}

export interface TableArrow {
  readonly from: number;
  readonly to: number;
  readonly rate: number;
  readonly place: Place;
}

export interface RateTable extends Layout {
  readonly generator: Generator;
  readonly arrows: readonly TableArrow[];
  /** The diagonal as given, one entry a state; null where blank, zero-with-exits or dash (worked out). Empty for lists. */
  readonly givenDiagonal: readonly (number | null)[];
}

/**
 * A range read as far as it can be: the layout, everything wrong with it in the order in which a formula would
 * refuse, and the table when nothing is. `readRateTable` throws `problems[0]`; the audit lists them all.
 */
export interface Reading {
  readonly layout: Layout | null;
  readonly problems: readonly Problem[];
  readonly table: RateTable | null;
}
