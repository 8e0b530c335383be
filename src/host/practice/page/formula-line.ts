/** The line over the sheet: the address, the formula, and how numbers are shown. */
import { areaText, pieces } from "../engine";
import type { Commands } from "./commands";
import { el, set } from "./dom";
import type { Editor } from "./editor";
import { NUMBER_STYLES, formatOf, styleOf } from "./formats";
import { Menu, type MenuGroups } from "./menu";
import { areaOf } from "./selection";
import type { Session } from "./session";

export class FormulaLine {
  readonly element: HTMLElement;
  private readonly address = el("input", { class: "address", "aria-label": "Address. Type one to go there", spellcheck: "false", autocomplete: "off", maxlength: 80 });

  constructor(
    private readonly session: Session,
    editor: Editor,
    private readonly commands: Commands,
    private readonly focusGrid: () => void,
  ) {
    const numbers = new Menu("Numbers", () => this.items(), focusGrid);
    this.element = el("div", { class: "formula-line", role: "group", "aria-label": "Formula" }, this.address, editor.bar.element, numbers.button);
    this.address.addEventListener("focus", () => this.address.select());
    this.address.addEventListener("blur", () => this.draw());
    this.address.addEventListener("keydown", (event) => {
      if (event.key === "Enter") {
        event.preventDefault();
        this.go();
      } else if (event.key === "Escape") {
        event.preventDefault();
        this.focusGrid();
      }
    });
    commands.goTo = () => this.address.focus();
    session.on("selection", () => this.draw());
    this.draw();
  }

  private draw(): void {
    if (document.activeElement === this.address) return;
    const area = areaOf(this.session.selection);
    this.address.value = areaText(area);
    set(this.address, "aria-invalid", null);
  }

  private go(): void {
    const { session } = this;
    const text = this.address.value.trim();
    const [, piece, ...more] = pieces(`=${text}`, session.book.locale);
    const found = more.length === 0 ? piece?.reference : undefined;
    const sheet = found?.sheetName == null ? session.sheet : session.book.sheetNamed(found.sheetName)?.id;
    if (!found || sheet === undefined) {
      set(this.address, "aria-invalid", "true");
      session.say(`"${text}" is no address. Type one such as B3, B3:F7 or Plan!B3.`);
      this.address.select();
      return;
    }
    if (session.book.sheets().some((entry) => entry.id === sheet && entry.hidden)) {
      session.say("That sheet is hidden. Sheet, Show brings it back.");
      return;
    }
    this.commands.select({ sheet, row: found.row, column: found.column, rows: found.rows, columns: found.columns });
    this.focusGrid();
  }

  private items(): MenuGroups {
    const { session, commands } = this;
    const { row, column } = session.active;
    const view = session.book.view(session.sheet, row, column);
    const current = styleOf(view.format);
    const words: Readonly<Record<(typeof NUMBER_STYLES)[number], string>> = { general: "General", fixed: "Fixed decimals", percent: "Percent", scientific: "Scientific", date: "Date", text: "As text" };
    return [
      NUMBER_STYLES.map((style) => ({ text: words[style], checked: style === current, act: () => commands.numbers(style) })),
      [
        { text: "More decimals", act: () => commands.decimals(1), disabled: view.format === formatOf("text") },
        { text: "Fewer decimals", act: () => commands.decimals(-1), disabled: view.format === formatOf("text") },
      ],
      [{ text: view.bold ? "Not bold" : "Bold", act: () => commands.bold(), keys: "Ctrl B" }],
      [
        { text: "Fit column width", act: () => commands.fit() },
        { text: "Wider column", act: () => commands.widen(8), keys: "Alt Shift →" },
        { text: "Narrower column", act: () => commands.widen(-8), keys: "Alt Shift ←" },
        { text: "Usual width", act: () => commands.usualWidth() },
      ],
    ];
  }
}
