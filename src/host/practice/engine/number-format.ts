/** Number format codes (ECMA-376 part 1, 18.8.31): a value and a code give the text that a cell displays. */
import { civilOf, clockOf, LAST_SERIAL, weekdayOf } from "./dates";
import type { Locale } from "./locale";
import { Fault, type Scalar } from "./value";

interface Section {
  readonly kind: "general" | "number" | "date" | "text";
  readonly condition: ((value: number) => boolean) | null;
  readonly pieces: readonly Piece[];
  readonly percents: number;
  readonly thousands: number;
  readonly grouped: boolean;
  readonly scientific: boolean;
  readonly twelveHours: boolean;
}

type Piece =
  | { readonly kind: "literal"; readonly text: string }
  | { readonly kind: "digit"; readonly text: "0" | "#" | "?" }
  | { readonly kind: "point" | "value" | "general" }
  | { readonly kind: "exponent"; readonly plus: boolean }
  | { readonly kind: "date"; readonly text: string }
  | { readonly kind: "elapsed"; readonly unit: "h" | "m" | "s"; readonly width: number };

const TOKEN = /"([^"]*)"|\\(.)|_(.)|\*(.)|\[([^\]]*)\]|(General)|(AM\/PM|A\/P)|(E[+-])|(y+|m+|d+|h+|s+)|([0#?])|([.,%@])|(.)/giu;

const CONDITION = /^(<=|>=|<>|<|>|=)(-?[\d.]+)$/;

function compileSection(code: string): Section {
  const pieces: Piece[] = [];
  let condition: Section["condition"] = null;
  let percents = 0;
  let scientific = false;
  let twelveHours = false;
  let grouped = false;
  let date = false;
  let text = false;
  let general = false;
  let pendingCommas = 0;
  let thousands = 0;
  for (const match of code.matchAll(TOKEN)) {
    const [, quoted, escaped, space, , bracket, isGeneral, noon, exponent, dateLetters, digit, mark, other] = match;
    if (mark === ",") {
      pendingCommas++;
      continue;
    }
    if (pendingCommas > 0) {
      if (digit !== undefined) grouped = true;
      else thousands += pendingCommas;
      pendingCommas = 0;
    }
    if (quoted !== undefined) pieces.push({ kind: "literal", text: quoted });
    else if (escaped !== undefined) pieces.push({ kind: "literal", text: escaped });
    else if (space !== undefined) pieces.push({ kind: "literal", text: " " });
    else if (bracket !== undefined) {
      const test = CONDITION.exec(bracket);
      const elapsed = /^(h+|m+|s+)$/i.exec(bracket);
      const currency = /^\$([^-]*)/.exec(bracket);
      if (test) condition = conditionOf(test[1]!, Number(test[2]));
      else if (elapsed) {
        date = true;
        pieces.push({ kind: "elapsed", unit: bracket[0]!.toLowerCase() as "h" | "m" | "s", width: bracket.length });
      } else if (currency && currency[1] !== "") pieces.push({ kind: "literal", text: currency[1]! });
    } else if (isGeneral !== undefined) {
      general = true;
      pieces.push({ kind: "general" });
    } else if (noon !== undefined) {
      date = true;
      twelveHours = true;
      pieces.push({ kind: "date", text: noon.toUpperCase() });
    } else if (exponent !== undefined) {
      scientific = true;
      pieces.push({ kind: "exponent", plus: exponent[1] === "+" });
    } else if (dateLetters !== undefined) {
      date = true;
      pieces.push({ kind: "date", text: dateLetters.toLowerCase() });
    } else if (digit !== undefined) pieces.push({ kind: "digit", text: digit as "0" | "#" | "?" });
    else if (mark === ".") pieces.push({ kind: "point" });
    else if (mark === "%") {
      percents++;
      pieces.push({ kind: "literal", text: "%" });
    } else if (mark === "@") {
      text = true;
      pieces.push({ kind: "value" });
    } else if (other !== undefined) pieces.push({ kind: "literal", text: other });
  }
  if (pendingCommas > 0) thousands += pendingCommas;
  const kind = general ? "general" : text ? "text" : date ? "date" : "number";
  return { kind, condition, pieces, percents, thousands, grouped, scientific, twelveHours };
}

