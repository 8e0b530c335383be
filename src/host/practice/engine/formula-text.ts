/** Formula text while it is being typed: its pieces for highlighting, and the call around the caret. Never throws. */
import { tokenize } from "@borgar/fx";
import { parseArea, splitSheet, type Rect } from "./address";
import { functionName } from "./formula";
import { toCanonical, type Locale } from "./locale";

export type PieceKind = "reference" | "function" | "name" | "number" | "text" | "logical" | "error" | "operator" | "open" | "close" | "separator" | "space" | "unknown";

export interface Piece {
  readonly kind: PieceKind;
  readonly start: number;
  readonly end: number;
  /** As typed, in the local spelling. */
  readonly text: string;
  /** For a reference: where it points; spill when a # follows. */
  readonly reference?: Rect & { readonly sheetName: string | null; readonly spill: boolean };
}

const KINDS: Readonly<Record<string, PieceKind>> = {
  operator: "operator",
  bool: "logical",
  error: "error",
  number: "number",
  func: "function",
  newline: "space",
  whitespace: "space",
  string: "text",
  range: "reference",
  range_beam: "reference",
  range_named: "name",
  structured: "name",
  fx_prefix: "operator",
};

/** The pieces of a formula in the local spelling, in order and without gaps. Text that is no formula gives none. */
export function pieces(text: string, locale: Locale): Piece[] {
  if (!text.startsWith("=")) return [];
  const canonical = toCanonical(text, locale); // same length, letter for letter
  let tokens: { type: string; value: string }[];
  try {
    tokens = tokenize(canonical, { withLocation: false, negativeNumbers: false });
  } catch {
    return [{ kind: "unknown", start: 0, end: text.length, text }];
  }
  const result: Piece[] = [];
  let start = 0;
  for (const [index, token] of tokens.entries()) {
    const end = start + token.value.length;
    const kind = kindOf(token);
    const piece = { kind, start, end, text: text.slice(start, end) };
    if (kind === "reference") {
      const { sheetName, address } = splitSheet(token.value);
      const rect = parseArea(address);
      result.push(rect ? { ...piece, reference: { ...rect, sheetName, spill: tokens[index + 1]?.value === "#" } } : { ...piece, kind: "unknown" });
    } else result.push(piece);
    start = end;
  }
  return result;
}

function kindOf(token: { type: string; value: string }): PieceKind {
  if (token.type !== "operator") return KINDS[token.type] ?? "unknown";
  if (token.value === "(" || token.value === "{") return "open";
  if (token.value === ")" || token.value === "}") return "close";
  return token.value === "," || token.value === ";" ? "separator" : "operator";
}

export interface CallAt {
  /** In capitals, such as "CTMC.TRANSITION". */
  readonly name: string;
  /** The argument that the caret is in, from 0. */
  readonly argument: number;
  /** Where the function's name begins and its opening bracket stands. */
  readonly start: number;
  readonly open: number;
}

/** The innermost function call whose brackets the caret is inside, or null. */
export function callAt(text: string, caret: number, locale: Locale): CallAt | null {
  const open: { call: CallAt | null; argument: number }[] = [];
  let before: Piece | null = null;
  for (const piece of pieces(text, locale)) {
    if (piece.start >= caret) break;
    if (piece.kind === "open") {
      const call = piece.text === "(" && before?.kind === "function" ? { name: functionName(before.text), argument: 0, start: before.start, open: piece.start } : null;
      open.push({ call, argument: 0 });
    } else if (piece.kind === "close") open.pop();
    else if (piece.kind === "separator") {
      const innermost = open.at(-1);
      if (innermost) innermost.argument++;
    }
    before = piece;
  }
  for (let depth = open.length - 1; depth >= 0; depth--) {
    const { call, argument } = open[depth]!;
    if (call) return { ...call, argument };
  }
  return null;
}
