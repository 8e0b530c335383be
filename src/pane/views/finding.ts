import { cellName } from "../../audit/a1";
import { cellText } from "../address";
import { h, type Child, type VElement } from "../dom";
import type { Item } from "../examine";
import type { Session } from "../session";
import type { Preview } from "../state";
import { count, dateWords, form, jump, severityMark, word } from "./parts";

const SHOWN_CHANGES = 12;
const SHOWN_PLACES = 6;

/** One open finding: mark and word, place, sentence, what to do, and the words that do it. */
export function findingCard(session: Session, item: Item): VElement {
  const { opened } = session.state;
  const accepting = opened?.kind === "accept" && opened.key === item.key;
  const preview = opened?.kind === "remedy" && opened.key === item.key ? opened.preview : null;
  return h(
    "li",
    { key: item.key, class: `sr-card sr-edge-${item.finding.severity}`, "data-finding": item.finding.code },
    h("div", { class: "sr-card-head" }, severityMark(item.finding.severity), item.address && jump(session, item.address)),
    h("p", null, item.sentence),
    item.also.length > 0 && alsoIn(session, item),
    // A refusal says itself what is needed, unless another finding is its cause.
    item.advice !== "" && (!item.finding.problem || item.finding.details.explained === true) && h("p", { class: "sr-soft" }, item.advice),
    item.formerly &&
      h("p", { class: "sr-soft" }, `Accepted by ${item.formerly.initials} on ${dateWords(item.formerly.date)} (${item.formerly.reason}), but the values have changed since.`),
    accepting
      ? form(
          "accept",
          [
            { name: "reason", label: "Why it may stand", value: item.formerly?.reason, long: true },
            { name: "initials", label: "Initials", value: session.lastInitials, size: 6 },
          ],
          "Accept",
          ({ reason, initials }) => void session.accept(item, reason, initials),
          () => session.open(null),
        )
      : preview
        ? previewOf(session, item, preview)
        : h(
            "div",
            { class: "sr-words" },
            item.remedy && word(`${item.remedy.label}${item.remedy.remedy.kind === "selection" ? "" : "…"}`, () => void session.openRemedy(item), { key: "remedy", "data-opens": `remedy ${item.key}` }),
            session.state.memory === "ready" && word("Accept…", () => session.open({ kind: "accept", key: item.key }), { key: "accept", "data-opens": `accept ${item.key}` }),
          ),
  );
}

/** Further places of the same mistake, the first few as places to go to. */
function alsoIn(session: Session, { also }: Item): VElement {
  const rest = also.length - SHOWN_PLACES;
  return h("p", { class: "sr-also" }, h("span", { class: "sr-soft" }, "Also in"), ...also.slice(0, SHOWN_PLACES).map((place) => jump(session, place)), rest > 0 && h("span", { class: "sr-soft" }, `and ${rest} more`));
}

/** An accepted finding, smaller: what, where, who, why. */
export function acceptedCard(session: Session, item: Item): VElement {
  const accepted = item.accepted!;
  return h(
    "li",
    { key: item.key, class: "sr-card sr-accepted", "data-finding": item.finding.code },
    h("div", { class: "sr-card-head" }, severityMark(item.finding.severity), item.address && jump(session, item.address)),
    h("p", null, item.sentence),
    h("p", { class: "sr-soft" }, `${accepted.initials}, ${dateWords(accepted.date)}: ${accepted.reason}`),
    h("div", { class: "sr-words" }, word("Take back", () => void session.takeBack(item))),
  );
}

/** Before and after, then the word that does it. */
function previewOf(session: Session, item: Item, preview: Preview): VElement {
  const formulas = preview.changes.filter((change) => change.replacesFormula).length;
  const example = preview.changes.find(({ formula }) => formula !== "")?.formula;
  return h(
    "div",
    {
      key: "preview",
      class: "sr-preview",
      on: { keydown: (event) => (event as KeyboardEvent).key === "Escape" && session.open(null) },
    },
    preview.place ? newTable(preview) : changesTable(preview),
    example && h("p", { class: "sr-soft" }, "Written as formulas that follow the rates, such as ", h("code", null, example)),
    formulas > 0 && h("p", { class: "sr-soft" }, formulas === 1 ? "One cell holds a formula; a value would replace it." : `${formulas} cells hold formulas; values would replace them.`),
    preview.obstacle && h("p", { class: "sr-obstacle" }, preview.obstacle),
    h(
      "div",
      { class: "sr-words" },
      preview.write &&
        word(preview.place ? `Write to ${cellText(preview.place)}` : `Change ${count(preview.changes.length, "cell")}`, () => void session.applyRemedy(item), {
          class: "sr-word sr-do",
          "data-autofocus": true,
        }),
      word("Leave as it is", () => session.open(null), { "data-autofocus": !preview.write }),
    ),
  );
}

function changesTable({ changes }: Preview): VElement {
  const rest = changes.length - SHOWN_CHANGES;
  return h(
    "table",
    null,
    h("caption", null, "Before and after"),
    h("thead", null, h("tr", null, ...["cell", "now", "then"].map((title) => h("th", { scope: "col" }, title)))),
    h(
      "tbody",
      null,
      ...changes
        .slice(0, SHOWN_CHANGES)
        .map(({ row, column, before, after }) => h("tr", null, h("th", { scope: "row" }, cellName(row, column)), h("td", null, before), h("td", null, after))),
      rest > 0 && h("tr", null, h("td", { colspan: "3" }, `and ${count(rest, "cell")} more`)),
    ),
  );
}

function newTable({ place, table }: Preview): Child {
  const columns = Math.min(5, table[0]?.length ?? 0);
  const rows = table.slice(0, 8);
  const cut = table.length > rows.length || (table[0]?.length ?? 0) > columns;
  return [
    h("p", { class: "sr-soft" }, `A new table in ${cellText(place!)}, where the sheet is blank. Yours stays as it is.`),
    h(
      "div",
      { class: "sr-scroll" },
      h("table", null, h("caption", null, cut ? "Its first cells" : "What it holds"), h("tbody", null, ...rows.map((row) => h("tr", null, ...row.slice(0, columns).map((text) => h("td", null, text)))))),
    ),
  ];
}