function conditionOf(sign: string, bound: number): (value: number) => boolean {
  switch (sign) {
    case "<": return (value) => value < bound;
    case ">": return (value) => value > bound;
    case "<=": return (value) => value <= bound;
    case ">=": return (value) => value >= bound;
    case "<>": return (value) => value !== bound;
    default: return (value) => value === bound;
  }
}

function splitSections(code: string): string[] {
  const sections: string[] = [];
  let current = "";
  for (const match of code.matchAll(/"[^"]*"|\\.|\[[^\]]*\]|;|[^"\\[;]+|./gsu)) {
    if (match[0] === ";") {
      sections.push(current);
      current = "";
    } else current += match[0];
  }
  sections.push(current);
  return sections.slice(0, 4);
}

const compiled = new Map<string, readonly Section[]>();

function sectionsOf(code: string): readonly Section[] {
  let sections = compiled.get(code);
  if (!sections) {
    sections = splitSections(code).map(compileSection);
    if (compiled.size > 500) compiled.clear();
    compiled.set(code, sections);
  }
  return sections;
}

/** What a value shows under a format code. A number the format cannot show (a date before 1900) shows as "########". */
export function formatValue(value: Scalar, code: string, locale: Locale): string {
  if (value === null) return "";
  if (value instanceof Fault) return value.code;
  if (typeof value === "boolean") return value ? "TRUE" : "FALSE";
  if (typeof value === "string") return formatText(value, code);
  if (code === "General" || code === "") return generalText(value, locale);
  const sections = sectionsOf(code);
  const { section, absolute } = choose(sections, value);
  if (section === null || section.kind === "general" || section.kind === "text") {
    if (section === null || section.pieces.length === 0) return generalText(value, locale);
    const shown = generalText(absolute ? Math.abs(value) : value, locale);
    return section.pieces.map((piece) => (piece.kind === "literal" ? piece.text : piece.kind === "general" || piece.kind === "value" ? shown : "")).join("");
  }
  if (section.kind === "date") return dateText(value, section);
  return numberSection(absolute ? Math.abs(value) : value, section, locale);
}

function choose(sections: readonly Section[], value: number): { section: Section | null; absolute: boolean } {
  const numeric = sections.filter((section, index) => index < 3 && !(section.kind === "text" && sections.length > 1));
  if (numeric.some((section) => section.condition !== null)) {
    const hit = numeric.find((section) => section.condition?.(value)) ?? numeric.find((section) => section.condition === null);
    return { section: hit ?? null, absolute: hit !== undefined && value < 0 && hit.condition !== null };
  }
  const [positive = null, negative, zero] = numeric;
  if (value < 0 && negative) return { section: negative, absolute: true };
  if (value === 0 && zero) return { section: zero, absolute: false };
  return { section: positive, absolute: false };
}

function formatText(value: string, code: string): string {
  if (!code.includes("@")) return value;
  const section = sectionsOf(code).find((entry) => entry.kind === "text");
  return section ? section.pieces.map((piece) => (piece.kind === "value" ? value : piece.kind === "literal" ? piece.text : "")).join("") : value;
}

/** General: as many digits as a cell of ordinary width can show, at most ten significant. */
export function generalText(value: number, locale: Locale): string {
  if (value === 0) return "0";
  const size = Math.abs(value);
  let text: string;
  if (size >= 1e11 || size < 1e-4) {
    const [mantissa = "", exponent = "0"] = value.toExponential(5).split("e");
    const power = Number(exponent);
    text = `${trimZeros(mantissa)}E${power < 0 ? "-" : "+"}${String(Math.abs(power)).padStart(2, "0")}`;
  } else {
    const whole = Math.floor(Math.log10(size)) + 1;
    text = trimZeros(value.toFixed(Math.max(0, Math.min(10 - Math.max(whole, 1), 9))));
    if (text === "-0") text = "0";
  }
  return locale.decimal === "." ? text : text.replace(".", locale.decimal);
}

