import { isEmpty, numberInText } from "../table/cell";
import type { Cells, CellValue, Layout, Reading } from "../table/rate-table";
import { cellName, rangeName, sheetPrefix } from "./a1";
import { readBody, type Body } from "./body";
import type { SheetFacts } from "./facts";
import type { Finding, Span } from "./finding";
import { lineSum } from "./kind";
import { recognise } from "./recognise";
import { ambiguousNumber } from "./words";

/** One cell before and after, in the audited range. `after`: a number, a formula, or null to clear. */
export interface Change {
  readonly row: number;
  readonly column: number;
  readonly before: string;
  readonly after: number | string | null;
  /** What a formula in `after` will show. */
  readonly shows?: number;
}

/** What can be done about a finding with one click, as data. Nothing is done before the click, and all of it is one undo step. */
export type Remedy =
  | { readonly code: string; readonly kind: "cells"; readonly changes: readonly Change[] }
  /** A table to be written beside the old one; strings that begin with "=" are formulas. */
  | { readonly code: string; readonly kind: "newTable"; readonly table: readonly (readonly (number | string | null)[])[] }
  /** Another selection, relative to the audited range; may reach outside it. */
  | { readonly code: string; readonly kind: "selection"; readonly range: Span };

export interface RemedyInput {
  readonly cells: Cells;
  readonly reading: Reading;
  readonly facts?: SheetFacts;
  /** Where the range's first cell stands: formulas then refer to the cells instead of copying their values. */
  readonly at?: { readonly sheet: string; readonly row: number; readonly column: number };
}

type Maker = (input: RemedyInput & { readonly layout: Layout; readonly body: Body }) => Remedy | null;

/** The automatic remedy of a finding, or null where only a person can mend it. */
export function remedyFor(finding: Finding, input: RemedyInput): Remedy | null {
  const code = finding.remedy;
  if (!code) return null;
  if (code === "narrowSelection") {
    const selection = recognise(input.cells)?.selection;
    return selection ? { code, kind: "selection", range: selection } : null;
  }
  if (code === "widenSelection") {
    const [row, column, rows, columns] = (finding.details.range ?? []) as readonly number[];
    return rows === undefined ? null : { code, kind: "selection", range: { row, column, rows, columns } };
  }
  const inner = input.reading.layout ? null : recognise(input.cells);
  const layout = input.reading.layout ?? inner?.reading.layout;
  const maker = MAKERS[code];
  if (!maker || !layout) return null;
  if (!inner) return maker({ ...input, layout, body: readBody(input.cells, layout) });
  const at = input.at && inner.selection ? { ...input.at, row: input.at.row + inner.rows[0], column: input.at.column + inner.columns[0] } : undefined;
  const made = maker({ cells: inner.cells, reading: inner.reading, at, layout, body: readBody(inner.cells, layout) });
  if (made?.kind !== "cells") return made;
  return { ...made, changes: made.changes.map((change) => ({ ...change, row: inner.rows[change.row], column: inner.columns[change.column] })) };
}

