/** The line under the sheet: what follows from the table, what is selected, where the work is kept. */
import type { Announcer } from "./announce";
import { el, word } from "./dom";
import { KEYS } from "./keyboard";
import { areaOf, blockAround } from "./selection";
import type { Session } from "./session";

/** Selections up to this size are added up. */
const SUMMED = 20_000;
const CALM = 120;

/** Where the command key does what the control key does elsewhere. */
function onThisKeyboard(keys: string): string {
  return /^(Mac|iP)/.test(navigator.platform) ? keys.replaceAll("Ctrl", "Cmd") : keys;
}

export class FootLine {
  readonly element: HTMLElement;
  private readonly follows = el("span", { class: "follows" });
  private readonly sum = el("span", { class: "sum" });
  private readonly kept = el("span", { class: "kept" });
  private readonly ask = el("span", { class: "ask" });
  private readonly keys = el("div", { class: "keys", id: "keys", role: "region", "aria-label": "Keys", hidden: true });
  private timer: ReturnType<typeof setTimeout> | null = null;

  constructor(
    private readonly session: Session,
    announcer: Announcer,
    private readonly startOver: () => void,
  ) {
    const keysWord = word("Keys", () => this.showKeys(this.keys.hidden === true, keysWord), { "aria-expanded": "false", "aria-controls": "keys" });
    this.keys.append(el("dl", {}, ...KEYS.flatMap(([key, what]) => [el("dt", {}, onThisKeyboard(key)), el("dd", {}, what)])));
    this.keys.addEventListener("keydown", (event) => {
      if (event.key !== "Escape") return;
      this.showKeys(false, keysWord);
      keysWord.focus();
    });
    this.element = el("footer", { class: "foot-line" }, this.follows, this.sum, announcer.element, this.kept, this.ask, keysWord, this.keys);
    this.offer();
    for (const event of ["selection", "sheet"] as const) session.on(event, () => this.soon());
    session.book.on("change", () => this.soon());
    this.soon();
  }

  private showKeys(shown: boolean, button: HTMLElement): void {
    this.keys.hidden = !shown;
    button.setAttribute("aria-expanded", String(shown));
  }

  /** How and where the work is kept, in words. */
  keeping(text: string, failed: boolean): void {
    this.kept.textContent = text;
    this.kept.classList.toggle("failed", failed);
  }

  /** Start over asks first, in the line itself. */
  private offer(): void {
    this.element.classList.remove("asking");
    this.ask.replaceChildren(
      word("Start over", () => {
        const no = word("No, keep it", () => {
          this.offer();
          this.ask.querySelector("button")?.focus();
        });
        this.ask.replaceChildren(
          el("span", { role: "alert" }, "Put the example back and lose everything typed here?"),
          word("Yes, start over", () => {
            this.offer();
            this.startOver();
          }),
          no,
        );
        this.element.classList.add("asking");
        this.ask.addEventListener("keydown", (event) => event.key === "Escape" && no.click(), { once: true });
        no.focus();
      }),
    );
  }

  private soon(): void {
    this.timer ??= setTimeout(() => {
      this.timer = null;
      this.draw();
    }, CALM);
  }

  private draw(): void {
    const { session } = this;
    const selected = areaOf(session.selection);
    const many = selected.rows * selected.columns > 1;
    const area = many ? selected : blockAround(session, session.active);
    const count = session.book.dependents({ sheet: session.sheet, ...area });
    const what = many ? "the selection" : area.rows * area.columns > 1 ? "this table" : "this cell";
    this.follows.textContent = count === 0 ? "" : `${count} ${count === 1 ? "result follows" : "results follow"} ${what}`;
    this.sum.textContent = many ? this.summed(selected.rows * selected.columns) : "";
  }

  private summed(cells: number): string {
    if (cells > SUMMED) return `${cells.toLocaleString()} cells`;
    const { book, sheet, area } = this.session;
    let numbers = 0;
    let sum = 0;
    for (let row = area.row; row < area.row + area.rows; row += 1) {
      for (let column = area.column; column < area.column + area.columns; column += 1) {
        const value = book.scalar(sheet, row, column);
        if (typeof value !== "number") continue;
        numbers += 1;
        sum += value;
      }
    }
    const size = `${area.rows} × ${area.columns} cells`;
    if (numbers === 0) return size;
    return `${size}, ${numbers} ${numbers === 1 ? "number" : "numbers"}, sum ${sum.toLocaleString(book.locale.tag, { maximumSignificantDigits: 8 })}`;
  }
}
