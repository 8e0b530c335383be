/**
 * How the user's language writes numbers and formulas. What is stored is the canonical spelling (point, comma
 * between arguments); the local spelling exists only where a person types or reads.
 */
export interface Locale {
  readonly tag: string;
  readonly decimal: "." | ",";
  readonly group: string;
  /** Between the arguments of a function: ";" where "," is the decimal mark. */
  readonly argument: "," | ";";
  /** Between the columns of an array constant; rows are always parted by ";". */
  readonly arrayColumn: "," | ".";
  /** Order of the parts in a date written with dots, slashes or dashes, unless it starts with a four-digit year. */
  readonly dateOrder: "dmy" | "mdy" | "ymd";
}

/** The habits of a language tag such as "en-GB" or "de-DE", taken from the runtime's own tables. */
export function localeOf(tag: string): Locale {
  let language = tag;
  try {
    new Intl.NumberFormat(language);
  } catch {
    language = "en-US";
  }
  const number = new Intl.NumberFormat(language, { useGrouping: true, numberingSystem: "latn" }).formatToParts(1234567.5);
  const part = (type: string, otherwise: string) => number.find((entry) => entry.type === type)?.value ?? otherwise;
  const decimal = part("decimal", ".") === "," ? "," : ".";
  const dateParts = new Intl.DateTimeFormat(language, { year: "numeric", month: "2-digit", day: "2-digit", calendar: "gregory" })
    .formatToParts(new Date(2026, 2, 1))
    .map((entry) => entry.type[0])
    .filter((letter) => letter === "d" || letter === "m" || letter === "y")
    .join("");
  return {
    tag: language,
    decimal,
    group: part("group", decimal === "," ? "." : ","),
    argument: decimal === "," ? ";" : ",",
    arrayColumn: decimal === "," ? "." : ",",
    dateOrder: dateParts === "mdy" || dateParts === "ymd" ? dateParts : "dmy",
  };
}

export const CANONICAL: Locale = { tag: "en-US", decimal: ".", group: ",", argument: ",", arrayColumn: ",", dateOrder: "mdy" };

/**
 * A scan of formula text that knows only what changes between spellings: text in quotes and sheet names are left
 * alone, array braces counted. It never fails, whatever is typed.
 */
function respell(formula: string, change: (character: string, at: number, inArray: boolean) => string): string {
  let result = "";
  let quote = "";
  let depth = 0;
  for (let at = 0; at < formula.length; at++) {
    const character = formula[at]!;
    if (quote !== "") {
      if (character === quote) quote = "";
      result += character;
    } else if (character === '"' || character === "'") {
      quote = character;
      result += character;
    } else {
      if (character === "{") depth++;
      if (character === "}") depth--;
      result += change(character, at, depth > 0);
    }
  }
  return result;
}

const isDigit = (character: string | undefined): boolean => character !== undefined && character >= "0" && character <= "9";

/** True where a point at this place belongs to a number: a digit beside it and no letter joined on the left. */
function isDecimalMark(formula: string, at: number): boolean {
  if (!isDigit(formula[at + 1]) && !isDigit(formula[at - 1])) return false;
  let start = at;
  while (isDigit(formula[start - 1])) start--;
  const before = formula[start - 1];
  return before === undefined || !/[\p{L}_.\\$]/u.test(before);
}

/** Local spelling to canonical: "=SUMME" stays, "=SUM(A1;1,5)" becomes "=SUM(A1,1.5)". */
export function toCanonical(formula: string, locale: Locale): string {
  if (locale.decimal === ".") return formula;
  return respell(formula, (character, at, inArray) => {
    if (character === ",") return isDecimalMark(formula, at) ? "." : ",";
    if (character === ";") return inArray ? ";" : ",";
    if (character === "." && inArray) return ",";
    return character;
  });
}

/** Canonical spelling to local, for the formula bar. */
export function toLocal(formula: string, locale: Locale): string {
  if (locale.decimal === ".") return formula;
  return respell(formula, (character, at, inArray) => {
    if (character === "." && isDecimalMark(formula, at)) return ",";
    if (character === ",") return inArray ? locale.arrayColumn : locale.argument;
    return character;
  });
}
