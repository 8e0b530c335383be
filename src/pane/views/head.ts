import { perUnit } from "../../cells/sentences/arrows";
import type { Layout } from "../../table/rate-table";
import { cellText } from "../address";
import { h, type VElement } from "../dom";
import type { Session } from "../session";
import { VIEWS, type View } from "../state";
import { count, form, word } from "./parts";

const TAB_WORDS: Readonly<Record<View, string>> = { check: "Check", book: "Book" };

/** What the pane looks at, in one line: place, states, arrows, unit, names, form. */
export function head(session: Session): VElement {
  const { subject, looked, opened, held, busy } = session.state;
  if (!subject || !looked)
    return h(
      "header",
      { class: "sr-head" },
      h("h1", { class: "sr-place" }, busy ? "Looking for a rate table…" : "No rate table in view"),
      h("p", { class: "sr-what" }, busy ? "" : "Select a table, or a cell in it. ", refresh(session)),
    );
  const { layout } = looked;
  const unit = looked.entry.unit ?? "";
  return h(
    "header",
    { class: "sr-head" },
    h(
      "h1",
      { class: "sr-place" },
      h(
        "button",
        { type: "button", class: "sr-place-jump", title: "Select the table", on: { click: () => void session.goTo(subject.address) } },
        h("span", { class: "sr-sheet" }, subject.address.sheet),
        ` ${cellText(subject.address)}`,
      ),
    ),
    h(
      "p",
      { class: "sr-what" },
      layout ? count(layout.size, "state") : "not read as a table",
      layout ? ` · ${looked.role ? `${looked.role}, not rates` : count(looked.claims.length, "arrow")}` : "",
      " · ",
      session.state.memory === "ready"
        ? word(unit === "" ? "unit not set" : perUnit(unit), () => void session.openUnit(), {
            key: "unit",
            "data-opens": "unit",
            "aria-expanded": opened?.kind === "unit" ? "true" : "false",
            "aria-label": unit === "" ? "Unit not set. Set the unit of this table" : `${perUnit(unit)}. Change the unit of this table`,
          })
        : "unit not known",
      layout ? ` · ${formWords(layout)}` : "",
      ...(subject.leftOut ?? []).map((line) => ` · ${line} left out`),
      " ",
      h(
        "button",
        {
          type: "button",
          key: "hold",
          class: "sr-hold",
          "aria-pressed": held ? "true" : "false",
          title: held ? "The selection is not followed" : "Stay on this table whatever is selected",
          on: { click: () => session.hold(!held) },
        },
        "Hold",
      ),
      " ",
      refresh(session),
    ),
    opened?.kind === "unit" &&
      form(
        "unit-form",
        [{ name: "unit", label: "Rates are per", value: opened.suggestion, size: 12, hint: "One word, such as day, h or 1e6 h. It is only shown, never used to convert." }],
        "Keep",
        ({ unit: typed }) => void session.setUnit(typed),
        () => session.open(null),
      ),
  );
}

function refresh(session: Session): VElement {
  return word("Refresh", () => void session.refresh(), { key: "refresh", title: "Read the table and the workbook again" });
}

/** The views as tabs: arrow keys move, the chosen one is in the tab order. */
export function tabs(session: Session): VElement {
  const { view } = session.state;
  return h(
    "div",
    { class: "sr-tabs", role: "tablist", "aria-label": "Views" },
    ...VIEWS.map((tab, at) =>
      h(
        "button",
        {
          type: "button",
          key: tab,
          role: "tab",
          id: `sr-tab-${tab}`,
          class: "sr-tab",
          "aria-selected": tab === view ? "true" : "false",
          "aria-controls": "sr-panel",
          tabindex: tab === view ? "0" : "-1",
          on: {
            click: () => session.show(tab),
            keydown: (event) => {
              const to = { ArrowRight: at + 1, ArrowLeft: at - 1, Home: 0, End: VIEWS.length - 1 }[(event as KeyboardEvent).key];
              if (to === undefined) return;
              event.preventDefault();
              const next = VIEWS[(to + VIEWS.length) % VIEWS.length];
              session.show(next);
              (event.currentTarget as HTMLElement).parentElement?.querySelector<HTMLElement>(`#sr-tab-${next}`)?.focus();
            },
          },
        },
        TAB_WORDS[tab],
      ),
    ),
  );
}

function formWords(layout: Layout): string {
  if (layout.form === "list") return "list of arrows";
  const names = { both: "names on top and left", top: "names on top", left: "names on the left", none: "no names" }[layout.headings];
  return `square, ${names}`;
}
