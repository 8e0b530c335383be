import type { Span } from "./finding";

/** A call of one of our functions inside a formula. */
export interface Call {
  /** Without the namespace: "TRANSITION". */
  readonly name: string;
  /** Arguments as written; "" for one that is left out. */
  readonly parameters: readonly string[];
  /** Written in the spelling that a workbook keeps while the add-in is not loaded. */
  readonly unregistered: boolean;
}

export interface Reference extends Span {
  readonly sheet: string;
  /** "A5#": the spill that begins there, whose extent only the sheet knows. */
  readonly spill: boolean;
}

const NAME = /(_xldudf_CTMC_|_xlfn\.CTMC\.|CTMC\.)([A-Z]+)\s*\(/iuy;

/** Our functions in a formula, outer before inner. Separators are commas, or semicolons where the formula is written so. */
export function callsIn(formula: string): Call[] {
  const calls: Call[] = [];
  for (let at = 0; at < formula.length; at++) {
    const skipped = afterQuoted(formula, at);
    if (skipped > at) {
      at = skipped - 1;
      continue;
    }
    if (at > 0 && /[\p{L}\p{N}_.]/u.test(formula[at - 1])) continue;
    NAME.lastIndex = at;
    const match = NAME.exec(formula);
    if (match) calls.push({ name: match[2].toUpperCase(), parameters: parametersFrom(formula, NAME.lastIndex), unregistered: match[1].startsWith("_xldudf") });
  }
  return calls;
}

/** The arguments of a call whose opening bracket stands right before `begin`. */
function parametersFrom(formula: string, begin: number): string[] {
  const parameters: string[] = [];
  let depth = 0;
  let last = begin;
  let at = begin;
  for (; at < formula.length; at++) {
    const skipped = afterQuoted(formula, at);
    if (skipped > at) {
      at = skipped - 1;
      continue;
    }
    const character = formula[at];
    if (character === "(" || character === "{") depth++;
    else if (character === "}" || (character === ")" && depth > 0)) depth--;
    else if (character === ")") break;
    else if (depth === 0 && (character === "," || character === ";")) {
      parameters.push(formula.slice(last, at).trim());
      last = at + 1;
    }
  }
  const rest = formula.slice(last, at).trim();
  return rest === "" && parameters.length === 0 ? [] : [...parameters, rest];
}

/** The position after a text in double quotes or a sheet name in single ones that begins here; `at` itself otherwise. */
function afterQuoted(formula: string, at: number): number {
  const quote = formula[at];
  if (quote !== '"' && quote !== "'") return at;
  let end = at + 1;
  while (end < formula.length && !(formula[end] === quote && formula[end + 1] !== quote)) end += formula[end] === quote ? 2 : 1;
  return end + 1;
}

const REFERENCE = /(?:('(?:[^']|'')+'|[\p{L}_][\p{L}\p{N}_.]*)!)?\$?([A-Z]{1,3})\$?(\d{1,7})(?::\$?([A-Z]{1,3})\$?(\d{1,7})|(#))?(?![\p{L}\p{N}_.(!])/iuy;

/** The cells and ranges that a piece of formula names, in order. Whole rows and columns and defined names are not among them. */
export function referencesIn(formula: string, sheet: string): Reference[] {
  const references: Reference[] = [];
  for (let at = 0; at < formula.length; at++) {
    if (at > 0 && /[\p{L}\p{N}_.$]/u.test(formula[at - 1])) continue;
    REFERENCE.lastIndex = at;
    const match = REFERENCE.exec(formula);
    if (match) {
      const [, named, column, row, lastColumn, lastRow, spill] = match;
      const [top, left] = [Number(row) - 1, columnNumber(column)];
      const [bottom, right] = lastRow ? [Number(lastRow) - 1, columnNumber(lastColumn)] : [top, left];
      references.push({
        sheet: named ? named.replace(/^'|'$/gu, "").replace(/''/gu, "'") : sheet,
        row: Math.min(top, bottom),
        column: Math.min(left, right),
        rows: Math.abs(bottom - top) + 1,
        columns: Math.abs(right - left) + 1,
        spill: spill !== undefined,
      });
      at = REFERENCE.lastIndex - 1;
      continue;
    }
    const skipped = afterQuoted(formula, at);
    if (skipped > at) at = skipped - 1;
  }
  return references;
}

function columnNumber(letters: string): number {
  let number = 0;
  for (const letter of letters.toUpperCase()) number = number * 26 + letter.charCodeAt(0) - 64;
  return number - 1;
}

/** Numbers written in an argument: a single one, or an array constant such as {1,2,3}. Null where it is anything else. */
export function numbersIn(parameter: string): number[] | null {
  const bare = parameter.trim();
  const items = bare.startsWith("{") && bare.endsWith("}") ? bare.slice(1, -1).split(/[,;]/u) : [bare];
  const numbers = items.map((item) => (/^\s*[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?\s*$/iu.test(item) ? Number(item) : NaN));
  return numbers.some(Number.isNaN) ? null : numbers;
}

/** Where in the catalogue's argument order (from 0) a function has its start, its targets and its times. */
interface Positions {
  readonly start?: number;
  readonly targets?: number;
  readonly times?: number;
}

/** Functions whose first argument is a table of rates, and what else the audit asks of their arguments. */
const READERS: Readonly<Record<string, Positions>> = {
  TRANSITION: { times: 1 },
  DISTRIBUTION: { start: 1, times: 2 },
  STATIONARY: { start: 1 },
  MEANABSORPTION: { targets: 1 },
  ABSORPTIONSD: { targets: 1 },
  ABSORPTIONPROB: { targets: 1 },
  SURVIVAL: { start: 1, targets: 2, times: 3 },
  REACHED: { start: 1, targets: 2, times: 3 },
  HAZARD: { start: 1, targets: 2, times: 3 },
  PERCENTILE: { start: 1, targets: 2 },
  TIMEBEFORE: { start: 1, targets: 2 },
  QUASISTATIONARY: { targets: 1 },
  OCCUPANCY: { start: 1, times: 2 },
  JUMPS: { start: 1, times: 2 },
  FAILURES: { start: 2, times: 3 },
  COST: { start: 1, times: 2 },
  COSTUNTIL: { start: 1, targets: 3 },
  COSTRATE: { start: 3 },
  INSPECTION: { times: 2 },
  AVAILABILITY: { start: 2, times: 3 },
  INTERVALAVAILABILITY: { start: 2, times: 3 },
  UPDOWN: { start: 2 },
  FLOWS: { start: 1 },
  ELASTICITY: { start: 2, times: 3 },
  MEANTIMEELASTICITY: { start: 1, targets: 2 },
  COSTELASTICITY: { start: 3 },
  RATEFORGOAL: { start: 5, times: 6 },
  GENERATOR: {},
  FROMLIST: {},
  COMBINE: {},
  STAGES: {},
  LUMP: {},
  CHECK: { start: 1 },
  CLASSES: {},
  JUMPCHAIN: {},
  HOLDING: {},
  SETTLING: {},
  SAMPLEPATH: { start: 1, times: 2 },
  FINGERPRINT: {},
  COMPARE: {},
};

/** Null where the first argument is not a table of rates. */
export function positionsOf(name: string): Positions | null {
  return READERS[name] ?? null;
}

/** What a range is to the formula that reads it. */
export type Role = "rates" | "probabilities" | "counts" | "costs" | "resets";

/** Arguments that are a table over the states, but not of rates: position from 0. */
const OTHER_TABLES: Readonly<Record<string, readonly [position: number, role: Role]>> = {
  COST: [4, "costs"],
  COSTUNTIL: [4, "costs"],
  COSTRATE: [2, "costs"],
  COSTELASTICITY: [2, "costs"],
  INSPECTION: [1, "resets"],
  FROMPROBABILITY: [0, "probabilities"],
  EMBEDDINGGAP: [0, "probabilities"],
  FROMCOUNTS: [0, "counts"],
  AVAILABILITYBAND: [0, "counts"],
};

/** The arguments of a call that are tables, as written, with what they are. */
export function tablesIn({ name, parameters }: Call): { readonly parameter: string; readonly role: Role }[] {
  const tables: { parameter: string; role: Role }[] = [];
  if (positionsOf(name)) tables.push({ parameter: parameters[0] ?? "", role: "rates" });
  const other = OTHER_TABLES[name];
  if (other) tables.push({ parameter: parameters[other[0]] ?? "", role: other[1] });
  return tables.filter(({ parameter }) => parameter !== "");
}

/** Functions that make a table of rates: what they spill is a table, while what the others spill is an answer. */
export const BUILDERS: ReadonlySet<string> = new Set([
  "GENERATOR", "FROMLIST", "BIRTHDEATH", "REPAIRGROUP", "QUEUE", "COMBINE", "STAGES", "LUMP", "FROMPROBABILITY", "FROMCOUNTS", "FROMLOG",
]);
