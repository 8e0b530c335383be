import { acceptanceKey } from "../audit/acceptance";
import { auditReading, type AuditOptions } from "../audit/audit";
import { cellsFrom, sheetFacts } from "../audit/facts";
import type { Finding } from "../audit/finding";
import { recognise } from "../audit/recognise";
import { remedyFor, type Remedy } from "../audit/remedies";
import { findingTexts } from "../cells/sentences/findings";
import { questionOf } from "../cells/sentences/questions";
import { remedyTexts } from "../cells/sentences/remedies";
import type { CompareRow } from "../table/compare";
import { fingerprint } from "../table/fingerprint";
import { read } from "../table/read";
import type { Cells, Layout, Reading } from "../table/rate-table";
import { within } from "./address";
import { claimsOf, type Claim } from "./claims";
import type { Accepted, TableMemory } from "./memory";
import { changedSince } from "./sign-off";
import type { RangeAddress, RangeReading } from "./workbook";

/** A finding as the pane shows it. */
export interface Item {
  /** Names the finding within this examination. */
  readonly key: string;
  readonly finding: Finding;
  readonly sentence: string;
  readonly advice: string;
  readonly address: RangeAddress | null;
  /** Further places of the same mistake. */
  readonly also: readonly RangeAddress[];
  readonly acceptanceKey: string;
  readonly accepted: Accepted | null;
  /** An earlier acceptance of the same rule that no longer holds, since values changed. */
  readonly formerly: Accepted | null;
  readonly remedy: OfferedRemedy | null;
}

export interface OfferedRemedy {
  readonly remedy: Remedy;
  readonly label: string;
  readonly done: string;
}

export interface Question {
  readonly code: string;
  readonly question: string;
  readonly choices: readonly { readonly answer: string; readonly label: string }[];
}

/** Everything that is known of the table in view at one moment. */
export interface Looked {
  readonly reading: RangeReading;
  readonly cells: Cells;
  readonly table: Reading;
  /** What the range was taken for: its own layout, or that of the table found inside it. */
  readonly layout: Layout | null;
  /** What formulas take it for where that is not rates: "costs"; its cells then claim no arrows. */
  readonly role: string | null;
  readonly entry: TableMemory;
  readonly findings: readonly Finding[];
  readonly open: readonly Item[];
  readonly accepted: readonly Item[];
  readonly questions: readonly Question[];
  readonly claims: readonly Claim[];
  /** null while the range does not read as a table. */
  readonly fingerprint: string | null;
  /** What differs from the signed-off table; null when not signed off, not changed, or not readable. */
  readonly changes: readonly CompareRow[] | null;
}

/**
 * @param entryOf - what is kept for the table, by its state names
 * @param context - what the rest of the workbook asks of it and holds beside it
 */
export function examine(
  reading: RangeReading,
  entryOf: (states: readonly string[] | null) => TableMemory,
  context: Pick<AuditOptions, "asked" | "others" | "role"> = {},
): Looked {
  const cells = cellsFrom(reading.values);
  const table = read(cells);
  const inner = table.layout ? null : recognise(cells);
  const layout = table.layout ?? inner?.reading.layout ?? null;
  const entry = entryOf(layout?.names ?? null);
  const facts = sheetFacts(reading);
  const findings = auditReading(cells, table, { ...context, facts, answers: entry.answers ?? {} });
  const sheet = reading.address.sheet;
  const kept = new Map((entry.accepted ?? []).map((accepted) => [accepted.key, accepted]));
  const unused = new Map(kept);
  const keys = findings.map((finding) => acceptanceKey(finding, sheet, cells, table));
  for (const key of keys) unused.delete(key);
  const counts = new Map<string, number>();
  const items: Item[] = [];
  const questions: Question[] = [];
  findings.forEach((finding, at) => {
    if (finding.asks) {
      questions.push({ code: String(finding.details.question), ...questionOf(finding, entry.unit ?? null) });
      return;
    }
    const texts = findingTexts(finding);
    const count = counts.get(finding.code) ?? 0;
    counts.set(finding.code, count + 1);
    const accepted = kept.get(keys[at]) ?? null;
    const remedy = remedyFor(finding, { cells, reading: table, facts, at: reading.address });
    items.push({
      key: `${finding.code}-${count}`,
      finding,
      sentence: texts.finding,
      advice: texts.remedy,
      address: finding.span ? within(reading.address, finding.span) : null,
      also: (finding.also ?? []).map((span) => within(reading.address, span)),
      acceptanceKey: keys[at],
      accepted,
      formerly: accepted ? null : ([...unused.values()].find((former) => former.code === finding.code) ?? null),
      remedy: remedy ? { remedy, ...remedyTexts(remedy) } : null,
    });
  });
  const innerClaims = inner?.reading.layout ? claimsOf(inner.cells, inner.reading) : [];
  const print = table.table ? fingerprint(table.table) : null;
  return {
    reading,
    cells,
    table,
    layout,
    entry,
    findings,
    open: items.filter((item) => !item.accepted),
    accepted: items.filter((item) => item.accepted),
    questions,
    role: context.role?.role ?? null,
    claims: context.role ? [] : inner ? innerClaims.map((claim) => ({ ...claim, row: inner.rows[claim.row], column: inner.columns[claim.column] })) : claimsOf(cells, table),
    fingerprint: print,
    changes: table.table && entry.signOff && entry.signOff.fingerprint !== print ? changedSince(entry.signOff, table.table) : null,
  };
}
