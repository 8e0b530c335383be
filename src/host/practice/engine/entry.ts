/** What a person types into a cell, and what the formula bar shows of it again. */
import { civilOf, clockOf, serialOf } from "./dates";
import { toCanonical, toLocal, type Locale } from "./locale";
import { isDateFormat, isPercentFormat } from "./number-format";
import { Fault, isFaultCode, type Scalar } from "./value";

export interface Entry {
  readonly value: Scalar;
  /** Canonical spelling, with its equals sign; null when the entry is a value. */
  readonly formula: string | null;
  /** A format that the typed spelling asks for; null where General will do. */
  readonly format: string | null;
}

export const FORMULA_LENGTH_LIMIT = 8192; // ECMA-376 part 1, 18.17.1: longest formula

const NUMBER = /^([+-]?)(\d*)(?:\.(\d*))?(?:[eE]([+-]?\d{1,3}))?(\s?%)?$/;

/** Reads typed text. A leading apostrophe keeps the rest as text; what is no formula, number, date or logical value is text. */
export function readEntry(text: string, locale: Locale): Entry {
  if (text === "") return { value: null, formula: null, format: null };
  if (text.startsWith("'")) return { value: text.slice(1), formula: null, format: null };
  if (text.startsWith("=") && text.length > 1) return { value: null, formula: toCanonical(text, locale), format: null };
  const trimmed = text.trim();
  const upper = trimmed.toUpperCase();
  if (upper === "TRUE" || upper === "FALSE") return { value: upper === "TRUE", formula: null, format: null };
  if (isFaultCode(upper)) return { value: new Fault(upper), formula: null, format: null };
  const quantity = readNumber(trimmed, locale) ?? readDate(trimmed, locale);
  return quantity ? { ...quantity, formula: null } : { value: text, formula: null, format: null };
}

/** The number that a text stands for, in the local spelling: number, percentage, date or time; null when it is none. */
export function numberInText(text: string, locale: Locale): number | null {
  const trimmed = text.trim();
  return trimmed === "" ? null : (readNumber(trimmed, locale) ?? readDate(trimmed, locale))?.value ?? null;
}

interface Quantity {
  readonly value: number;
  readonly format: string | null;
}

function readNumber(text: string, locale: Locale): Quantity | null {
  const first = text.charCodeAt(0);
  if (text.length > 60 || !((first >= 48 && first <= 57) || first === 43 || first === 45 || first === 46 || first === 44)) return null;
  const split = splitGroups(text, locale);
  if (split === null) return null;
  const match = NUMBER.exec(split.plain);
  if (!match) return null;
  const [, sign = "", whole = "", decimals = "", exponent, percent] = match;
  if (whole === "" && decimals === "") return null;
  // A percent sign moves the decimal point of the text itself, so that 12% is the double nearest to 0.12.
  const result = Number(`${sign}${whole || "0"}.${decimals || "0"}e${Number(exponent ?? 0) - (percent === undefined ? 0 : 2)}`);
  if (!Number.isFinite(result)) return null;
  // A whole number that no cell holds exactly, such as a long serial number, stays text, so that no digit is lost.
  if (decimals === "" && exponent === undefined && percent === undefined && !Number.isSafeInteger(result)) return null;
  const fraction = decimals === "" ? "" : `.${"0".repeat(decimals.length)}`;
  const format = percent !== undefined ? `0${fraction}%` : exponent !== undefined ? `0${fraction}E+00` : split.grouped ? `#,##0${fraction}` : null;
  return { value: result, format };
}

/** Takes the thousands marks out where they stand three digits apart, and makes the decimal mark a point. */
function splitGroups(text: string, locale: Locale): { plain: string; grouped: boolean } | null {
  const mark = text.indexOf(locale.decimal);
  const wholePart = mark < 0 ? text : text.slice(0, mark);
  const rest = mark < 0 ? "" : `.${text.slice(mark + 1)}`;
  const group = /\s/.test(locale.group) ? "[\\s\\u00a0\\u202f]" : locale.group === "." ? "\\." : locale.group === "’" || locale.group === "'" ? "[’']" : ",";
  if (new RegExp(`^[+-]?\\d{1,3}(${group}\\d{3})+(?=[eE%\\s]|$)`).test(wholePart)) {
    return { plain: wholePart.replace(new RegExp(group, "g"), "") + rest, grouped: true };
  }
  return /[.,]/.test(wholePart) ? null : { plain: wholePart + rest, grouped: false };
}

