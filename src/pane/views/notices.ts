import { h, type VElement } from "../dom";
import type { Session } from "../session";
import { count, word } from "./parts";

/** What was just done and can be undone, what went wrong, and what is wrong with what was kept; announced politely. */
export function notices(session: Session): VElement {
  const { notice, trouble, memory, setAside } = session.state;
  return h(
    "div",
    { key: "notices", class: "sr-notices", "data-home-area": "view" },
    h(
      "div",
      { role: "status" },
      notice &&
        h(
          "p",
          { class: "sr-notice" },
          h("span", null, notice.text),
          notice.undo && word("Undo", () => void session.undo(), { key: "undo" }),
          notice.jump && word(notice.jump.label, () => void session.goTo(notice.jump!.range), { key: "jump" }),
          word("Close", () => session.dismiss(), { key: "close" }),
        ),
      memory === "newer" &&
        h("p", { class: "sr-notice" }, "What was kept with this workbook (units, accepted findings, sign-offs) was written by a newer version of Stayrate. It is left untouched, and nothing new is kept."),
      setAside > 0 &&
        h("p", { class: "sr-notice" }, `${count(setAside, "piece")} of what was kept with this workbook could not be read. Set aside in the workbook, not lost.`),
    ),
    h("div", { role: "alert" }, trouble && h("p", { class: "sr-notice sr-trouble" }, h("span", null, trouble), word("Close", () => session.dismiss(), { key: "close" }))),
  );
}
