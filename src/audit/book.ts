import type { Steps } from "../chain/steps";
import { compareTables, type CompareRow } from "../table/compare";
import { isEmpty, nameKey } from "../table/cell";
import { read } from "../table/read";
import type { Cells, CellValue, Reading } from "../table/rate-table";
import { rangeName, sheetPrefix } from "./a1";
import { auditReading } from "./audit";
import { readBody } from "./body";
import type { AskedQuestion, OtherRole, OtherTable } from "./context";
import { cellsFrom } from "./facts";
import type { Finding, Span } from "./finding";
import { BUILDERS, callsIn, numbersIn, positionsOf, referencesIn, tablesIn, type Call, type Reference, type Role } from "./formula-calls";
import { kindOf, type Kind } from "./kind";
import { exponentialsOver, formulaShort, meanTimeName } from "./rules/book-formulas";
import { findTablesSteps } from "./tables-in-sheet";

/** One sheet as it is given: values and formulas of its used range, whose first cell stands at row, column. */
export interface BookSheet {
  readonly name: string;
  readonly hidden: boolean | "unknown";
  readonly row: number;
  readonly column: number;
  readonly values: readonly (readonly (number | string | boolean)[])[];
  readonly formulas: readonly (readonly string[])[];
}

export interface SheetSpan extends Span {
  readonly sheet: string;
}

export interface BookTable {
  readonly address: SheetSpan;
  /** The address as text: "Plan!B3:F7". */
  readonly where: string;
  readonly cells: Cells;
  readonly reading: Reading;
  readonly hidden: boolean;
  readonly kind: Kind;
  /** What the formulas that read it take it for; rates where none does. */
  readonly role: Role;
  /** The formula that says so, unless the role is rates. */
  readonly roleSaid: { readonly name: string; readonly where: string } | null;
  /** The cells that the formula reads which builds it; empty for a typed table. */
  readonly builtFrom: readonly SheetSpan[];
  readonly size: number;
  readonly arrows: number;
  /** The first stop that the audit reports of the table by itself, in its role; null where there is none. */
  readonly stop: Finding | null;
}

export interface BookFormula {
  readonly address: SheetSpan;
  readonly formula: string;
  /** The outermost of our functions in it, without its namespace. */
  readonly name: string;
  readonly calls: readonly Call[];
  /** `stale`: no value yet; `unregistered`: the host does not know our functions here. */
  readonly state: "fine" | "error" | "stale" | "unregistered";
  /** What the cell shows, where it is an error code. */
  readonly fault: string | null;
  /** The table it reads, by its place in `tables`. */
  readonly reads: number | null;
  /** The first argument as written. */
  readonly readsText: string;
  /** Rows and columns of the table that its range leaves out, and the range that takes them in. */
  readonly short: { readonly rows: number; readonly columns: number; readonly range: SheetSpan; readonly where: string } | null;
}

/** Two tables that name the same states and differ: `a` before `b` in the order of the sheets. */
export interface BookPair {
  readonly a: number;
  readonly b: number;
  readonly rows: readonly CompareRow[];
}

/** A finding about formulas rather than about one table; its span counts from the sheet's first cell. */
export interface BookFinding {
  readonly sheet: string;
  readonly finding: Finding;
}

export interface BookScan {
  readonly tables: readonly BookTable[];
  readonly formulas: readonly BookFormula[];
  readonly pairs: readonly BookPair[];
  readonly findings: readonly BookFinding[];
}

interface Seen {
  readonly sheet: BookSheet;
  readonly cells: Cells;
}

/**
 * Every rate table and every formula of ours in a workbook: where they are, whether they are sound, who reads whom.
 *
 * Tables are found by their looks (`findTables`) and by the formulas that read them; what our functions spill is a table only
 * where they build one. Formulas whose range leaves out a row or column of the table are told, and tables under the same state
 * names that differ are paired, each with the next.
 *
 * @param sheets - all sheets, hidden ones too
 * @returns steps that yield the share done
 *
 * *Cost*: a few passes over the cells.
 */