const ISO = /^(\d{4})-(\d{1,2})-(\d{1,2})(?:[T ]+(\d{1,2}):(\d{2})(?::(\d{2}))?)?$/;
const LOCAL = /^(\d{1,4})([./-])(\d{1,2})\2(\d{1,4})(?: +(\d{1,2}):(\d{2})(?::(\d{2}))?)?$/;
const TIME = /^(\d{1,3}):(\d{2})(?::(\d{2}))?$/;

/** A full date (day, month and year all written) or a time. "3/4" stays text: a rate table must not turn it into April. */
function readDate(text: string, locale: Locale): Quantity | null {
  if (text.length > 25) return null;
  const iso = ISO.exec(text);
  if (iso) return dated(Number(iso[1]), Number(iso[2]), Number(iso[3]), iso.slice(4), "yyyy-mm-dd");
  const time = TIME.exec(text);
  if (time) {
    const part = timePart(time.slice(1));
    return part === null ? null : { value: part, format: time[3] === undefined ? "hh:mm" : "hh:mm:ss" };
  }
  const local = LOCAL.exec(text);
  if (!local) return null;
  const [, a = "", mark = "", b = "", c = ""] = local;
  const order = a.length === 4 ? "ymd" : locale.dateOrder;
  const parts = order === "ymd" ? [a, b, c] : order === "dmy" ? [c, b, a] : [c, a, b];
  const year = parts[0]!.length <= 2 && order !== "ymd" ? pivot(Number(parts[0])) : parts[0]!.length === 4 ? Number(parts[0]) : NaN;
  const letters = { y: "yyyy", m: "mm", d: "dd" } as const;
  const format = [...order].map((letter) => letters[letter as "y" | "m" | "d"]).join(mark);
  return dated(year, Number(parts[1]), Number(parts[2]), local.slice(5), format);
}

/** Two-digit years: 00–29 are this century, 30–99 the last (common practice of office programs). */
const pivot = (year: number): number => (year < 30 ? 2000 + year : 1900 + year);

function dated(year: number, month: number, day: number, time: readonly (string | undefined)[], format: string): Quantity | null {
  if (!(year >= 1900 && month >= 1 && month <= 12 && day >= 1)) return null;
  const serial = serialOf(year, month, day);
  if (serial === null) return null;
  const back = civilOf(serial);
  if (back.month !== month || back.day !== day) return null;
  if (time[0] === undefined) return { value: serial, format };
  const part = timePart(time);
  return part === null || part >= 1 ? null : { value: serial + part, format: `${format} hh:mm${time[2] === undefined ? "" : ":ss"}` };
}

function timePart([hours, minutes, seconds = "0"]: readonly (string | undefined)[]): number | null {
  return Number(minutes) > 59 || Number(seconds) > 59 ? null : (Number(hours) * 3600 + Number(minutes) * 60 + Number(seconds)) / 86_400;
}

/** The text of the formula bar: typing it again gives the same content. */
export function entryText(value: Scalar, formula: string | null, format: string, locale: Locale): string {
  if (formula !== null) return toLocal(formula, locale);
  if (value === null) return "";
  if (value instanceof Fault) return value.code;
  if (typeof value === "boolean") return value ? "TRUE" : "FALSE";
  if (typeof value === "string") {
    const again = value.startsWith("'") ? null : readEntry(value, locale);
    return again !== null && again.formula === null && again.value === value ? value : `'${value}`;
  }
  const special = isDateFormat(format) ? dateEntry(value, format, locale) : isPercentFormat(format) ? percentEntry(value, locale) : null;
  return special !== null && numberInText(special, locale) === value ? special : plainNumber(value, locale);
}

const plainNumber = (value: number, locale: Locale): string => String(value).toUpperCase().replace(".", locale.decimal);

function percentEntry(value: number, locale: Locale): string {
  return `${plainNumber(Number(`${value}e2`) || Number((value * 100).toPrecision(15)), locale)}%`;
}

function dateEntry(value: number, format: string, locale: Locale): string | null {
  if (value < 0) return null;
  const day = civilOf(value);
  const clock = clockOf(value);
  const two = (part: number) => String(part).padStart(2, "0");
  const time = `${two(clock.hour)}:${two(clock.minute)}${clock.second === 0 ? "" : `:${two(clock.second)}`}`;
  if (value < 1 && !/y/i.test(format)) return time;
  const mark = /y/i.test(format) ? (/[./-]/.exec(format)?.[0] ?? "-") : "-";
  const parts = { y: String(day.year), m: two(day.month), d: two(day.day) };
  const order = mark === "-" ? "ymd" : locale.dateOrder;
  const date = [...order].map((letter) => parts[letter as "y" | "m" | "d"]).join(mark);
  return Number.isInteger(value) ? date : `${date} ${time}`;
}
