import { rateWords } from "../../cells/sentences/arrows";
import type { CompareRow } from "../../table/compare";
import { h, type Child, type VElement } from "../dom";
import type { Looked } from "../examine";
import type { Session } from "../session";
import { count, dateWords, form, inParts, word } from "./parts";

const SHOWN_CHANGES = 30;

/** Who checked this table, when, and what has changed since; and the sheet that a reviewer gets. */
export function signOffPart(session: Session, looked: Looked): VElement {
  return h(
    "section",
    { key: "sign-off", class: "sr-signoff", "aria-labelledby": "sr-signoff", "data-home-area": "sign-off" },
    h("h2", { id: "sr-signoff", tabindex: "-1", "data-home": "sign-off" }, "Sign-off"),
    status(session, looked),
    h("div", { class: "sr-words" }, signWord(session, looked), word("Write a check sheet", () => void session.writeCheckSheet(), { key: "sheet" })),
    session.state.opened?.kind === "signOff" &&
      form(
        "sign",
        [{ name: "checker", label: "Checked by", value: session.lastInitials, size: 16 }],
        "Sign off",
        ({ checker }) => void session.signOff(checker),
        () => session.open(null),
      ),
  );
}

function status(session: Session, { entry, fingerprint, changes }: Looked): Child {
  const { signOff } = entry;
  const print = fingerprint ? h("span", { class: "sr-print" }, fingerprint) : null;
  if (!signOff) return h("p", { class: "sr-soft" }, "Not signed off.", print ? " Fingerprint " : "", print);
  const by = `${dateWords(signOff.date)} by ${signOff.checker}`;
  if (signOff.fingerprint === fingerprint) return h("p", { class: "sr-ok" }, `Signed off on ${by}. Fingerprint `, print);
  return [
    h("p", { class: "sr-changed" }, h("strong", null, `Changed since signed off on ${by}.`), changes ? "" : " It does not read as a table now."),
    changes &&
      h(
        "ul",
        { role: "list", class: "sr-changes", "aria-label": "Arrows that differ from the signed-off table" },
        ...inParts(session, "changes", changes, SHOWN_CHANGES, (change) => h("li", null, changeWords(change, entry.unit ?? ""))),
      ),
  ];
}

function signWord(session: Session, { entry, fingerprint, open, table }: Looked): Child {
  if (session.state.memory !== "ready" || !table.table || session.state.opened?.kind === "signOff") return null;
  const stops = open.filter(({ finding }) => finding.severity === "stop").length;
  if (stops > 0) return h("p", { class: "sr-soft" }, `Sign-off waits for ${count(stops, "open stop")}.`);
  const signed = entry.signOff?.fingerprint === fingerprint;
  return signed
    ? word("Withdraw sign-off", () => void session.withdrawSignOff(), { key: "withdraw" })
    : word(entry.signOff ? "Sign off again…" : "Sign off…", () => session.open({ kind: "signOff" }), { key: "sign", "data-opens": "signOff" });
}

/** "Running → Degraded: was 0.02 a day, now 0.025 a day". */
export function changeWords(change: CompareRow, unit: string): string {
  if (change.kind !== "arrow") return `${change.state}: ${change.kind === "onlyBefore" ? "state gone" : "new state"}`;
  const arrow = `${change.from} → ${change.to}`;
  if (change.before === 0) return `${arrow}: new, ${rateWords(change.after, unit)}`;
  if (change.after === 0) return `${arrow}: gone, was ${rateWords(change.before, unit)}`;
  return `${arrow}: was ${rateWords(change.before, unit)}, now ${rateWords(change.after, unit)}`;
}
