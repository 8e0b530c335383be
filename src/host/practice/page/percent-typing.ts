/**
 * A number typed into an empty percent cell means percent: the sign stands in the field from the first digit on, where
 * it is seen and can be deleted.
 */
import { isPercentFormat, type Locale } from "../engine";

export interface Typed {
  readonly text: string;
  readonly caret: number;
}

export class PercentTyping {
  private state: "due" | "shown" | "off";

  /** @param text - what the field holds as the edit opens */
  constructor(
    format: string,
    text: string,
    private readonly locale: Locale,
  ) {
    this.state = text === "" && isPercentFormat(format) ? "due" : "off";
  }

  /** What the field shall hold after a person has typed into it. */
  next(typed: Typed): Typed {
    const { text, caret } = typed;
    if (this.state === "off") return typed;
    if (text === "" || text === "%") {
      this.state = "due";
      return { text: "", caret: 0 };
    }
    if (this.state === "due") {
      const number = new RegExp(`^[+-]?\\d*${this.locale.decimal === "," ? "," : "\\."}?\\d+$`);
      if (!number.test(text)) return typed;
      this.state = "shown";
      return { text: `${text}%`, caret };
    }
    // The sign that a person types takes the place of ours.
    return text.endsWith("%%") ? { text: text.slice(0, -1), caret: Math.min(caret, text.length - 1) } : typed;
  }
}
