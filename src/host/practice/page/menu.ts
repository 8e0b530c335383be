/** A word that opens a list of words (the menu button pattern): arrows move, a letter finds, Escape closes. */
import { el, set } from "./dom";

export interface MenuItem {
  readonly text: string;
  readonly act: () => void;
  /** For choices: whether it is the one in force. */
  readonly checked?: boolean;
  readonly keys?: string;
  readonly disabled?: boolean;
}

/** A line is drawn between groups. */
export type MenuGroups = readonly (readonly MenuItem[])[];

let numbered = 0;

export class Menu {
  readonly button: HTMLButtonElement;
  private readonly list: HTMLElement;

  constructor(
    label: string,
    private readonly groups: () => MenuGroups,
    private readonly back: () => void,
    more: Readonly<Record<string, string>> = {},
  ) {
    const id = `menu${(numbered += 1)}`;
    this.button = el("button", { type: "button", class: "word opens", "aria-haspopup": "menu", "aria-expanded": "false", "aria-controls": id, ...more }, label);
    this.list = el("div", { class: "menu", role: "menu", id, "aria-label": label, hidden: true });
    this.button.addEventListener("click", () => (this.list.hidden ? this.open(0) : this.close(true)));
    this.button.addEventListener("keydown", (event) => {
      if (event.key !== "ArrowDown" && event.key !== "ArrowUp") return;
      event.preventDefault();
      this.open(event.key === "ArrowDown" ? 0 : -1);
    });
    this.list.addEventListener("keydown", (event) => this.key(event));
    this.list.addEventListener("focusout", (event) => {
      if (!this.list.contains(event.relatedTarget as Node | null)) this.close(false);
    });
  }

  private items(): HTMLElement[] {
    return [...this.list.querySelectorAll<HTMLElement>("[role^=menuitem]")];
  }

  private open(focus: 0 | -1): void {
    const groups = this.groups().filter((group) => group.length > 0);
    this.list.replaceChildren(
      ...groups.map((group) =>
        el(
          "div",
          { class: "group", role: "group" },
          ...group.map((item) => {
            const choice = item.checked !== undefined;
            const button = el(
              "button",
              { type: "button", tabindex: -1, role: choice ? "menuitemradio" : "menuitem", "aria-checked": choice ? String(item.checked) : null, "aria-disabled": item.disabled ? "true" : null },
              el("span", {}, item.text),
              item.keys ? el("kbd", {}, item.keys) : null,
            );
            button.addEventListener("click", () => {
              if (item.disabled) return;
              this.close(false);
              this.back();
              item.act();
            });
            return button;
          }),
        ),
      ),
    );
    document.body.append(this.list);
    this.list.hidden = false;
    set(this.button, "aria-expanded", "true");
    const box = this.button.getBoundingClientRect();
    const { style } = this.list;
    style.left = `${Math.max(4, Math.min(box.left, window.innerWidth - this.list.offsetWidth - 8))}px`;
    style.top = box.bottom + this.list.offsetHeight + 8 > window.innerHeight ? `${Math.max(4, box.top - this.list.offsetHeight - 4)}px` : `${box.bottom + 4}px`;
    this.items().at(focus)?.focus();
  }

  private close(refocus: boolean): void {
    if (this.list.hidden) return;
    this.list.hidden = true;
    set(this.button, "aria-expanded", "false");
    if (refocus) this.button.focus();
  }

  private key(event: KeyboardEvent): void {
    const items = this.items();
    const here = items.indexOf(document.activeElement as HTMLElement);
    let next = here;
    if (event.key === "ArrowDown") next = (here + 1) % items.length;
    else if (event.key === "ArrowUp") next = (here - 1 + items.length) % items.length;
    else if (event.key === "Home") next = 0;
    else if (event.key === "End") next = items.length - 1;
    else if (event.key === "Escape") {
      event.preventDefault();
      event.stopPropagation();
      this.close(true);
      return;
    } else if (event.key === "Tab") {
      this.close(true);
      return;
    } else if (event.key.length === 1 && !event.ctrlKey && !event.metaKey && event.key !== " ") {
      const letter = event.key.toLowerCase();
      const starts = (item: HTMLElement): boolean => (item.textContent ?? "").toLowerCase().startsWith(letter);
      next = items.findIndex((item, i) => i > here && starts(item));
      if (next < 0) next = items.findIndex(starts);
      if (next < 0) return;
    } else return;
    event.preventDefault();
    items[next]?.focus();
  }
}
