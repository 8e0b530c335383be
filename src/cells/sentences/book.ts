import type { BookFormula } from "../../audit/book";
import { listed, plural } from "./figure";

/** What a formula's range leaves out of its table; "" where nothing. */
export function shortText({ short }: Pick<BookFormula, "short">): string {
  if (!short) return "";
  const parts = [short.rows > 0 ? plural(short.rows, "row") : "", short.columns > 0 ? plural(short.columns, "column") : ""].filter((part) => part !== "");
  return `The range leaves out ${listed(parts)} of the table at ${short.where}.`;
}
