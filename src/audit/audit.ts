import { widthOf } from "../table/cell";
import { Problem } from "../chain/problem";
import { read } from "../table/read";
import type { Cells, Layout, Reading } from "../table/rate-table";
import { contextOf, type AuditOptions, type OtherRole, type Rule, type SheetRule } from "./context";
import { findingsFrom } from "./from-problem";
import type { SheetFacts } from "./facts";
import type { Finding, Severity, Span, Whereabouts } from "./finding";
import { recognise, type Aside, type Recognised } from "./recognise";
import { blanks } from "./rules/blanks";
import { manualCalculation, pastedConstants } from "./rules/calculation";
import { closedClasses } from "./rules/closed-classes";
import { columnsSum } from "./rules/columns-sum";
import { commonCause } from "./rules/common-cause";
import { competingExits } from "./rules/competing-exits";
import { cycleLength } from "./rules/cycle-length";
import { diagonalBlank } from "./rules/diagonal-blank";
import { shownAsZero } from "./rules/display";
import { hidden } from "./rules/hidden";
import { horizon } from "./rules/horizon";
import { largestArrow } from "./rules/largest-arrow";
import { layoutAsides } from "./rules/layout-asides";
import { longRun } from "./rules/long-run";
import { meanTimes } from "./rules/mean-times";
import { merged } from "./rules/merged";
import { noExit } from "./rules/no-exit";
import { noTarget } from "./rules/no-target";
import { percent } from "./rules/percent";
import { probabilityLabel } from "./rules/probability-label";
import { probabilityTable } from "./rules/probability-table";
import { rangeShort } from "./rules/range-short";
import { repairPattern } from "./rules/repair-pattern";
import { stepFormulas } from "./rules/step-formulas";
import { totalsSelected } from "./rules/totals";
import { units } from "./rules/units";
import { unreachable } from "./rules/unreachable";
import { zeroEvents } from "./rules/zero-events";
import { meansTotal } from "./words";

export type { AuditOptions, AskedQuestion, OtherRole, OtherTable } from "./context";

/** In the order in which findings of one severity are listed: what spoils every answer first. */
const RULES: readonly Rule[] = [
  columnsSum,
  probabilityTable,
  percent,
  competingExits,
  stepFormulas,
  cycleLength,
  closedClasses,
  noTarget,
  meanTimes,
  probabilityLabel,
  units,
  horizon,
  unreachable,
  noExit,
  repairPattern,
  pastedConstants,
  diagonalBlank,
  blanks,
  shownAsZero,
  commonCause,
  longRun,
  zeroEvents,
  largestArrow,
];

/** Rules that look at labels and arrows only: all that a list of very many states is judged by. */
const GRAPH_RULES: readonly Rule[] = [columnsSum, closedClasses, noTarget, meanTimes, units, horizon, unreachable, noExit];

const SHEET_RULES: readonly SheetRule[] = [merged, rangeShort, hidden, manualCalculation];

const RANK: Readonly<Record<Severity, number>> = { stop: 0, warning: 1, note: 2 };

/**
 * What is wrong with this range as a rate table, in the order in which it matters?
 *
 * Findings: first everything for which a formula refuses the range, as stops in the reader's order with the refusing problem itself;
 * then the rules' stops, warnings, notes, and questions. A kind of mistake is one finding with all its places. Where the range
 * holds a table with more around it (totals, units, notes), the table inside is audited too.
 *
 * @param cells - values of the range, headings and margins included
 * @param options - a start; what only the pane sees; the person's answers
 * @returns findings; none for a table in which nothing was found
 */
export function audit(cells: Cells, options: AuditOptions = {}): Finding[] {
  return auditReading(cells, read(cells), options);
}