const trimZeros = (text: string): string => (text.includes(".") ? text.replace(/\.?0+$/, "") : text);

/** Decimal rounding of the shortest text that names the number, so that 1.005 under 0.00 shows 1.01 as people expect. */
export function fixedText(value: number, decimals: number): string {
  const size = Math.abs(value);
  if (size >= 1e21) return BigInt(Math.round(value)).toString() + (decimals > 0 ? `.${"0".repeat(decimals)}` : "");
  const short = Number(size.toPrecision(15));
  const [digits = "0", exponent = "0"] = short.toExponential().split("e");
  const rounded = Number(exponent) + decimals > 15 ? short.toFixed(Math.min(decimals, 100)) : shiftRound(digits, Number(exponent), decimals);
  return value < 0 && Number(rounded) !== 0 ? `-${rounded}` : rounded;
}

function shiftRound(digits: string, exponent: number, decimals: number): string {
  const scaled = Math.round(Number(`${digits}e${exponent + decimals}`));
  const text = scaled.toFixed(0).padStart(decimals + 1, "0");
  return decimals === 0 ? text : `${text.slice(0, -decimals)}.${text.slice(-decimals)}`;
}

function numberSection(value: number, section: Section, locale: Locale): string {
  const scaled = value * 100 ** section.percents / 1000 ** section.thousands;
  const pointAt = section.pieces.findIndex((piece) => piece.kind === "point");
  const exponentAt = section.pieces.findIndex((piece) => piece.kind === "exponent");
  const mantissaEnd = exponentAt < 0 ? section.pieces.length : exponentAt;
  const digitsIn = (from: number, to: number) => section.pieces.slice(from, to).filter((piece) => piece.kind === "digit");
  const wholeEnd = pointAt < 0 ? mantissaEnd : pointAt;
  const wholeDigits = digitsIn(0, wholeEnd);
  const decimalDigits = pointAt < 0 ? [] : digitsIn(pointAt, mantissaEnd);
  if (wholeDigits.length + decimalDigits.length === 0) {
    const text = section.pieces.map((piece) => (piece.kind === "literal" ? piece.text : "")).join("");
    return value < 0 ? `-${text}` : text;
  }
  let mantissa = scaled;
  let exponent = 0;
  if (section.scientific && scaled !== 0) {
    const step = Math.max(1, wholeDigits.length);
    exponent = Math.floor(Math.log10(Math.abs(scaled)) / step) * step;
    mantissa = Number(`${scaled}e${-exponent}`);
    if (!Number.isFinite(mantissa)) mantissa = scaled / 10 ** exponent;
    if (Math.abs(Number(fixedText(mantissa, decimalDigits.length))) >= 10 ** step) {
      exponent += step;
      mantissa /= 10 ** step;
    }
  }
  const fixed = fixedText(mantissa, decimalDigits.length);
  const negative = fixed.startsWith("-");
  const [whole = "0", fraction = ""] = (negative ? fixed.slice(1) : fixed).split(".");
  const least = wholeDigits.filter((piece) => piece.text !== "#").length;
  let wholeText = whole === "0" && least === 0 ? "" : whole.padStart(least, "0");
  if (section.grouped) wholeText = wholeText.replace(/\B(?=(\d{3})+$)/g, locale.group);
  let fractionLength = fraction.length;
  while (fractionLength > 0 && fraction[fractionLength - 1] === "0" && decimalDigits[fractionLength - 1]?.text !== "0") fractionLength--;
  let result = "";
  let wroteWhole = false;
  let decimalIndex = 0;
  const exponentDigits = exponentAt < 0 ? 0 : digitsIn(exponentAt, section.pieces.length).length;
  let wroteExponent = false;
  section.pieces.forEach((piece, index) => {
    if (piece.kind === "literal") result += piece.text;
    else if (piece.kind === "point") {
      if (!wroteWhole) {
        result += wholeText;
        wroteWhole = true;
      }
      result += locale.decimal;
    } else if (piece.kind === "exponent") {
      result += `E${exponent < 0 ? "-" : piece.plus ? "+" : ""}`;
    } else if (piece.kind === "digit") {
      if (exponentAt >= 0 && index > exponentAt) {
        if (!wroteExponent) {
          result += String(Math.abs(exponent)).padStart(exponentDigits, "0");
          wroteExponent = true;
        }
      } else if (pointAt >= 0 && index > pointAt) {
        if (decimalIndex < fractionLength) result += fraction[decimalIndex]!;
        decimalIndex++;
      } else if (!wroteWhole) {
        result += wholeText;
        wroteWhole = true;
      }
    }
  });
  return negative ? `-${result}` : result;
}