export function* scanBook(sheets: readonly BookSheet[]): Steps<BookScan> {
  const drafts: Draft[] = [];
  const formulas: BookFormula[] = [];
  const seen: Seen[] = [];
  for (const [at, sheet] of sheets.entries()) {
    const cells = cellsFrom(sheet.values);
    seen.push({ sheet, cells });
    yield at / (2 * sheets.length);
    for (const { span } of yield* findTablesSteps(cells)) {
      if (isAnswer(sheet, span)) continue;
      drafts.push(draftOf(sheet, cells, span));
      yield at / (2 * sheets.length);
    }
  }
  const findings: BookFinding[] = [];
  for (const [at, { sheet, cells }] of seen.entries()) {
    for (let row = 0; row < sheet.formulas.length; row++) {
      const line = sheet.formulas[row];
      for (let column = 0; column < line.length; column++) {
        const formula = line[column];
        if (!formula.startsWith("=") || !/CTMC[._]/iu.test(formula)) continue;
        const found = bookFormula(sheet, cells, row, column, formula, drafts, seen);
        if (!found) continue;
        formulas.push(found);
        findings.push(...formulaShort(found).map((finding) => ({ sheet: sheet.name, finding })));
        findings.push(...meanTimeName(found, cells, row, column).map((finding) => ({ sheet: sheet.name, finding })));
      }
      if (row % 50 === 49) yield 0.5 + (at + row / sheet.formulas.length) / (2.2 * sheets.length);
    }
    findings.push(...exponentialsOver(sheet, drafts).map((finding) => ({ sheet: sheet.name, finding })));
    yield 0.5 + (at + 1) / (2.2 * sheets.length);
  }
  const tables: BookTable[] = [];
  for (const draft of drafts) {
    tables.push(judged(draft));
    if (tables.length % 4 === 0) yield 0.95;
  }
  const scan = { tables, formulas, pairs: yield* pairsAmong(tables), findings };
  valuesOf.set(scan, seen);
  return scan;
}

/** The questions that the workbook's formulas ask of a table: for `audit`'s `asked`. */
export function askedOf(scan: BookScan, table: number): AskedQuestion[] {
  return scan.formulas
    .filter((formula) => formula.reads === table)
    .flatMap(({ calls, address }) => {
      const call = calls.find(({ name }) => positionsOf(name));
      const positions = call && positionsOf(call.name);
      if (!call || !positions) return [];
      const given = (position: number | undefined): string => (position === undefined ? "" : (call.parameters[position] ?? ""));
      return [
        {
          name: call.name,
          hasTargets: given(positions.targets) !== "",
          hasStart: given(positions.start) !== "",
          hasTimes: given(positions.times) !== "",
          times: timesIn(scan, given(positions.times), address.sheet),
          where: sheetPrefix(address.sheet) + rangeName(address),
        },
      ];
    });
}

/** What formulas take a table for, where none takes it for rates: for `audit`'s `role`. */
export function roleOf(scan: BookScan, table: number): OtherRole | undefined {
  const { role, roleSaid } = scan.tables[table];
  return role === "rates" || !roleSaid ? undefined : { role, ...roleSaid };
}

/** The other tables of the workbook: for `audit`'s `others`. */
export function othersOf(scan: BookScan, table: number): OtherTable[] {
  return scan.tables.filter((_, k) => k !== table).map(({ where, cells }) => ({ where, cells }));
}

// Times that stand in cells are kept with the scan by sheet, so that `askedOf` needs no workbook.
const valuesOf = new WeakMap<BookScan, readonly Seen[]>();

