import type { Generator } from "../chain/generator";
import { Problem } from "../chain/problem";
import type { Cells, Layout, Reading } from "../table/rate-table";
import { generatorOf, readBody, textOf, type Body } from "./body";
import { cellSpan, type Finding, type Span } from "./finding";
import type { SheetFacts } from "./facts";
import { kindOf, type Kind } from "./kind";

/** A `CTMC.` formula that reads the audited table, as far as its text tells. */
export interface AskedQuestion {
  /** The function without its namespace, such as "MEANABSORPTION". */
  readonly name: string;
  /** Whether it names targets (or `up` states, or leaves both out). */
  readonly hasTargets: boolean;
  /** Whether it names a start. */
  readonly hasStart: boolean;
  /** Whether it names a time or horizon, readable or not. */
  readonly hasTimes: boolean;
  /** Times or horizons that it asks for, where they are numbers that could be read; empty else. */
  readonly times: readonly number[];
  /** Where the formula stands, such as "Plan!B4". */
  readonly where: string;
}

/** Another table of the workbook, for rules that compare two. */
export interface OtherTable {
  readonly where: string;
  readonly cells: Cells;
}

/** What the workbook's formulas take a range for, when that is not a table of rates. */
export interface OtherRole {
  readonly role: "probabilities" | "counts" | "costs" | "resets";
  /** The function that says so, and where it stands. */
  readonly name: string;
  readonly where: string;
}

export interface AuditOptions {
  /** Where the chain starts: n probabilities; or the `Problem` met in reading it, which becomes a stop. */
  readonly start?: Float64Array | Problem | null;
  /** What only the pane sees. */
  readonly facts?: SheetFacts;
  /** Answers of the person by question code. Left out: there is nobody to ask, and no question is among the findings. */
  readonly answers?: Readonly<Record<string, string>>;
  readonly asked?: readonly AskedQuestion[];
  readonly others?: readonly OtherTable[];
  /** Set where formulas read the range and none takes it for rates: it is then not judged as rates. */
  readonly role?: OtherRole;
}

/** All that a rule may look at. */
export interface Context {
  readonly cells: Cells;
  readonly reading: Reading;
  readonly layout: Layout;
  readonly body: Body;
  readonly kind: Kind;
  /** The chain of the readable, positive rates, faults left out. */
  readonly chain: Generator;
  readonly options: AuditOptions;
  /** Probabilities to start with, when one was given. */
  readonly start: Float64Array | null;
  /** Labels that speak about the whole table: corner, list headings, title above, unit and note lines. Not the states. */
  readonly captions: readonly string[];
}

/** A rule looks at one kind of mistake and reports it once, with every place. */
export type Rule = (context: Context) => readonly Finding[];

/** A rule about the sheet around and under the numbers, which needs no table that can be read. */
export type SheetRule = (input: { readonly cells: Cells; readonly layout: Layout | null; readonly facts: SheetFacts }) => readonly Finding[];

export function contextOf(cells: Cells, reading: Reading, layout: Layout, options: AuditOptions, aside: readonly string[] = []): Context {
  const body = readBody(cells, layout);
  return {
    cells,
    reading,
    layout,
    body,
    kind: kindOf(body),
    chain: generatorOf(body),
    options,
    start: options.start && !(options.start instanceof Problem) && options.start.length === layout.size ? options.start : null,
    captions: [...captionsOf(cells, layout, options.facts), ...aside].filter((text) => text !== ""),
  };
}

function captionsOf(cells: Cells, layout: Layout, facts: SheetFacts | undefined): string[] {
  const filled = (facts?.neighbours?.above ?? []).map(textOf).filter((text) => text !== "");
  const above = filled.length === 1 ? filled : []; // a title; several cells belong to something else
  if (layout.form === "list") return [...above, ...(layout.headings === "top" ? (cells[0] ?? []).map(textOf) : [])];
  return layout.headings === "both" ? [...above, textOf(cells[0]?.[0])] : above;
}

/** The cell of one entry; for a pair that a list does not hold, the first arrow row. */
export function entrySpan({ body, layout }: Context, from: number, to: number): Span {
  const place = body.placeOf(from, to);
  return place ? cellSpan(place.row, place.column) : cellSpan(layout.body.row, layout.body.column);
}

/** The whole row of a state in square form; the first arrow that leaves it, or names it, in a list. */
export function rowSpan(context: Context, state: number): Span {
  const { body, layout } = context;
  if (body.form === "square") {
    return { row: layout.body.row + state, column: layout.body.column, rows: 1, columns: layout.size };
  }
  const first = body.firstPlaceOf?.(state);
  if (first) return { row: first.row, column: layout.body.column, rows: 1, columns: 3 };
  for (const [from, to] of pairsWith(body.size, state)) {
    const place = body.placeOf(from, to);
    if (place) return { row: place.row, column: layout.body.column, rows: 1, columns: 3 };
  }
  return bodySpan(context);
}

/** The cells of one line of the diagonal, or all of the table's body. */
export function bodySpan({ layout }: Context): Span {
  return layout.body;
}

function* pairsWith(size: number, state: number): Iterable<[number, number]> {
  for (let k = 0; k < size; k++) yield [state, k];
  for (let k = 0; k < size; k++) yield [k, state];
}

/** "Degraded", or "State 3" where the table has no names. */
export function stateName({ body }: Context, state: number): string {
  return body.nameOf(state) || `State ${state + 1}`;
}
