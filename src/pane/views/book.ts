import type { BookFinding, BookFormula, BookPair, BookScan, BookTable } from "../../audit/book";
import { shortText } from "../../cells/sentences/book";
import { findingTexts } from "../../cells/sentences/findings";
import { cellText, placeText } from "../address";
import { h, type Child, type VElement } from "../dom";
import type { Session } from "../session";
import { count, inParts, jump, severityMark, word } from "./parts";
import { sharingPart } from "./sharing";
import { changeWords } from "./sign-off";

const SHOWN_TABLES = 12;
const SHOWN_FORMULAS = 60;
const SHOWN_ROWS = 12;

/** The whole workbook: its rate tables, pairs that look alike but differ, and every formula with its state and its table. */
export function bookView(session: Session): Child {
  const { book } = session.state;
  const scanned = book.scanned;
  return [
    h(
      "h2",
      { key: "counts", class: "sr-counts", tabindex: "-1", "data-home": "view" },
      h("span", { role: "status" }, scanned ? totals(scanned.scan) : book.status === "failed" ? "The workbook could not be read." : "Looking through the workbook…"),
    ),
    book.status === "scanning" &&
      h("div", { key: "progress", class: "sr-progress" }, h("progress", { max: "100", value: String(Math.round(book.progress * 100)), "aria-label": "Looking through the workbook" })),
    ...(scanned?.cut ?? []).map(({ sheet, lastRow }) =>
      h("p", { key: `cut-${sheet}`, class: "sr-soft" }, `${sheet} is very large: looked through to row ${lastRow}.`),
    ),
    sharingPart(session),
    scanned && contents(session, scanned.scan),
  ];
}

function totals({ tables, formulas, findings }: BookScan): string {
  const wrong = formulas.filter(({ state, short }) => state !== "fine" || short).length + findings.length;
  return `${count(tables.length, "table")} · ${count(formulas.length, "formula")}${wrong > 0 ? ` · ${wrong} to look at` : ""}`;
}

function contents(session: Session, scan: BookScan): Child {
  const readers = new Map<number | null, number>();
  for (const { reads } of scan.formulas) readers.set(reads, (readers.get(reads) ?? 0) + 1);
  return [
    section(
      "tables",
      "Rate tables",
      scan.tables.length === 0 ? "No rate table found on any sheet." : null,
      h("ul", { role: "list", class: "sr-list" }, ...inParts(session, "tables", scan.tables, SHOWN_TABLES, (table, at) => tableCard(session, table, readers.get(at) ?? 0))),
    ),
    scan.pairs.length > 0 &&
      section(
        "pairs",
        "Alike, but different",
        null,
        h("ul", { role: "list", class: "sr-list" }, ...inParts(session, "pairs", scan.pairs, SHOWN_TABLES, (pair, at) => pairCard(session, scan, pair, at))),
      ),
    section(
      "formulas",
      "Formulas",
      scan.formulas.length === 0 ? "No CTMC formula on any sheet." : null,
      scan.findings.length > 0 && h("ul", { role: "list", key: "about", class: "sr-list" }, ...inParts(session, "about", scan.findings, SHOWN_TABLES, (found, at) => formulaFinding(session, found, at))),
      h("ul", { role: "list", key: "list", class: "sr-formulas" }, ...inParts(session, "formulas", ranked(scan.formulas), SHOWN_FORMULAS, (formula) => formulaLine(session, scan, formula))),
    ),
  ];
}

function section(key: string, title: string, none: string | null, ...lists: Child[]): VElement {
  return h("section", { key, "aria-labelledby": `sr-${key}`, "data-home-area": "view" }, h("h2", { id: `sr-${key}` }, title), none && h("p", { class: "sr-soft" }, none), ...lists);
}

