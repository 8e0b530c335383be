/** The values that cells and formulas hold, and how one kind is taken for another. */
import type { Area } from "./address";
import type { Expression } from "./expression";

export type FaultCode = "#DIV/0!" | "#N/A" | "#NAME?" | "#NULL!" | "#NUM!" | "#REF!" | "#VALUE!" | "#SPILL!" | "#CALC!" | "#BUSY!";

export const FAULT_CODES: readonly FaultCode[] = ["#DIV/0!", "#N/A", "#NAME?", "#NULL!", "#NUM!", "#REF!", "#VALUE!", "#SPILL!", "#CALC!", "#BUSY!"];

const GENERAL: Readonly<Record<FaultCode, string>> = {
  "#DIV/0!": "The formula divides by zero or by a blank cell.",
  "#N/A": "The answer does not exist, or nothing was found.",
  "#NAME?": "A name in the formula is not known.",
  "#NULL!": "The two ranges have no cell in common.",
  "#NUM!": "The result is not a number that a cell can hold.",
  "#REF!": "The formula refers to cells that are not there.",
  "#VALUE!": "The formula got text, or a shape, that it cannot use.",
  "#SPILL!": "The result has no room for all its cells.",
  "#CALC!": "The result is an empty table.",
  "#BUSY!": "Working …",
};

/** An error as a value: its code and the sentence that explains it. */
export class Fault {
  constructor(
    readonly code: FaultCode,
    readonly sentence: string = GENERAL[code],
  ) {}
}

/** Codes that text can name; "#BUSY!" only ever comes from a calculation under way. */
export const isFaultCode = (text: string): text is FaultCode => text !== "#BUSY!" && (FAULT_CODES as readonly string[]).includes(text);

/** null is a blank cell. */
export type Scalar = number | string | boolean | null | Fault;
/** A rectangular table of values with at least one cell. */
export type Grid = readonly (readonly Scalar[])[];

/** Cells referred to, not yet read. */
export class Reference {
  constructor(readonly area: Area) {}
}

/** A function written in a formula, with the names that were known around it. */
export class Lambda {
  constructor(
    readonly parameters: readonly string[],
    readonly body: Expression,
    readonly scope: Scope,
  ) {}
}

export type Value = Scalar | Grid | Reference | Lambda;
export type Scope = ReadonlyMap<string, Value>;

export const isGrid = (value: unknown): value is Grid => Array.isArray(value);

/** The number that a value stands for in arithmetic; `read` reads text in the local spelling. */
export function toNumber(value: Scalar, read: (text: string) => number | null): number | Fault {
  if (typeof value === "number") return value;
  if (value === null) return 0;
  if (typeof value === "boolean") return value ? 1 : 0;
  if (value instanceof Fault) return value;
  const number = read(value);
  return number ?? new Fault("#VALUE!", value === "" ? "An empty text stands where a number is needed." : `"${clip(value)}" stands where a number is needed.`);
}

export function toLogical(value: Scalar): boolean | Fault {
  if (typeof value === "boolean") return value;
  if (typeof value === "number") return value !== 0;
  if (value === null) return false;
  if (value instanceof Fault) return value;
  const upper = value.trim().toUpperCase();
  if (upper === "TRUE" || upper === "FALSE") return upper === "TRUE";
  return new Fault("#VALUE!", `"${clip(value)}" stands where TRUE or FALSE is needed.`);
}

export const clip = (text: string): string => (text.length > 30 ? `${text.slice(0, 29)}…` : text);

/** A number as text with at most 15 significant digits, the way concatenation and General show it, with a decimal point. */
export function numberText(value: number): string {
  if (value === 0) return "0";
  const short = Number(value.toPrecision(15));
  const size = Math.abs(short);
  if (size >= 1e21 || size < 1e-9) {
    const [mantissa = "", exponent = "0"] = short.toExponential().split("e");
    const power = Number(exponent);
    return `${mantissa}E${power < 0 ? "-" : "+"}${String(Math.abs(power)).padStart(2, "0")}`;
  }
  return String(short).includes("e") ? short.toFixed(20).replace(/0+$/, "") : String(short);
}

/** Order of two values: numbers before text before FALSE before TRUE; a blank counts as the other side's nothing. */
export function compare(left: Exclude<Scalar, Fault>, right: Exclude<Scalar, Fault>): number {
  const a = left ?? nothingLike(right);
  const b = right ?? nothingLike(left);
  const rank = rankOf(a) - rankOf(b);
  if (rank !== 0) return rank;
  if (typeof a === "string" && typeof b === "string") {
    const x = a.toLowerCase();
    const y = b.toLowerCase();
    return x < y ? -1 : x > y ? 1 : 0;
  }
  return Number(a) - Number(b);
}

const rankOf = (value: number | string | boolean): number => (typeof value === "number" ? 0 : typeof value === "string" ? 1 : 2);

function nothingLike(other: Exclude<Scalar, Fault>): number | string | boolean {
  return typeof other === "string" ? "" : typeof other === "boolean" ? false : 0;
}