function timesIn(scan: BookScan, parameter: string, sheet: string): number[] {
  const written = numbersIn(parameter);
  if (written) return written;
  const [reference, ...others] = referencesIn(parameter, sheet);
  if (!reference || others.length > 0 || !/^[^+*/^&(,-]+$/u.test(parameter.replace(/'[^']*'/gu, ""))) return [];
  const place = (valuesOf.get(scan) ?? []).find(({ sheet: other }) => other.name === reference.sheet);
  return place ? cut(place, reference).flat().filter((value) => typeof value === "number") : [];
}

function cut({ sheet, cells }: Seen, { row, column, rows, columns }: Span): CellValue[][] {
  return Array.from({ length: Math.min(rows, 2000) }, (_, i) =>
    Array.from({ length: Math.min(columns, 2000) }, (__, j) => cells[row - sheet.row + i]?.[column - sheet.column + j] ?? null),
  );
}

/** Whether a found table is what one of our formulas spilled as an answer. */
function isAnswer(sheet: BookSheet, span: Span): boolean {
  const [outer] = callsIn(spillingFormula(sheet, span));
  return outer !== undefined && !BUILDERS.has(outer.name);
}

/** The formula of ours whose spill a found table is, or begins with; "" where there is none. */
function spillingFormula(sheet: BookSheet, span: Span): string {
  for (const [row, column] of [[0, 0], [1, 1], [0, 1], [1, 0]]) {
    const formula = sheet.formulas[span.row + row]?.[span.column + column] ?? "";
    if (formula.startsWith("=") && callsIn(formula).length > 0) return formula;
  }
  return "";
}

/** A table before all formulas were seen: who reads it decides what it is. */
type Draft = Omit<BookTable, "role" | "roleSaid" | "stop"> & { readonly roles: Map<Role, { readonly name: string; readonly where: string }> };

function draftOf(sheet: BookSheet, cells: Cells, span: Span): Draft {
  const inside = Array.from({ length: span.rows }, (_, i) => Array.from({ length: span.columns }, (__, j) => cells[span.row + i]?.[span.column + j] ?? null));
  const reading = read(inside);
  const address = { sheet: sheet.name, row: sheet.row + span.row, column: sheet.column + span.column, rows: span.rows, columns: span.columns };
  return {
    address,
    where: sheetPrefix(sheet.name) + rangeName(address),
    cells: inside,
    reading,
    hidden: sheet.hidden === true,
    kind: reading.layout ? kindOf(readBody(inside, reading.layout)) : "rates",
    size: reading.layout?.size ?? 0,
    arrows: reading.table?.arrows.length ?? 0,
    builtFrom: referencesIn(spillingFormula(sheet, span), sheet.name),
    roles: new Map(),
  };
}

function judged({ roles, ...draft }: Draft): BookTable {
  const [said] = roles.has("rates") ? [] : [...roles];
  const role = said?.[0] ?? "rates";
  const options = said && role !== "rates" ? { role: { role, ...said[1] } } : {};
  const stop = auditReading(draft.cells, draft.reading, options).find((finding) => finding.severity === "stop") ?? null;
  return { ...draft, role, roleSaid: role === "rates" ? null : said[1], stop };
}

function bookFormula(
  sheet: BookSheet,
  cells: Cells,
  row: number,
  column: number,
  formula: string,
  drafts: Draft[],
  seen: readonly Seen[],
): BookFormula | null {
  const calls = callsIn(formula);
  if (calls.length === 0) return null;
  const value = cells[row]?.[column] ?? null;
  const fault = typeof value === "object" && value !== null ? value.fault : null;
  const unregistered = calls.some((call) => call.unregistered) || fault === "#NAME?";
  const waiting = fault === "#BUSY!" || fault === "#GETTING_DATA" || (value === null && isEmpty(cells[row]?.[column + 1] ?? null) && isEmpty(cells[row + 1]?.[column] ?? null));
  const [outer] = calls;
  const address = { sheet: sheet.name, row: sheet.row + row, column: sheet.column + column, rows: 1, columns: 1 };
  let reads: number | null = null;
  let short: BookFormula["short"] = null;
  for (const call of calls)
    for (const { parameter, role } of tablesIn(call)) {
      const reference = referencesIn(parameter, sheet.name)[0];
      const at = reference && !/\bCTMC[._]/iu.test(parameter) ? tableAt(reference, drafts, seen) : null;
      if (at === null) continue;
      if (!drafts[at].roles.has(role)) drafts[at].roles.set(role, { name: call.name, where: sheetPrefix(sheet.name) + rangeName(address) });
      if (reads !== null) continue;
      reads = at;
      short = reference.spill ? null : shortOf(reference, drafts[at]);
    }
  return {
    address,
    formula,
    name: outer.name,
    calls,
    state: unregistered ? "unregistered" : waiting ? "stale" : fault ? "error" : "fine",
    fault,
    reads,
    readsText: outer.parameters[0] ?? "",
    short,
  };
}

/** The table that a reference reads: the one it shares most cells with; else the range itself joins the tables. */
function tableAt(reference: Reference, tables: Draft[], seen: readonly Seen[]): number | null {
  let best = -1;
  let most = 0;
  tables.forEach(({ address }, k) => {
    if (address.sheet !== reference.sheet) return;
    const cells = sharedCells(address, reference);
    if (cells > most) [best, most] = [k, cells];
  });
  if (best >= 0 && (reference.spill || 2 * most >= Math.min(reference.rows * reference.columns, tables[best].address.rows * tables[best].address.columns))) return best;
  const place = seen.find(({ sheet }) => sheet.name === reference.sheet);
  if (reference.spill || !place || reference.rows < 2 || reference.columns < 2) return null;
  const { sheet, cells } = place;
  return tables.push(draftOf(sheet, cells, { ...reference, row: reference.row - sheet.row, column: reference.column - sheet.column })) - 1;
}

function sharedCells(a: Span, b: Span): number {
  const rows = Math.min(a.row + a.rows, b.row + b.rows) - Math.max(a.row, b.row);
  const columns = Math.min(a.column + a.columns, b.column + b.columns) - Math.max(a.column, b.column);
  return rows > 0 && columns > 0 ? rows * columns : 0;
}

/** How many rows and columns of the table's body the reference leaves out; headings may be left out. */
function shortOf(reference: Reference, { address, reading }: Draft): BookFormula["short"] {
  const { layout } = reading;
  const body = layout?.form === "square" ? layout.body : layout ? { ...layout.body, row: 0, rows: layout.body.row + layout.body.rows } : null;
  if (!body) return null;
  const own = { row: address.row + body.row, column: address.column + body.column, rows: body.rows, columns: body.columns };
  const missing = (first: number, length: number, from: number, count: number): number => Math.max(0, from - first) + Math.max(0, first + length - from - count);
  const headed = layout?.form === "list" ? layout.body.row : 0; // a list's heading row may be left out
  const rows = Math.max(0, missing(own.row, own.rows, reference.row, reference.rows) - headed);
  const columns = missing(own.column, own.columns, reference.column, reference.columns);
  return rows + columns === 0 ? null : { rows, columns, range: address, where: rangeName(address) };
}

/**
 * Last quarter's table and this one's: the same states (or all but a quarter of them), rates of one size, neither built from the
 * other. Each table is paired with the nearest such one before it.
 */
function* pairsAmong(tables: readonly BookTable[]): Steps<BookPair[]> {
  const pairs: BookPair[] = [];
  const earlier: { readonly at: number; readonly names: ReadonlySet<string> }[] = [];
  for (const [at, { reading, role }] of tables.entries()) {
    if (!reading.table?.names || role !== "rates") continue;
    const names = new Set(reading.table.names.map(nameKey));
    for (let k = earlier.length - 1; k >= Math.max(0, earlier.length - MOST_LOOKED_BACK); k--) {
      const before = earlier[k];
      if (!sameStates(before.names, names) || builtFrom(tables[before.at], tables[at]) || builtFrom(tables[at], tables[before.at])) continue;
      const rows = compareTables(tables[before.at].reading.table!, reading.table);
      if (!ofOneSize(rows, tables[before.at].arrows)) continue;
      if (rows.length > 0) pairs.push({ a: before.at, b: at, rows });
      break;
    }
    earlier.push({ at, names });
    yield 0.97;
  }
  return pairs;
}

const MOST_LOOKED_BACK = 200;

function sameStates(one: ReadonlySet<string>, other: ReadonlySet<string>): boolean {
  if (Math.abs(one.size - other.size) > Math.max(one.size, other.size) / 4) return false;
  let shared = 0;
  for (const name of one) if (other.has(name)) shared++;
  return shared >= 2 && shared >= 0.75 * (one.size + other.size - shared);
}

function builtFrom(built: BookTable, { address }: BookTable): boolean {
  return built.builtFrom.some((source) => source.sheet === address.sheet && sharedCells(source, address) > 0);
}

/** At least half of the arrows are in both tables, and half of those that changed did by no more than five times. */
function ofOneSize(rows: readonly CompareRow[], arrows: number): boolean {
  const ratios = rows.flatMap((row) => (row.kind === "arrow" ? [row.ratio] : []));
  const changed = ratios.filter((ratio) => ratio > 0);
  const near = changed.filter((ratio) => ratio >= 0.2 && ratio <= 5).length;
  const apart = ratios.length - changed.length;
  return 2 * near >= changed.length && 2 * apart <= arrows + ratios.filter(Number.isNaN).length;
}
