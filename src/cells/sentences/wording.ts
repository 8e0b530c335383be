import type { Detail } from "../../chain/problem";

/** Host limit for an error's text, as the contract of the formulas promises it. */
export const LONGEST_SENTENCE = 120;

/** The words of a sentence that may be shortened: how many characters of a name or a typed text are shown. */
export class Words {
  constructor(
    private readonly details: Readonly<Record<string, Detail>>,
    private readonly longest: number,
  ) {}

  has(key: string): boolean {
    return this.details[key] !== undefined && this.details[key] !== null;
  }

  /** A count or a value, in as few digits as tell it. */
  number(key: string): string {
    return formatNumber(Number(this.details[key]));
  }

  /** A position that counts from 0, as people count. */
  ordinal(key: string): string {
    return String(Number(this.details[key]) + 1);
  }

  text(key: string): string {
    return this.shorten(String(this.details[key] ?? ""));
  }

  /** What was found, in quotes; "nothing" for a blank. */
  quoted(key: string): string {
    return this.has(key) ? `"${this.text(key)}"` : "blank";
  }

  /** "3 (Degraded)" where the state has a name, "3" where not. */
  state(key: string, nameKey: string): string {
    return this.has(nameKey) ? `${this.ordinal(key)} (${this.text(nameKey)})` : this.ordinal(key);
  }

  /** "Degraded" where the chain's problem was given the states' names, "state 3" where not. */
  stateOf(key: string): string {
    return this.stateNumbered(Number(this.details[key]));
  }

  /** Groups of states: "{Up, Worn} and {Scrapped}". */
  groups(key: string): string {
    const groups = (this.details[key] as readonly (readonly number[])[] | undefined) ?? [];
    const shown = groups.slice(0, 2).map((group) => `{${group.slice(0, 2).map((state) => this.stateNumbered(state)).join(", ")}${group.length > 2 ? ", …" : ""}}`);
    return `${shown.join(", ")}${groups.length > 2 ? ` and ${groups.length - 2} more` : ""}`;
  }

  /** Where a value of an argument stands: "times, row 2, column 1", "start". */
  argument(): string {
    const name = String(this.details.argument ?? "argument");
    return this.has("row") ? `${name}, row ${this.ordinal("row")}, column ${this.ordinal("column")}` : name;
  }

  private stateNumbered(state: number): string {
    const names = this.details.names as readonly string[] | undefined;
    return names ? this.shorten(names[state]) : `state ${state + 1}`;
  }

  /** At most three entries of a list, and how many more. */
  list(key: string, entry: (value: Detail) => string): string {
    const values = (this.details[key] as readonly Detail[] | undefined) ?? [];
    const shown = values.slice(0, 3).map((value) => this.shorten(entry(value)));
    return values.length > 3 ? `${shown.join(", ")} and ${values.length - 3} more` : shown.join(", ");
  }

  /** What a cell of a table ought to hold: a rate, or a count where the table holds counts. */
  quantity(): string {
    return this.has("quantity") ? String(this.details.quantity) : "rate";
  }

  /** Where a rate stands: "Row 3 (Degraded), column 1" in a square, "Row 5" of the range in a list. */
  place(): string {
    if (this.has("listRow")) return `Row ${this.ordinal("listRow")}`;
    if (this.has("row")) return `Row ${this.state("row", "rowName")}, column ${this.ordinal("column")}`;
    if (this.has("from")) return `Row ${this.state("from", "fromName")}, column ${this.ordinal("to")}`;
    return "The table";
  }

  private shorten(text: string): string {
    const flat = text.replace(/\s+/g, " ");
    return flat.length <= this.longest ? flat : `${[...flat].slice(0, this.longest - 1).join("")}…`;
  }
}

/** A number in few characters: as typed if that is short, else to six digits, with a power of ten where it is far from 1. */
export function formatNumber(value: number): string {
  const size = Math.abs(value);
  const rounded = String(value).length <= 12 ? value : Number(value.toPrecision(6));
  return size !== 0 && (size >= 1e15 || size < 1e-6) ? rounded.toExponential() : String(rounded);
}

/** A sentence within the limit: names give way first, and only what is still too long is cut. */
export function fit(details: Readonly<Record<string, Detail>>, sentence: (words: Words) => string): string {
  let text = "";
  for (const longest of [60, 40, 30, 24, 18, 14, 10, 7]) {
    text = sentence(new Words(details, longest));
    if (text.length <= LONGEST_SENTENCE) return text;
  }
  return `${text.slice(0, LONGEST_SENTENCE - 1)}…`;
}
