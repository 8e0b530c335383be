import { arrowClaim } from "../../cells/sentences/arrows";
import type { Severity } from "../../audit/finding";
import { within } from "../address";
import { h, type Child, type VElement } from "../dom";
import type { Claim } from "../claims";
import type { Looked, Question } from "../examine";
import type { Session } from "../session";
import type { RangeAddress } from "../workbook";
import { tableCard } from "./book";
import { acceptedCard, findingCard } from "./finding";
import { count, inParts, word } from "./parts";
import { signOffPart } from "./sign-off";

const SHOWN_FINDINGS = 40;
const SHOWN_ARROWS = 60;
const SHOWN_TABLES = 12;

/** Findings by severity, what was accepted, what each arrow claims, sign-off and check sheet. */
export function checkView(session: Session): Child {
  const { looked } = session.state;
  if (!looked) return nothingYet(session);
  const { open, accepted, questions } = looked;
  return [
    countsLine(looked),
    questions.length > 0 && h("ul", { role: "list", key: "questions", class: "sr-list", "data-home-area": "view" }, ...questions.map((question) => questionCard(session, question))),
    open.length > 0
      ? h(
          "ul",
          { key: "findings", role: "list", class: "sr-list", "aria-label": "Findings", "data-home-area": "view" },
          ...inParts(session, "findings", open, SHOWN_FINDINGS, (item) => findingCard(session, item)),
        )
      : h("p", { key: "ok", class: "sr-ok" }, accepted.length ? "Nothing open." : "Nothing found."),
    accepted.length > 0 &&
      h(
        "details",
        { key: "accepted", class: "sr-group", "data-home-area": "view" },
        h("summary", null, `${accepted.length} accepted`),
        h("ul", { role: "list", class: "sr-list", "aria-label": "Accepted findings" }, ...accepted.map((item) => acceptedCard(session, item))),
      ),
    arrows(session, looked),
    signOffPart(session, looked),
  ];
}

/** No table in view: the workbook's tables, to choose one from. */
function nothingYet(session: Session): Child {
  const { book } = session.state;
  const tables = book.scanned?.scan.tables ?? [];
  return [
    h("h2", { key: "none", class: "sr-counts", tabindex: "-1", "data-home": "view" }, tables.length > 0 ? "Rate tables in this workbook" : book.status === "ready" ? "No rate table found in this workbook." : ""),
    tables.length > 0 && h("ul", { role: "list", key: "tables", class: "sr-list" }, ...inParts(session, "choose", tables, SHOWN_TABLES, (table) => tableCard(session, table))),
  ];
}

function countsLine({ open, accepted, questions }: Looked): VElement {
  const number = (severity: Severity): number => open.filter(({ finding }) => finding.severity === severity).length;
  const stops = count(number("stop"), "stop");
  return h(
    "h2",
    { key: "counts", class: "sr-counts", tabindex: "-1", "data-home": "view" },
    h(
      "span",
      { role: "status" },
      number("stop") > 0 ? h("strong", null, stops) : h("span", null, stops),
      ` · ${count(number("warning"), "warning")} · ${count(number("note"), "note")} · ${accepted.length} accepted`,
      questions.length > 0 ? ` · ${count(questions.length, "question")}` : "",
    ),
  );
}

/** Something only a person knows: asked once, kept with the table. */
function questionCard(session: Session, question: Question): VElement {
  return h(
    "li",
    { key: question.code, class: "sr-card sr-edge-question", "data-question": question.code },
    h("div", { class: "sr-card-head" }, h("span", { class: "sr-mark sr-question" }, h("span", { "aria-hidden": "true" }, "?"), " question")),
    h("p", { id: `sr-q-${question.code}` }, question.question),
    h(
      "div",
      { class: "sr-words sr-choices", role: "group", "aria-labelledby": `sr-q-${question.code}` },
      ...question.choices.map(({ answer, label }) => word(label, () => void session.answer(question, answer), { key: answer })),
    ),
  );
}

function arrows(session: Session, { claims, layout, role, entry, reading }: Looked): Child {
  if (!layout || role) return null;
  const unit = entry.unit ?? "";
  const answered = Object.keys(entry.answers ?? {}).length;
  return h(
    "section",
    { key: "arrows", "aria-labelledby": "sr-arrows", "data-home-area": "view" },
    h("h2", { id: "sr-arrows" }, "What the arrows claim"),
    claims.length === 0
      ? h("p", { class: "sr-soft" }, "No arrow can be read.")
      : h("ul", { role: "list", class: "sr-arrows" }, ...inParts(session, "arrows", claims, SHOWN_ARROWS, (claim) => arrowLine(session, reading.address, claim, unit))),
    answered > 0 && h("p", { class: "sr-soft" }, `${count(answered, "answer")} kept for this table. `, word("Ask again", () => void session.forgetAnswers())),
  );
}

function arrowLine(session: Session, table: RangeAddress, { from, to, rate, row, column }: Claim, unit: string): VElement {
  const title = `${from} → ${to}`;
  const cell = within(table, { row, column, rows: 1, columns: 1 });
  return h(
    "li",
    { key: `${row}-${column}`, "data-arrow": title },
    h("button", { type: "button", class: "sr-arrow", on: { click: () => void session.goTo(cell) } }, h("span", null, title), h("span", { class: "sr-soft" }, arrowClaim(rate, unit))),
  );
}