const MONTHS = ["January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November", "December"];
const DAYS = ["Sunday", "Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday"];

function dateText(value: number, section: Section): string {
  if (value < 0 || value >= LAST_SERIAL + 1) return "########";
  const pieces = section.pieces;
  const fraction = fractionDigits(pieces);
  const seconds = pieces.some((piece) => piece.kind === "date" && piece.text.startsWith("s"));
  const unit = 86_400 * (seconds ? 10 ** fraction : 1);
  const rounded = Math.round(value * unit) / unit;
  const day = civilOf(rounded);
  const clock = clockOf(rounded, fraction);
  let afterHour = false;
  let pendingFraction = false;
  let result = "";
  pieces.forEach((piece, index) => {
    if (piece.kind === "literal") result += piece.text;
    else if (piece.kind === "elapsed") {
      const total = piece.unit === "h" ? rounded * 24 : piece.unit === "m" ? rounded * 1440 : rounded * 86_400;
      result += String(Math.floor(total + 1e-7)).padStart(piece.width, "0");
      afterHour = piece.unit === "h";
    } else if (piece.kind === "point") {
      result += ".";
      pendingFraction = true;
    } else if (piece.kind === "digit") {
      if (pendingFraction) {
        result += clock.second.toFixed(fraction).split(".")[1] ?? "";
        pendingFraction = false;
      }
    } else if (piece.kind === "date") {
      const letter = piece.text[0]!;
      const next = pieces.slice(index + 1).find((entry) => entry.kind === "date" || entry.kind === "elapsed");
      const minutes = letter === "m" && piece.text.length <= 2 && (afterHour || (next?.kind === "date" && next.text.startsWith("s")));
      result += minutes ? pad(clock.minute, piece.text.length) : datePart(piece.text, day, clock, rounded, section.twelveHours);
      afterHour = letter === "h";
    }
  });
  return result;
}

function fractionDigits(pieces: readonly Piece[]): number {
  const point = pieces.findIndex((piece) => piece.kind === "point");
  return point < 0 ? 0 : pieces.slice(point).filter((piece) => piece.kind === "digit").length;
}

const pad = (value: number, width: number): string => (width >= 2 ? String(value).padStart(2, "0") : String(value));

function datePart(text: string, day: ReturnType<typeof civilOf>, clock: ReturnType<typeof clockOf>, serial: number, twelveHours: boolean): string {
  switch (text[0]) {
    case "y": return text.length <= 2 ? String(day.year % 100).padStart(2, "0") : String(day.year).padStart(4, "0");
    case "m": {
      const name = MONTHS[day.month - 1]!;
      return text.length <= 2 ? pad(day.month, text.length) : text.length === 3 ? name.slice(0, 3) : text.length === 5 ? name[0]! : name;
    }
    case "d": {
      const name = DAYS[weekdayOf(serial)]!;
      return text.length <= 2 ? pad(day.day, text.length) : text.length === 3 ? name.slice(0, 3) : name;
    }
    case "h": return pad(twelveHours ? ((clock.hour + 11) % 12) + 1 : clock.hour, text.length);
    case "s": return pad(Math.floor(clock.second), text.length);
    case "A": return text === "A/P" ? (clock.hour < 12 ? "A" : "P") : clock.hour < 12 ? "AM" : "PM";
    default: return "";
  }
}

export const isDateFormat = (code: string): boolean => code !== "General" && sectionsOf(code)[0]?.kind === "date";
export const isPercentFormat = (code: string): boolean => code !== "General" && (sectionsOf(code)[0]?.percents ?? 0) > 0;
