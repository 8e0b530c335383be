import { arrowClaim, perUnit, plainUnit } from "../cells/sentences/arrows";
import { cellText, within } from "./address";
import { CAUTIONS } from "./cautions";
import type { Item, Looked } from "./examine";
import { asTyped } from "./remedy-write";
import { reviewFacts, SETTLED, type ReviewArrow, type ReviewFacts } from "./review-facts";
import type { HostValue, SheetLook, Write } from "./workbook";

/** What the check sheet says that is not in the table itself. */
export interface CheckSheetContext {
  readonly version: string;
  /** ISO date of writing. */
  readonly date: string;
  readonly workbook: string;
  /** Formulas that read the table, with where they stand. */
  readonly formulas: readonly { readonly place: string; readonly formula: string }[];
}

export interface CheckSheet {
  readonly name: string;
  readonly cells: Write["cells"];
  readonly look: SheetLook;
}

/** Columns of the sheet in characters: together the width of a printed page. */
const WIDTHS = [20, 13, 12, 9, 10, 14, 11];
/** Characters of running text that fit beside the first column, and across all. */
const BESIDE = 80;
const ACROSS = 100;
const MOST_FORMULAS = 200;
/** About forty printed pages; beyond, a list of arrows is no longer read. */
const MOST_ARROWS = 2000;

type Line = readonly (HostValue | null)[];

/**
 * The table on a sheet of its own, as values, for someone who reviews it without the add-in: where it is, what it holds, what
 * was worked out from it, every finding with its status, every arrow, and blank lines to sign.
 */
export async function checkSheet(looked: Looked, context: CheckSheetContext): Promise<CheckSheet> {
  const { table } = looked.table;
  const facts = table ? await reviewFacts(table) : null;
  const sheet = new Sheet();
  identity(sheet, looked, context);
  if (facts) {
    figures(sheet, looked, facts);
    states(sheet, looked, facts);
  }
  findings(sheet, looked);
  arrows(sheet, looked);
  formulas(sheet, context);
  signatures(sheet, looked);
  return {
    name: sheetName(looked.reading.address.sheet),
    cells: sheet.rectangle(),
    look: { columnWidths: WIDTHS, boldRows: sheet.bold, footer: `${looked.reading.address.sheet} ${cellText(looked.reading.address)}, ${context.date}` },
  };
}

/** Lines of unequal length that become a rectangle; texts are kept as texts whatever they begin with. */
class Sheet {
  readonly bold: number[] = [];
  private readonly lines: Line[] = [];

  line(...cells: Line): void {
    this.lines.push(cells);
  }

  title(text: string): void {
    if (this.lines.length > 0) this.line();
    this.heading(text);
  }

  heading(...cells: Line): void {
    this.bold.push(this.lines.length);
    this.line(...cells);
  }

  /** Running text beside the first column, broken over as many lines as it needs. */
  text(text: string, label = ""): void {
    broken(text, BESIDE).forEach((part, at) => this.line(at === 0 ? label : "", part));
  }

  rectangle(): (HostValue | null)[][] {
    return this.lines.map((line) => WIDTHS.map((_, column) => asTyped(line[column] ?? null)));
  }
}

function identity(sheet: Sheet, { reading, layout, entry, fingerprint, claims, table }: Looked, context: CheckSheetContext): void {
  sheet.heading("Check sheet");
  if (context.workbook !== "") sheet.line("Workbook", context.workbook);
  sheet.line("Sheet", reading.address.sheet);
  sheet.line("Range", cellText(reading.address));
  sheet.line("Date", context.date);
  sheet.line("Made with", `Stayrate ${context.version}`.trim());
  sheet.line("Fingerprint", fingerprint ?? "none: the range does not read as a rate table");
  sheet.line("States", layout?.size ?? "not read");
  sheet.line("Arrows", claims.length);
  sheet.line("Unit", entry.unit ? perUnit(plainUnit(entry.unit)) : "not set");
  if (layout) {
    const given = table.table?.givenDiagonal.filter((value) => value !== null).length ?? 0;
    const diagonal = !table.table ? "not judged, since the range does not read" : given === 0 ? "worked out as minus the exits" : given === layout.size ? "given, agrees with the exits" : `given in ${given} rows, else worked out`;
    sheet.line("Convention", layout.form === "list" ? "list: from, to, rate" : `rows are from, columns are to; diagonal ${diagonal}`);
  }
  sheet.line("Start, horizon", context.formulas.length > 0 ? "as the formulas below say" : "");
}

