/** Formula text to expression, and the operations on formula text: shifting references, renaming sheets. */
import { parse, tokenize, type AstExpression } from "@borgar/fx";
import { COLUMN_LIMIT, columnFromText, columnText, parseArea, quoteSheet, ROW_LIMIT, splitSheet, type Rect } from "./address";
import { FORMULA_LENGTH_LIMIT } from "./entry";
import type { BinaryOperator, Expression } from "./expression";
import { clip, Fault, isFaultCode, type Scalar } from "./value";

export interface StaticReference {
  readonly sheetName: string | null;
  readonly rect: Rect;
}

export interface Formula {
  readonly text: string;
  /** null when the text cannot be read. */
  readonly expression: Expression | null;
  /** Why it cannot be read. */
  readonly problem: string | null;
  /** Every cell and range that the text names, whether or not the evaluation comes to it. */
  readonly references: readonly StaticReference[];
  /** Calls something whose answer may change without any cell changing. */
  readonly volatile: boolean;
  /** Reads every reference it names, whatever their values; false where a branch may be skipped or only a position is asked for. */
  readonly strict: boolean;
}

const VOLATILE = new Set(["TODAY", "NOW", "RAND", "RANDBETWEEN", "RANDARRAY"]);
const SELECTIVE = new Set([
  ..."IF IFS IFERROR IFNA CHOOSE SWITCH INDEX OFFSET ROW ROWS COLUMN COLUMNS XLOOKUP ISREF ISFORMULA FORMULATEXT SHEET ADDRESS".split(" "),
  ..."MAP REDUCE SCAN BYROW BYCOL MAKEARRAY".split(" "),
]);
const read = new Map<string, Formula>();
const READ_LIMIT = 50_000;

/** Reads formula text in the canonical spelling. Never throws. */
export function readFormula(text: string): Formula {
  let formula = read.get(text);
  if (!formula) {
    formula = compile(text);
    if (read.size >= READ_LIMIT) read.clear();
    read.set(text, formula);
  }
  return formula;
}

function compile(text: string): Formula {
  const unreadable = (problem: string): Formula => ({ text, expression: null, problem, references: [], volatile: false, strict: true });
  if (text.length > FORMULA_LENGTH_LIMIT) return unreadable(`The formula has ${text.length} characters; ${FORMULA_LENGTH_LIMIT} is the limit.`);
  const references: StaticReference[] = [];
  let isVolatile = false;
  let strict = true;
  try {
    const tree = parse(tokenize(text, { withLocation: false }), { permitArrayCalls: false, looseRefCalls: true });
    const expression = convert(tree, references, (name) => {
      if (VOLATILE.has(name)) isVolatile = true;
      if (SELECTIVE.has(name)) strict = false;
    });
    return { text, expression, problem: null, references, volatile: isVolatile, strict };
  } catch (error) {
    return unreadable(stopSentence(text, error));
  }
}

function stopSentence(text: string, error: unknown): string {
  if (error instanceof RangeError) return "The formula is nested too deeply.";
  const offset = (error as { sourceOffset?: number }).sourceOffset;
  if (typeof offset !== "number") return error instanceof Error && error.message !== "" ? `The formula cannot be read: ${lower(error.message)}.` : "The formula cannot be read.";
  const open = openBrackets(text);
  if (open > 0) return `A closing bracket is missing: ${open} more ${open === 1 ? "is" : "are"} opened than closed.`;
  if (open < 0) return `A bracket too many is closed: ${-open} more ${open === -1 ? "is" : "are"} closed than opened.`;
  if (offset >= text.length) return `The formula stops at its end, after "${tail(text)}": something is missing, or a mark does not belong.`;
  return `The formula stops at character ${offset}, after "${tail(text.slice(0, offset))}".`;
}

