import { h, type Child, type VElement } from "../dom";
import type { Session } from "../session";
import { count, dateWords, word } from "./parts";

/** Life among people with and without the add-in: calculation, names that are not known, values in place of formulas. */
export function sharingPart(session: Session): VElement | null {
  const { sharing, opened, book } = session.state;
  if (!sharing) return null;
  const { calculation, unlinked, frozen } = sharing;
  const formulas = book.scanned?.scan.formulas.length ?? 0;
  return h(
    "section",
    { key: "sharing", "aria-labelledby": "sr-sharing", "data-home-area": "sharing" },
    h("h2", { id: "sr-sharing", tabindex: "-1", "data-home": "sharing" }, "Sharing this workbook"),
    line(
      "calculation",
      calculation === "manual" ? [h("span", { class: "sr-mark sr-warning" }, h("span", { "aria-hidden": "true" }, "▲"), " warning"), " Calculation is manual: figures may be old."] : "Calculation is automatic.",
      word("Recalculate", () => void session.share("recalculate")),
    ),
    unlinked.length > 0 && line("relink", `${count(unlinked.length, "formula")} lost the link to the add-in.`, word("Relink", () => void session.share("relink"))),
    frozen.length > 0 && line("thaw", `${count(frozen.length, "formula")} frozen to values on ${dateWords(frozen[0].date)}.`, word("Put the formulas back", () => void session.share("thaw"))),
    formulas > 0 && opened?.kind !== "freeze" && line("freeze", "For people without the add-in:", word("Freeze to values…", () => session.open({ kind: "freeze" }), { "data-opens": "freeze" })),
    opened?.kind === "freeze" &&
      h(
        "div",
        { key: "freezing", class: "sr-card", on: { keydown: (event) => (event as KeyboardEvent).key === "Escape" && session.open(null) } },
        h("p", null, `Values take the place of ${count(formulas, "CTMC formula")}. The formulas are kept in the workbook with date and fingerprint, listed on a new sheet, and can be put back.`),
        h("div", { class: "sr-words" }, word(`Freeze ${count(formulas, "formula")}`, () => void session.share("freeze"), { class: "sr-word sr-do", "data-autofocus": true }), word("Leave as it is", () => session.open(null))),
      ),
  );
}

function line(key: string, text: Child, action: VElement): VElement {
  return h("p", { key, class: "sr-line" }, h("span", null, text), action);
}
