/** The sheets as words in the top line: a tab list, and a word that opens what can be done with a sheet. */
import type { Commands } from "./commands";
import { el, set } from "./dom";
import type { Editor } from "./editor";
import { Menu, type MenuItem } from "./menu";
import type { Session } from "./session";

export class SheetsLine {
  readonly element: HTMLElement;
  private readonly tabs = el("div", { class: "sheets", role: "tablist", "aria-label": "Sheets" });
  private readonly menu: Menu;
  private renaming = false;

  constructor(
    private readonly session: Session,
    private readonly editor: Editor,
    private readonly commands: Commands,
    private readonly focusGrid: () => void,
  ) {
    this.menu = new Menu("Sheet", () => this.items(), focusGrid);
    this.element = el("nav", { class: "sheets-line", "aria-label": "Sheets" }, this.tabs, this.menu.button);
    this.tabs.addEventListener("keydown", (event) => this.key(event));
    // A wheel over more sheets than fit moves along them.
    this.tabs.addEventListener("wheel", (event) => this.tabs.scrollBy({ left: event.deltaX + event.deltaY }), { passive: true });
    this.tabs.addEventListener("scroll", () => this.showEnds(), { passive: true });
    new ResizeObserver(() => this.revealCurrent()).observe(this.tabs);
    session.on("sheet", () => this.draw());
    session.book.on("sheets", () => this.draw());
    this.draw();
  }

  private draw(): void {
    if (this.renaming) return;
    const { session } = this;
    const hadFocus = this.tabs.contains(document.activeElement);
    this.tabs.replaceChildren(
      ...session.book
        .sheets()
        .filter((sheet) => !sheet.hidden)
        .map((sheet) => {
          const here = sheet.id === session.sheet;
          const tab = el("button", { type: "button", role: "tab", class: "sheet", "aria-selected": here ? "true" : "false", "aria-controls": "grid", tabindex: here ? 0 : -1, title: sheet.name, "data-sheet": sheet.id }, sheet.name);
          // While a formula is typed, another sheet is shown so that a range on it can be pointed at.
          tab.addEventListener("pointerdown", (event) => this.editor.pointing && event.preventDefault());
          tab.addEventListener("click", () => this.show(sheet.id));
          tab.addEventListener("dblclick", () => this.rename());
          return tab;
        }),
    );
    const current = this.revealCurrent();
    if (hadFocus) current?.focus();
  }

  private revealCurrent(): HTMLElement | null {
    const current = this.tabs.querySelector<HTMLElement>("[aria-selected=true]");
    current?.scrollIntoView({ block: "nearest", inline: "nearest" });
    this.showEnds();
    return current;
  }

  /** Where more sheets follow than fit, the line fades out. */
  private showEnds(): void {
    const { classList, scrollLeft, clientWidth, scrollWidth } = this.tabs;
    classList.toggle("more-before", scrollLeft > 1);
    classList.toggle("more-after", scrollLeft + clientWidth < scrollWidth - 1);
  }

  private show(id: string): void {
    if (this.editor.pointing || this.editor.commit()) this.session.show(id);
  }

  private key(event: KeyboardEvent): void {
    const by = event.key === "ArrowRight" ? 1 : event.key === "ArrowLeft" ? -1 : 0;
    if (this.renaming) return;
    if (by !== 0) {
      event.preventDefault();
      this.commands.nextSheet(by);
    } else if (event.key === "F2") {
      event.preventDefault();
      this.rename();
    } else if (event.key === "Enter" || event.key === "ArrowDown" || event.key === " ") {
      event.preventDefault();
      this.focusGrid();
    }
  }

  private items(): MenuItem[][] {
    const { session } = this;
    const { book } = session;
    const sheets = book.sheets();
    const here = sheets.findIndex((sheet) => sheet.id === session.sheet);
    const shown = sheets.filter((sheet) => !sheet.hidden).length;
    const name = session.sheetName();
    const then = (act: () => void) => (): void => void (this.editor.commit() && act());
    const perform = session.perform.bind(session);
    return [
      sheets
        .filter((sheet) => !sheet.hidden)
        .map((sheet) => ({ text: sheet.name, checked: sheet.id === session.sheet, act: () => this.show(sheet.id) })),
      [
        { text: "New sheet", act: then(() => this.add()) },
        { text: "Rename", act: then(() => this.rename()), keys: "F2" },
        { text: "Move left", act: then(() => perform([{ kind: "moveSheet", sheet: session.sheet, to: here - 1 }], `moving ${name}`)), disabled: here === 0 },
        { text: "Move right", act: then(() => perform([{ kind: "moveSheet", sheet: session.sheet, to: here + 1 }], `moving ${name}`)), disabled: here === sheets.length - 1 },
        { text: "Hide", act: then(() => perform([{ kind: "hideSheet", sheet: session.sheet, hidden: true }], `hiding ${name}`)), disabled: shown === 1 },
        { text: "Delete", act: then(() => perform([{ kind: "removeSheet", sheet: session.sheet }], `deleting sheet ${name}`)), disabled: shown === 1 },
      ],
      sheets
        .filter((sheet) => sheet.hidden)
        .map((sheet) => ({
          text: `Show ${sheet.name}`,
          act: then(() => perform([{ kind: "hideSheet", sheet: sheet.id, hidden: false }], `showing ${sheet.name}`) && session.show(sheet.id)),
        })),
      [
        { text: "Hide rows", act: () => this.commands.hide("rows", true) },
        { text: "Hide columns", act: () => this.commands.hide("columns", true) },
        { text: "Show rows in the selection", act: () => this.commands.hide("rows", false) },
        { text: "Show columns in the selection", act: () => this.commands.hide("columns", false) },
      ],
      [
        { text: "Merge the selected cells", act: () => this.commands.merge(true), disabled: session.area.rows * session.area.columns === 1 },
        { text: "Part merged cells", act: () => this.commands.merge(false) },
      ],
    ];
  }

  private add(): void {
    const { session } = this;
    const sheets = session.book.sheets();
    const at = sheets.findIndex((sheet) => sheet.id === session.sheet) + 1;
    session.attempt(() => {
      const [id] = session.book.apply([{ kind: "addSheet", name: session.book.freeName("Sheet"), at }], "a new sheet").addedSheets;
      if (id) session.show(id);
    });
  }

  /** The word of the tab becomes a field; Enter keeps the name, Escape the old one. */
  private rename(): void {
    const { session } = this;
    const tab = this.tabs.querySelector<HTMLElement>("[aria-selected=true]");
    if (!tab || this.renaming || session.readOnly !== null) return;
    const sheet = session.sheet;
    const field = el("input", { class: "rename", "aria-label": `New name of sheet ${session.sheetName()}`, value: session.sheetName(), maxlength: 31, size: Math.max(6, session.sheetName().length) });
    this.renaming = true;
    let done = false;
    const end = (keep: boolean): void => {
      if (done) return;
      const name = field.value.trim();
      if (keep && name !== session.sheetName(sheet) && name !== "") {
        // A refused name stays in the field, with the reason said.
        if (!session.perform([{ kind: "renameSheet", sheet, name }], `renaming a sheet to ${name}`)) {
          set(field, "aria-invalid", "true");
          return;
        }
      }
      done = true;
      this.renaming = false;
      this.draw();
      this.focusGrid();
    };
    field.addEventListener("keydown", (event) => {
      event.stopPropagation();
      if (event.key === "Enter") end(true);
      else if (event.key === "Escape") end(false);
    });
    field.addEventListener("blur", () => {
      end(true);
      end(false);
    });
    tab.replaceWith(field);
    field.select();
  }
}