/** As `audit`, for a range that was read already. */
export function auditReading(cells: Cells, reading: Reading, options: AuditOptions = {}): Finding[] {
  const { facts, role } = options;
  if (role) return byRank([...inOtherRole(cells, reading, options, role), ...sheetFindings(cells, reading, facts)]);
  const refusals = findingsFrom(reading.problems).map((finding) => placed(finding, reading.layout));
  const inner = mayHoldMore(reading) ? recognise(cells) : null;
  const within = inner !== null && inner.asides.length > 0 ? insideOf(cells, inner, options, refusals[0]) : null;
  const found = within ?? (reading.layout ? rulesOn(cells, reading, reading.layout, options) : []);
  found.push(...sheetFindings(cells, reading, facts));
  return [...explained(refusals, found, within !== null), ...startRefusal(options), ...byRank(found)];
}

function byRank(findings: readonly Finding[]): Finding[] {
  const order = (finding: Finding): number => RANK[finding.severity] + (finding.asks ? 0.5 : 0);
  return [...findings].sort((a, b) => order(a) - order(b));
}

function sheetFindings(cells: Cells, reading: Reading, facts: SheetFacts | undefined): Finding[] {
  return facts ? SHEET_RULES.flatMap((rule) => rule({ cells, layout: reading.layout, facts })).map((finding) => placed(finding, null)) : [];
}

/** Rules that judge a table of probabilities as such. */
const PROBABILITY_RULES: readonly Rule[] = [probabilityTable, competingExits, cycleLength];

/** A range that formulas take for costs, counts, resets or probabilities: said once, and judged as that as far as rules go. */
function inOtherRole(cells: Cells, reading: Reading, options: AuditOptions, { role, name, where }: OtherRole): Finding[] {
  const said: Finding = { code: "readAsOther", severity: "note", span: null, details: { role, name, where } };
  if (role !== "probabilities" || !reading.layout) return [said];
  const { layout } = reading;
  const context = contextOf(cells, reading, layout, options);
  const found = PROBABILITY_RULES.flatMap((rule) => rule(context)).filter(({ code }) => code !== "probabilityTable");
  return [said, ...found.map((finding) => placed(finding, layout))];
}

/** Stops that say why a diagonal cannot agree: clearing it would hide the mistake instead of mending it. */
const DIAGONAL_CAUSES = new Set(["columnsSum", "probabilityTable", "percentTable", "competingExits", "linearSteps", "exponentialCells", "outsideUnit"]);
const DIAGONAL = new Set(["rowSum", "rowSumRounded", "diagonalPositive", "diagonalWithoutExits"]);

/**
 * Of refusals with one cause that a rule knows, the first alone: it stays the first stop, word for word, and hands over to
 * the cause. A table inside the range tells its own faults again.
 */
function explained(refusals: readonly Finding[], found: readonly Finding[], inside: boolean): Finding[] {
  const [first, ...others] = refusals;
  const cause = inside || (DIAGONAL.has(first?.code) && found.some(({ code }) => DIAGONAL_CAUSES.has(code)));
  if (!first || !cause) return [...refusals];
  return [{ ...first, also: [], remedy: undefined, details: { ...first.details, explained: true } }, ...(inside ? [] : others.filter(({ code }) => !DIAGONAL.has(code)))];
}

function rulesOn(cells: Cells, reading: Reading, layout: Layout, options: AuditOptions, aside: readonly string[] = []): Finding[] {
  const context = contextOf(cells, reading, layout, options, aside);
  const rules = context.body.long ? GRAPH_RULES : RULES;
  return rules.flatMap((rule) => rule(context)).map((finding) => placed(finding, layout));
}

function startRefusal({ start }: AuditOptions): Finding[] {
  return start instanceof Problem ? findingsFrom([start]).map((finding) => ({ ...finding, span: null })) : [];
}

/** Refused, or taken with a state that is called Total. */
function mayHoldMore(reading: Reading): boolean {
  return reading.table === null || (reading.layout?.names?.some(meansTotal) ?? false);
}

