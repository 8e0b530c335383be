import type { BookFormula } from "../../audit/book";
import { listed, plural } from "./figure";

/** What a formula's range leaves out of its table; "" where nothing. */
export function shortText({ short }: Pick<BookFormula, "short">): string {
  return short ? shortSentence(short.rows, short.columns, short.where) : "";
}

export function shortSentence(rows: number, columns: number, where: string): string {
  const parts = [rows > 0 ? plural(rows, "row") : "", columns > 0 ? plural(columns, "column") : ""].filter((part) => part !== "");
  return `The range leaves out ${listed(parts)} of the table at ${where}.`;
}
