/** What the pane writes, as the host has to be told so that it comes out as meant. */
import { type HostValue } from "../../pane/workbook";

/** Words that no host reads as a number, date, truth value or formula: letters and blanks, at least two words. */
const PLAIN = /^\p{L}+[\p{L} ,.;:()–—-]* [\p{L} ,.;:()–—-]*\p{L}[.)]?$/u;

/**
 * One entry for `Range.formulas`: null leaves the cell alone, "" clears it. A string is text unless it begins with "=";
 * an apostrophe in front keeps the host from reading text such as "1/2" as a date, in whatever language it runs.
 * A string that begins with an apostrophe already carries it.
 */
export function entry(value: HostValue | null | undefined): HostValue | null {
  if (value === undefined) return null;
  if (value === null || value === "") return "";
  if (typeof value !== "string" || value.startsWith("=") || value.startsWith("'")) return value;
  return PLAIN.test(value) ? value : `'${value}`;
}

/** A result kept as a value: an error code stays an error, every other text stays text, whatever it looks like. */
export function frozenEntry(value: HostValue): HostValue {
  if (typeof value !== "string" || value === "" || /^#(N\/A|VALUE!|DIV\/0!|NUM!|REF!|NULL!)$/.test(value)) return value;
  return `'${value}`;
}
