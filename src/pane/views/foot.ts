import { CAUTIONS } from "../cautions";
import { h, type VElement } from "../dom";

/** The cautions: one line always, the full text on demand. */
export function foot(): VElement {
  return h(
    "footer",
    { class: "sr-foot" },
    h(
      "details",
      { key: "cautions" },
      h("summary", null, "A planning aid with constant rates: its limits"),
      h(
        "div",
        { class: "sr-cautions" },
        ...CAUTIONS.map((text) => h("p", null, text)),
      ),
    ),
  );
}
