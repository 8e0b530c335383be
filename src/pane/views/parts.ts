import type { Severity } from "../../audit/finding";
import { cellText, placeText } from "../address";
import { h, type Child, type VElement } from "../dom";
import type { Session } from "../session";
import type { RangeAddress } from "../workbook";

const MARKS: Readonly<Record<Severity, string>> = { stop: "■", warning: "▲", note: "●" };

/** "■ stop": mark and word, so that nothing rests on colour. */
export function severityMark(severity: Severity): VElement {
  return h("span", { class: `sr-mark sr-${severity}` }, h("span", { "aria-hidden": "true" }, MARKS[severity]), ` ${severity}`);
}

/** A button that is a word. */
export function word(label: string, act: () => void, extra: Record<string, unknown> = {}): VElement {
  return h("button", { type: "button", class: "sr-word", on: { click: act }, ...extra }, label);
}

/** The address of cells as a button that selects them. */
export function jump(session: Session, range: RangeAddress, withSheet = false): VElement {
  const text = withSheet ? placeText(range) : cellText(range);
  return h(
    "button",
    { type: "button", class: "sr-jump", "aria-label": `Select ${placeText(range)}`, on: { click: () => void session.goTo(range) } },
    text,
  );
}

export interface Field {
  readonly name: string;
  readonly label: string;
  readonly value?: string;
  readonly size?: number;
  readonly long?: boolean;
  readonly hint?: string;
}

/** A small form in place: labelled fields, a word that does it, and Cancel (also Escape). All fields are needed. */
export function form(key: string, fields: readonly Field[], submit: string, done: (values: Record<string, string>) => void, cancel: () => void): VElement {
  return h(
    "form",
    {
      key,
      class: "sr-form",
      on: {
        submit: (event) => {
          event.preventDefault();
          const data = new FormData(event.target as HTMLFormElement);
          done(Object.fromEntries(fields.map(({ name }) => [name, String(data.get(name) ?? "")])));
        },
        keydown: (event) => {
          if ((event as KeyboardEvent).key === "Escape") cancel();
        },
      },
    },
    ...fields.map(({ name, label, value, size, long, hint }) =>
      h(
        "label",
        { key: name, class: long ? "sr-field sr-long" : "sr-field" },
        h("span", null, label),
        h("input", { name, value, required: true, size, maxlength: long ? 300 : 40, autocomplete: "off", spellcheck: "false", "data-autofocus": name === fields[0].name }),
        hint ? h("span", { class: "sr-soft" }, hint) : null,
      ),
    ),
    h("div", { class: "sr-words" }, h("button", { type: "submit", class: "sr-word sr-do" }, submit), word("Cancel", cancel)),
  );
}

/** A long list is drawn in parts; the word at its end says how many are left. */
export function inParts<T>(session: Session, list: string, all: readonly T[], first: number, draw: (item: T, at: number) => Child): Child[] {
  const count = session.state.drawn[list] ?? first;
  const left = all.length - count;
  const more = Math.min(left, Math.max(first, 200));
  return [
    ...all.slice(0, count).map(draw),
    left > 0 && h("li", { key: "more", class: "sr-more" }, word(more === left ? `Show the other ${left}` : `Show ${more} more of ${left}`, () => session.drawMore(list, count + more))),
  ];
}

/** "1 stop", "2 stops". */
export function count(number: number, noun: string): string {
  return `${number} ${noun}${number === 1 ? "" : "s"}`;
}

const MONTHS = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];

/** "2026-12-01" → "1 Dec 2026"; anything else is shown as it is. */
export function dateWords(iso: string): string {
  const parts = /^(\d{4})-(\d\d)-(\d\d)/.exec(iso);
  const month = parts && MONTHS[Number(parts[2]) - 1];
  return parts && month ? `${Number(parts[3])} ${month} ${parts[1]}` : iso;
}