/** Round brackets opened and not closed, those in quotes left out. */
function openBrackets(text: string): number {
  const bare = text.replace(/"[^"]*("|$)|'[^']*'/g, "");
  return bare.split("(").length - bare.split(")").length;
}

const tail = (text: string): string => (text.length > 24 ? `…${text.slice(-23)}` : text);
const lower = (message: string): string => message.charAt(0).toLowerCase() + message.slice(1).replace(/\.$/, "");

const FUTURE_PREFIX = /^(_xlfn\.)?(_xlws\.)?(_xlpm\.)?/i;

/** A function's name as the evaluator knows it: capitals, without the prefixes that files put before newer functions. */
export function functionName(written: string): string {
  const name = written.replace(FUTURE_PREFIX, "").toUpperCase();
  const unregistered = /^_XLDUDF_([A-Z0-9]+)_(.+)$/.exec(name);
  return unregistered ? `${unregistered[1]}.${unregistered[2]}` : name;
}

const variableName = (written: string): string => written.replace(FUTURE_PREFIX, "").toUpperCase();

function convert(tree: AstExpression | null, references: StaticReference[], onCall: (name: string) => void): Expression {
  const inner = (node: AstExpression): Expression => convert(node, references, onCall);
  const optional = (node: AstExpression | null): Expression | null => (node === null ? null : inner(node));
  if (tree === null) return { kind: "literal", value: null };
  switch (tree.type) {
    case "Literal":
      return { kind: "literal", value: tree.value };
    case "ErrorLiteral":
      return { kind: "literal", value: faultOf(tree.value) };
    case "ReferenceIdentifier": {
      if (tree.kind === "name") return { kind: "name", name: variableName(tree.value) };
      if (tree.kind === "table") throw new Error(`"${clip(tree.value)}" is not supported here`);
      const { sheetName, address } = splitSheet(tree.value);
      const rect = parseArea(address);
      if (rect) references.push({ sheetName, rect });
      return { kind: "reference", sheetName, rect, text: tree.value };
    }
    case "UnaryExpression":
      return { kind: "unary", operator: tree.operator, operand: inner(tree.arguments[0]!) };
    case "BinaryExpression": {
      const [first, second] = tree.arguments;
      const left = inner(first!);
      const right = inner(second!);
      if (tree.operator === ":") noteSpan(left, right, references);
      return { kind: "binary", operator: tree.operator as BinaryOperator, left, right };
    }
    case "ArrayExpression":
      return { kind: "array", rows: arrayRows(tree.elements) };
    case "LetExpression":
      return {
        kind: "let",
        names: tree.declarations.map((entry) => variableName(entry.id.name)),
        values: tree.declarations.map((entry) => optional(entry.init)),
        body: inner(tree.body!),
      };
    case "LambdaExpression":
      if (!tree.body) throw new Error("LAMBDA needs a calculation as its last argument");
      return { kind: "lambda", parameters: tree.params.map((entry) => variableName(entry.name)), body: inner(tree.body) };
    case "CallExpression": {
      const parameters = tree.arguments.map((entry) => optional(entry as AstExpression | null));
      const callee = tree.callee as { type: string; name?: string };
      if (callee.type === "Identifier") {
        const name = functionName(callee.name!);
        onCall(name);
        if (name === "ANCHORARRAY" && parameters[0]) return { kind: "unary", operator: "#", operand: parameters[0] };
        if (name === "SINGLE" && parameters[0]) return { kind: "unary", operator: "@", operand: parameters[0] };
        return { kind: "call", name, parameters };
      }
      return { kind: "apply", callee: inner(tree.callee as unknown as AstExpression), parameters };
    }
  }
}

/** A span such as A1:INDEX(…) may reach cells between its ends that the text does not name; two plain ends name them all. */
function noteSpan(left: Expression, right: Expression, references: StaticReference[]): void {
  if (left.kind !== "reference" || right.kind !== "reference" || !left.rect || !right.rect) return;
  const row = Math.min(left.rect.row, right.rect.row);
  const column = Math.min(left.rect.column, right.rect.column);
  references.push({
    sheetName: left.sheetName,
    rect: {
      row,
      column,
      rows: Math.max(left.rect.row + left.rect.rows, right.rect.row + right.rect.rows) - row,
      columns: Math.max(left.rect.column + left.rect.columns, right.rect.column + right.rect.columns) - column,
    },
  });
}

const faultOf = (text: string): Fault => new Fault(isFaultCode(text.toUpperCase()) ? (text.toUpperCase() as Fault["code"]) : "#VALUE!");

function arrayRows(elements: readonly (readonly { type: string; value?: unknown }[])[]): Scalar[][] {
  const rows = elements.map((row) =>
    row.map((element): Scalar => (element.type === "ErrorLiteral" ? faultOf(String(element.value)) : (element.value as Scalar))),
  );
  const width = rows[0]?.length ?? 0;
  if (rows.some((row) => row.length !== width)) throw new Error("the rows of the array in braces differ in length");
  return rows;
}

const REFERENCE_TYPES = new Set(["range", "range_beam"]);

/**
 * The formula as it reads when it is copied so many rows and columns away: references without $ move along; one that
 * would leave the sheet becomes #REF!. Everything else, unfinished text too, stays letter by letter.
 */
export function shiftFormula(formula: string, rows: number, columns: number): string {
  if (rows === 0 && columns === 0) return formula;
  return mapReferences(formula, (text) => {
    const { address } = splitSheet(text);
    const shifted = address.split(":").map((corner) => shiftCorner(corner, rows, columns));
    if (shifted.includes(null)) return "#REF!";
    return text.slice(0, text.length - address.length) + shifted.join(":");
  });
}

function shiftCorner(corner: string, rows: number, columns: number): string | null {
  const match = /^(\$?)([A-Za-z]*)(\$?)(\d*)$/.exec(corner);
  if (!match) return corner;
  const [, columnLock, letters = "", rowLock, digits = ""] = match;
  // In "5:7" the lock of a row is matched where a column's lock would stand.
  const rowLocked = rowLock === "$" || (letters === "" && columnLock === "$");
  const column = letters === "" ? null : columnFromText(letters) + (columnLock === "$" ? 0 : columns);
  const row = digits === "" ? null : Number(digits) - 1 + (rowLocked ? 0 : rows);
  if ((column !== null && (column < 0 || column >= COLUMN_LIMIT)) || (row !== null && (row < 0 || row >= ROW_LIMIT))) return null;
  const columnPart = column === null ? "" : `${columnLock}${columnText(column)}`;
  const rowPart = row === null ? "" : `${column === null ? columnLock || rowLock : rowLock}${row + 1}`;
  return columnPart + rowPart;
}

/** The formula with one sheet's name replaced wherever it is written. */
export function renameInFormula(formula: string, from: string, to: string): string {
  if (!formula.toLowerCase().includes(from.replace(/'/g, "''").toLowerCase())) return formula;
  return mapReferences(formula, (text) => {
    const { sheetName, address } = splitSheet(text);
    return sheetName !== null && sheetName.toLowerCase() === from.toLowerCase() ? `${quoteSheet(to)}!${address}` : text;
  });
}

function mapReferences(formula: string, change: (text: string) => string): string {
  try {
    return tokenize(formula, { withLocation: false })
      .map((token) => (REFERENCE_TYPES.has(token.type) ? change(token.value) : token.value))
      .join("");
  } catch {
    return formula;
  }
}