/** The table inside a wider range: what to leave out, then its own findings, at their places in the given range. */
function insideOf(cells: Cells, inner: Recognised, options: AuditOptions, first: Finding | undefined): Finding[] {
  const width = widthOf(cells);
  const spanOf = (aside: Aside): Span =>
    aside.line === "row" ? { row: aside.index, column: 0, rows: 1, columns: width } : { row: 0, column: aside.index, rows: cells.length, columns: 1 };
  const about = [...totalsSelected(inner, spanOf), ...layoutAsides(inner, spanOf)].map((finding) => placed(finding, null));
  if (inner.amount === "counts" || !inner.reading.layout) return about;
  const facts = options.facts && innerFacts(options.facts, inner);
  const aside = inner.asides.flatMap(({ label, texts, role }) => (role === "total" ? [] : role === "units" ? [label, ...texts] : [label])); // a note may speak of anything
  const rules = rulesOn(inner.cells, inner.reading, inner.reading.layout, { ...options, facts }, aside);
  const faults = findingsFrom(inner.reading.problems).map((finding) => placed(finding, inner.reading.layout));
  const own = [...explained(faults, rules, false), ...rules].map((finding) => outward(finding, inner));
  return [...about, ...own.filter((finding) => !(finding.code === first?.code && samePlace(finding.span, first.span)))];
}

/** Of the sheet's facts, those about single cells; the sheet rules judge the given range as a whole. */
function innerFacts(facts: SheetFacts, { rows, columns }: Recognised): SheetFacts {
  const pick = (lines: SheetFacts["texts"]): SheetFacts["texts"] => lines && rows.map((row) => columns.map((column) => lines[row]?.[column] ?? ""));
  return { texts: pick(facts.texts), formulas: pick(facts.formulas), formats: pick(facts.formats), neighbours: facts.neighbours };
}

function samePlace(a: Span | null, b: Span | null): boolean {
  return a !== null && b !== null && a.row === b.row && a.column === b.column;
}

function outward(finding: Finding, { rows, columns }: Recognised): Finding {
  const move = (span: Span): Span => {
    const row = rows[span.row] ?? span.row;
    const column = columns[span.column] ?? span.column;
    const lastRow = rows[span.row + span.rows - 1] ?? row;
    const lastColumn = columns[span.column + span.columns - 1] ?? column;
    return { row, column, rows: lastRow - row + 1, columns: Math.max(1, lastColumn - column + 1) };
  };
  return { ...finding, span: finding.span && move(finding.span), also: finding.also?.map(move) };
}

/** Adds where the finding is, in states where it lies among the rates. */
function placed(finding: Finding, layout: Layout | null): Finding {
  const { span } = finding;
  if (!span || finding.where) return finding;
  return { ...finding, where: whereaboutsOf(span, layout) };
}

function whereaboutsOf(span: Span, layout: Layout | null): Whereabouts | undefined {
  const whole = layout && span.rows === layout.body.rows && span.columns === layout.body.columns;
  if (whole && span.rows * span.columns > 1) return undefined;
  if (!layout || layout.form === "list") return linesOf(span);
  const row = span.row - layout.body.row;
  const column = span.column - layout.body.column;
  const inRows = row >= 0 && row < layout.size;
  const inColumns = column >= 0 && column < layout.size;
  const single = span.rows === 1 && span.columns === 1;
  if (single && column === -1 && inRows) return { heading: true, row: row + 1 };
  if (single && row === -1 && inColumns) return { heading: true, column: column + 1 };
  if (!inRows || !inColumns) return linesOf(span);
  const name = (state: number): string | undefined => layout.names?.[state];
  return {
    ...(span.rows === 1 ? { row: row + 1, rowName: name(row) } : {}),
    ...(span.columns === 1 ? { column: column + 1, columnName: name(column) } : {}),
  };
}

function linesOf(span: Span): Whereabouts {
  return {
    inRange: true,
    ...(span.rows === 1 ? { row: span.row + 1 } : {}),
    ...(span.columns === 1 ? { column: span.column + 1 } : {}),
  };
}
