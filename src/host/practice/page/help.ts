/** The names that complete a word, and the arguments of the call at the caret, under the field that is being typed in. */
import { callAt, type Book, type FunctionHelp } from "../engine";
import { argumentIndex, matches } from "./completion";
import { el, set } from "./dom";
import type { Field } from "./field";
import { wordAt } from "./formula-text";

export class Help {
  readonly element = el("div", { class: "help", hidden: true });
  private readonly list = el("ul", { class: "names", role: "listbox", id: "names", "aria-label": "Functions" });
  private readonly about = el("p", { class: "about" });
  private readonly hint = el("p", { class: "hint", id: "hint" });
  private found: FunctionHelp[] = [];
  private chosen = 0;
  private start = 0;
  /** True once a person has moved through the names: Enter then takes the name instead of ending the edit. */
  private moved = false;
  private readonly named: ReadonlyMap<string, FunctionHelp>;
  onAccept: (text: string, caret: number) => void = () => undefined;

  constructor(
    private readonly book: Book,
    private readonly functions: readonly FunctionHelp[],
    private readonly say: (text: string) => void,
  ) {
    this.named = new Map(functions.map((entry) => [entry.name.toUpperCase(), entry]));
    this.element.append(this.list, this.about, this.hint);
    this.list.addEventListener("pointerdown", (event) => {
      const item = (event.target as Element).closest("li");
      if (!item || !this.field) return;
      event.preventDefault();
      this.chosen = [...this.list.children].indexOf(item);
      this.accept();
    });
  }

  private field: Field | null = null;

  get open(): boolean {
    return this.found.length > 0;
  }

  /** True where Enter belongs to the list. */
  get choosing(): boolean {
    return this.open && this.moved;
  }

  /** Follows the text and caret of a field; names are offered only right after typing. */
  follow(field: Field, typed: boolean): void {
    this.field = field;
    const { text, caret } = field;
    const word = typed ? wordAt(text, caret, this.book.locale) : null;
    this.found = word ? matches(this.functions, word.word) : [];
    if (this.found.length === 1 && this.found[0]!.name.toUpperCase() === word!.word.toUpperCase()) this.found = [];
    this.start = word?.start ?? 0;
    this.chosen = 0;
    this.moved = false;
    this.drawNames();
    this.drawHint();
    this.element.hidden = !this.open && this.hint.hidden;
    this.place();
  }

  close(): void {
    if (this.field) {
      set(this.field.input, "aria-activedescendant", null);
      set(this.field.input, "aria-controls", null);
      set(this.field.input, "aria-describedby", null);
    }
    this.found = [];
    this.element.hidden = true;
    this.field = null;
  }

  /** Hides the names and keeps the hint. */
  closeNames(): void {
    this.found = [];
    this.drawNames();
    this.element.hidden = this.hint.hidden;
  }

  move(by: 1 | -1): void {
    this.moved = true;
    this.chosen = (this.chosen + by + this.found.length) % this.found.length;
    this.drawNames();
  }

  accept(): void {
    const entry = this.found[this.chosen];
    const field = this.field;
    if (!entry || !field) return;
    const { text, caret } = field;
    const after = text.slice(caret);
    const name = after.startsWith("(") ? entry.name : `${entry.name}(`;
    const position = this.start + name.length + (after.startsWith("(") ? 1 : 0);
    this.closeNames();
    this.onAccept(text.slice(0, this.start) + name + after, position);
  }

  private drawNames(): void {
    const { found, chosen, field } = this;
    this.list.replaceChildren(
      ...found.map((entry, i) => el("li", { role: "option", id: `name${i}`, "aria-selected": i === chosen ? "true" : "false" }, entry.name)),
    );
    this.list.hidden = this.about.hidden = found.length === 0;
    const entry = found[chosen];
    this.about.textContent = entry?.description ?? "";
    this.list.children[chosen]?.scrollIntoView({ block: "nearest" });
    if (!field) return;
    set(field.input, "aria-controls", entry ? "names" : null);
    set(field.input, "aria-activedescendant", entry ? `name${chosen}` : null);
    if (entry) this.say(`${entry.name}: ${entry.description.replace(/\.$/, "")}. ${found.length} ${found.length === 1 ? "name" : "names"}, Tab takes it.`);
  }

  private drawHint(): void {
    const field = this.field!;
    const { locale } = this.book;
    const call = callAt(field.text, field.caret, locale);
    const entry = call ? this.named.get(call.name.toUpperCase()) : undefined;
    this.hint.hidden = !entry;
    set(field.input, "aria-describedby", entry ? "hint" : null);
    if (!entry || !call) return;
    const current = argumentIndex(entry, call.argument);
    const parts: (Node | string)[] = [el("span", { class: "call" }, `${entry.name}(`)];
    entry.arguments.forEach((argument, i) => {
      if (i > 0) parts.push(`${locale.argument} `);
      const name = argument.optional ? `[${argument.name}]` : argument.name;
      parts.push(i === current ? el("strong", {}, name) : name);
    });
    parts.push(")");
    const about = entry.arguments[current]?.text;
    if (about) parts.push(el("span", { class: "argument" }, about));
    else if (entry.arguments.length === 0) parts.push(el("span", { class: "argument" }, entry.description));
    this.hint.replaceChildren(...parts);
  }

  /** Under the field, or over it where there is no room below. */
  place(): void {
    if (this.element.hidden || !this.field) return;
    const box = this.field.element.getBoundingClientRect();
    const { style } = this.element;
    const left = Math.max(4, Math.min(box.left, window.innerWidth - this.element.offsetWidth - 8));
    style.left = `${left}px`;
    const below = box.bottom + 4;
    style.top = below + this.element.offsetHeight > window.innerHeight ? `${Math.max(4, box.top - 4 - this.element.offsetHeight)}px` : `${below}px`;
  }
}