function figures(sheet: Sheet, { layout, entry }: Looked, facts: ReviewFacts): void {
  const unit = entry.unit ? plainUnit(entry.unit) : "time unit";
  const name = naming(layout?.names ?? null);
  const arrow = ({ from, to }: ReviewArrow): string => `${name(from)} → ${name(to)}`;
  const largest = largestOf(facts.residuals.map((value) => value ?? 0));
  sheet.title("Figures");
  sheet.line("Largest row residual", facts.residuals.every((value) => value === null) ? "none: the diagonal is worked out" : facts.residuals[largest], facts.residuals[largest] === null ? null : name(largest));
  if (facts.slowest && facts.fastest) {
    sheet.line("Slowest rate", facts.slowest.rate, arrow(facts.slowest));
    sheet.line("Fastest rate", facts.fastest.rate, arrow(facts.fastest));
    sheet.line("Fastest ÷ slowest", facts.fastest.rate / facts.slowest.rate);
  }
  if (facts.imbalance) {
    const worst = largestOf([...facts.imbalance]);
    sheet.line("Flow in − flow out", facts.imbalance[worst], `largest, at ${name(worst)}`);
  }
  sheet.line(`Settling time (${SETTLED * 100} %)`, facts.settling ?? "not worked out", facts.settling === null ? null : `${unit}s`.replace(/ss$/, "s"));
}

function states(sheet: Sheet, { layout }: Looked, facts: ReviewFacts): void {
  const name = naming(layout?.names ?? null);
  sheet.title("States");
  sheet.heading("state", "exit rate", "mean stay", "class", "kind", "long-run share", "row residual");
  facts.classes.forEach(({ number, kind }, state) => {
    const exit = facts.exitRates[state];
    sheet.line(name(state), exit, exit > 0 ? 1 / exit : "no exit", number, kind, facts.shares ? facts.shares[state] : "needs a start", facts.residuals[state] ?? "worked out");
  });
}

/** Two or three lines a finding: its sentence is longer than a column and runs over the blank cells beside it. */
function findings(sheet: Sheet, { open, accepted, questions, reading }: Looked): void {
  sheet.title("Findings");
  if (open.length + accepted.length + questions.length === 0) sheet.line("none");
  else sheet.heading("severity", "cells", "status", "owner");
  const write = (item: Item, status: string): void => {
    const places = [item.address ?? reading.address, ...item.also].map(cellText).join(", ");
    sheet.line(item.finding.severity, places, status, "");
    sheet.text(item.sentence);
    if (item.advice !== "") sheet.text(item.advice);
  };
  for (const item of open) write(item, "open");
  for (const question of questions) {
    sheet.line("question", cellText(reading.address), "open", "");
    sheet.text(question.question);
  }
  for (const item of accepted) {
    write(item, "accepted");
    sheet.text(`Accepted by ${item.accepted?.initials} on ${item.accepted?.date}: ${item.accepted?.reason}`);
  }
}

function arrows(sheet: Sheet, { claims, entry, reading }: Looked): void {
  if (claims.length === 0) return;
  const unit = entry.unit ? plainUnit(entry.unit) : "";
  sheet.title("Arrows");
  sheet.heading("from", "to", "rate", "in words, cell");
  for (const { from, to, rate, row, column } of claims.slice(0, MOST_ARROWS))
    sheet.line(from, to, rate, `${arrowClaim(rate, unit)}, ${cellText(within(reading.address, { row, column, rows: 1, columns: 1 }))}`);
  if (claims.length > MOST_ARROWS) sheet.line(`and ${claims.length - MOST_ARROWS} more, in the table itself`);
}

function formulas(sheet: Sheet, { formulas: all }: CheckSheetContext): void {
  if (all.length === 0) return;
  sheet.title("Formulas that read this table");
  for (const { place, formula } of all.slice(0, MOST_FORMULAS)) sheet.text(formula, place);
  if (all.length > MOST_FORMULAS) sheet.line("", `and ${all.length - MOST_FORMULAS} more`);
}

function signatures(sheet: Sheet, { entry, fingerprint }: Looked): void {
  sheet.title("Review");
  if (entry.signOff) {
    const state = entry.signOff.fingerprint === fingerprint ? "unchanged since" : "changed since";
    sheet.line("Signed off", `${entry.signOff.date} by ${entry.signOff.checker} (${entry.signOff.fingerprint}), ${state}`);
  }
  for (const label of ["Prepared by", "Date", "Reviewed by", "Date", "Scope", "Limits"]) sheet.line(label, "", "______________________________");
  sheet.title("Cautions");
  for (const caution of CAUTIONS) for (const part of broken(caution, ACROSS)) sheet.line(part);
}

function naming(names: readonly string[] | null): (state: number) => string {
  return (state) => names?.[state] ?? `State ${state + 1}`;
}

function largestOf(values: readonly number[]): number {
  return values.reduce((best, value, at) => (Math.abs(value) > Math.abs(values[best]) ? at : best), 0);
}

/** A sheet name that every host takes: at most 31 characters, none of those that are refused. */
export function sheetName(sheet: string): string {
  return `Check ${sheet}`.replace(/[[\]:*?/\\]/g, " ").slice(0, 28).trim();
}

/** Breaks a text at spaces, a longer word anywhere, into parts of at most `width` characters. */
function broken(text: string, width: number): string[] {
  const parts: string[] = [];
  const words = text.split(" ").flatMap((word) => word.match(new RegExp(`.{1,${width}}`, "gu")) ?? [""]);
  for (const word of words) {
    const last = parts[parts.length - 1];
    if (last !== undefined && last.length + 1 + word.length <= width) parts[parts.length - 1] = `${last} ${word}`;
    else parts.push(word);
  }
  return parts;
}
