import { describe, expect, it } from "vitest";
import { CANONICAL, localeOf } from "../../../../../src/host/practice/engine";
import { PercentTyping } from "../../../../../src/host/practice/page/percent-typing";

/** Types marks one after another; "<" is the backspace key. Gives what the field holds, the caret as "|". */
function typed(marks: string, { format = "0%", holds = "", locale = CANONICAL } = {}): string {
  const typing = new PercentTyping(format, holds, locale);
  let [text, caret] = [holds, holds.length];
  for (const mark of marks) {
    const back = mark === "<";
    const raw = { text: text.slice(0, back ? caret - 1 : caret) + (back ? "" : mark) + text.slice(caret), caret: back ? caret - 1 : caret + 1 };
    ({ text, caret } = typing.next(raw));
  }
  return `${text.slice(0, caret)}|${text.slice(caret)}`;
}

describe("typing into a percent cell", () => {
  it("shows the sign behind the first digit", () => {
    expect(typed("1")).toBe("1|%");
    expect(typed("12.5")).toBe("12.5|%");
    expect(typed("-3")).toBe("-3|%");
    expect(typed(".5")).toBe(".5|%");
    expect(typed("1,5", { locale: localeOf("de-DE") })).toBe("1,5|%");
  });
  it("takes a sign that is typed for its own, and goes with the last digit", () => {
    expect(typed("12%")).toBe("12%|");
    expect(typed("12<<")).toBe("|");
    expect(typed("12<<7")).toBe("7|%");
  });
  it("leaves formulas, words, what stood there before and other formats alone", () => {
    expect(typed("=A1*2")).toBe("=A1*2|");
    expect(typed("n/a")).toBe("n/a|");
    expect(typed("5", { holds: "1" })).toBe("15|");
    expect(typed("12", { format: "0.00" })).toBe("12|");
  });
});