const MAKERS: Readonly<Record<string, Maker>> = {
  /** A formula where the place is known: a value would be wrong as soon as a rate changes. */
  fillDiagonal: ({ cells, layout, body, at }) => {
    if (body.form === "list") return null;
    const changes: Change[] = [];
    for (let i = 0; i < body.size; i++) {
      if (body.exits[i] === 0 || body.values[i * body.size + i] !== 0) continue;
      const row = layout.body.row + i;
      const column = layout.body.column + i;
      const shows = -body.exits[i];
      const after = at ? `=-SUM(${aroundDiagonal(at.row + row, at.column + layout.body.column, i, body.size)})` : shows;
      changes.push({ row, column, before: shown(cells[row]?.[column]), after, ...(at ? { shows } : {}) });
    }
    return some({ code: "fillDiagonal", kind: "cells", changes });
  },

  clearDiagonal: ({ cells, layout, body }) => {
    const changes: Change[] = [];
    for (let i = 0; i < body.size; i++) {
      const row = layout.body.row + i;
      const column = layout.body.column + i;
      if (!isEmpty(cells[row]?.[column] ?? null)) changes.push({ row, column, before: shown(cells[row]?.[column]), after: null });
    }
    return some({ code: "clearDiagonal", kind: "cells", changes });
  },

  convertText: ({ cells, layout, reading }) => {
    const changes: Change[] = [];
    for (const problem of reading.problems) {
      if (problem.code !== "rateIsText") continue;
      const [row, column] = problem.details.span as readonly number[];
      const text = String(cells[row][column]);
      const value = ambiguousNumber(text) ? null : numberInText(text);
      if (value !== null) changes.push({ row, column, before: text, after: value });
    }
    return layout.size > 0 ? some({ code: "convertText", kind: "cells", changes }) : null;
  },

  dividePercent: (input) => eachNumber(input, "dividePercent", (value) => clean(value / 100), "/100"),

  rescaleRows: (input) => {
    const sums = Array.from({ length: input.body.size }, (_, i) => lineSum(input.body, i, true).sum);
    return eachNumber(input, "rescaleRows", (value, from) => value / sums[from], null);
  },

  transposeCopy: ({ cells, layout }) => {
    if (layout.form === "list") {
      const { row, rows } = layout.body;
      const head = row > 0 ? [cells[0].slice(0, 3).map(plain)] : [];
      return { code: "transposeCopy", kind: "newTable", table: [...head, ...cells.slice(row, row + rows).map(([from, to, rate]) => [plain(to), plain(from), plain(rate)])] };
    }
    const all = cells.slice(0, layout.body.row + layout.size);
    const width = layout.body.column + layout.size;
    return { code: "transposeCopy", kind: "newTable", table: Array.from({ length: width }, (_, j) => all.map((row) => plain(row[j]))) };
  },

  convertProbability: ({ cells, layout, at }) => {
    if (!at) return null;
    const span = { row: at.row, column: at.column, rows: layout.body.row + layout.size, columns: layout.body.column + layout.size };
    const headings = layout.headings === "none" ? "" : ",TRUE";
    return cells.length === 0 ? null : { code: "convertProbability", kind: "newTable", table: [[`=CTMC.FROMPROBABILITY(${sheetPrefix(at.sheet)}${rangeName(span)},1${headings})`]] };
  },

  invertMeanTimes: ({ cells, layout, body, at }) => {
    const over = (row: number, column: number, value: CellValue | undefined): number | string | null => {
      if (typeof value !== "number" || value === 0) return typeof value === "string" ? value : null;
      return at ? `=1/${cellName(at.row + row, at.column + column)}` : 1 / value;
    };
    const inBody = (row: number, column: number): boolean =>
      body.form === "list"
        ? row >= layout.body.row && column === layout.body.column + 2
        : row >= layout.body.row && column >= layout.body.column && row - layout.body.row !== column - layout.body.column;
    const onDiagonal = (row: number, column: number): boolean =>
      body.form === "square" && row >= layout.body.row && column >= layout.body.column && row - layout.body.row === column - layout.body.column;
    const height = layout.body.row + layout.body.rows;
    const width = layout.body.column + layout.body.columns;
    const corner = (row: number, column: number): boolean => row < layout.body.row && (body.form === "list" ? column === 2 : column < layout.body.column);
    const table = cells.slice(0, height).map((line, row) =>
      Array.from({ length: width }, (_, column) =>
        corner(row, column) ? "rate" : onDiagonal(row, column) ? null : inBody(row, column) ? over(row, column, line[column]) : plain(line[column]),
      ),
    );
    return { code: "invertMeanTimes", kind: "newTable", table };
  },
};

function some(remedy: Extract<Remedy, { kind: "cells" }>): Remedy | null {
  return remedy.changes.length > 0 ? remedy : null;
}

/** Every number of the body changed; a formula is kept and wrapped where `suffix` says how, else left to its writer. */
function eachNumber(
  { cells, layout, body, facts }: Parameters<Maker>[0],
  code: string,
  change: (value: number, from: number) => number,
  suffix: string | null,
): Remedy | null {
  const changes: Change[] = [];
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const value = body.values[i * body.size + j];
      const place = body.placeOf(i, j);
      if (!place || Number.isNaN(value) || value === 0) continue;
      const after = change(value, i);
      if (after === value) continue;
      const formula = facts?.formulas?.[place.row]?.[place.column] ?? "";
      if (formula.startsWith("=") && suffix === null) return null;
      changes.push({ ...place, before: shown(cells[place.row][place.column]), ...(formula.startsWith("=") ? { after: `=(${formula.slice(1)})${suffix}`, shows: after } : { after }) });
    }
  return layout.size > 0 ? some({ code, kind: "cells", changes }) : null;
}

/** The cells of a row without its diagonal: "C4:D4,F4:G4". */
function aroundDiagonal(row: number, column: number, state: number, size: number): string {
  const parts: string[] = [];
  if (state > 0) parts.push(rangeName({ row, column, rows: 1, columns: state }));
  if (state < size - 1) parts.push(rangeName({ row, column: column + state + 1, rows: 1, columns: size - 1 - state }));
  return parts.join(",");
}

/** 91.5 / 100 as 0.915, not as the binary quotient's 17 digits. */
function clean(value: number): number {
  return Number(value.toPrecision(15));
}

function plain(value: CellValue | undefined): number | string | null {
  if (value === undefined || value === null || value === "") return null;
  if (typeof value === "object") return value.fault;
  return typeof value === "boolean" ? String(value).toUpperCase() : value;
}

function shown(value: CellValue | undefined): string {
  const text = plain(value);
  return text === null ? "" : String(text);
}