/** A table found in the workbook; with the number of formulas that read it where that is known. */
export function tableCard(session: Session, { address, hidden, size, arrows, role, stop }: BookTable, readers?: number): VElement {
  const place = placeText(address);
  const read = readers === undefined ? "" : readers === 0 ? "read by no formula" : `read by ${count(readers, "formula")}`;
  const facts = [stop ? "" : `${count(size, "state")} · ${role === "rates" ? count(arrows, "arrow") : `${role}, not rates`}`, read].filter((text) => text !== "").join(" · ");
  return h(
    "li",
    { key: place, class: stop ? "sr-card sr-edge-stop" : "sr-card", "data-table": place },
    h("div", { class: "sr-card-head" }, h("span", null, h("strong", null, address.sheet), hidden ? " (hidden sheet)" : ""), jump(session, address)),
    stop && h("p", null, severityMark("stop"), ` ${findingTexts(stop).finding}`),
    h("div", { class: "sr-card-head" }, h("span", { class: "sr-soft" }, facts), word("Check it", () => void session.lookAt(address), { "aria-label": `Check ${place}` })),
  );
}

function formulaFinding(session: Session, { sheet, finding }: BookFinding, at: number): VElement {
  const texts = findingTexts(finding);
  return h(
    "li",
    { key: `${finding.code}-${at}`, class: `sr-card sr-edge-${finding.severity}`, "data-finding": finding.code },
    h("div", { class: "sr-card-head" }, severityMark(finding.severity), finding.span && jump(session, { sheet, ...finding.span }, true)),
    h("p", null, texts.finding),
    texts.remedy !== "" && h("p", { class: "sr-soft" }, texts.remedy),
  );
}

function pairCard(session: Session, scan: BookScan, { a, b, rows }: BookPair, at: number): VElement {
  const [before, after] = [scan.tables[a], scan.tables[b]];
  return h(
    "li",
    { key: `${a}-${b}`, class: "sr-card", "data-pair": `${placeText(before.address)} | ${placeText(after.address)}` },
    h("p", null, "First ", jump(session, before.address, true)),
    h("p", null, "then ", jump(session, after.address, true)),
    h(
      "details",
      { key: "rows" },
      h("summary", null, rows.length === 1 ? "1 difference" : `${rows.length} differences`),
      h("ul", { role: "list", class: "sr-changes" }, ...inParts(session, `pair-${at}`, rows, SHOWN_ROWS, (row) => h("li", null, changeWords(row, "")))),
    ),
  );
}

const STATES: Readonly<Record<BookFormula["state"], readonly [mark: string, word: string, tone: string]>> = {
  error: ["■", "error", "stop"],
  unregistered: ["■", "name not known", "stop"],
  stale: ["▲", "not recalculated", "warning"],
  fine: ["✓", "fine", "ok"],
};

/** What needs a look comes first, otherwise in the order of the sheets. */
function ranked(formulas: readonly BookFormula[]): BookFormula[] {
  const rank = ({ state, short }: BookFormula): number => (state === "error" || state === "unregistered" ? 0 : short || state === "stale" ? 1 : 2);
  return [...formulas].sort((a, b) => rank(a) - rank(b));
}

function formulaLine(session: Session, scan: BookScan, formula: BookFormula): VElement {
  const [mark, text, tone] = STATES[formula.state];
  const { address, fault, short, reads, readsText } = formula;
  const table = reads === null ? null : scan.tables[reads].address;
  return h(
    "li",
    { key: placeText(address), "data-formula": placeText(address) },
    h(
      "div",
      { class: "sr-card-head" },
      h("span", { class: `sr-mark sr-${tone}` }, h("span", { "aria-hidden": "true" }, mark), ` ${text}${fault && formula.state === "error" ? ` ${fault}` : ""}`),
      jump(session, address, true),
    ),
    h("code", null, formula.formula),
    h("p", { class: "sr-soft" }, table ? ["reads ", table.sheet === address.sheet ? cellText(table) : placeText(table)] : readsText === "" ? "reads no table" : `reads ${readsText}, no table found there`),
    short && h("p", null, severityMark("warning"), ` ${shortText(formula)}`),
  );
}
