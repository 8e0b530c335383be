/**
 * What a formula says while it is being typed: the ranges it uses, the word that could be completed, whether a range may
 * be put where the caret is. Stands on the engine's reading of the text, which tolerates unfinished formulas.
 */
import { areaText, pieces, type Area as BookArea, type Book, type Locale, type Piece } from "../engine";
import type { Area } from "./selection";

export interface UsedRange {
  readonly start: number;
  readonly end: number;
  /** Null where the sheet named does not exist. */
  readonly area: BookArea | null;
  /** The same range written twice carries the same number, the order of first appearance. */
  readonly mark: number;
}

export function isFormula(text: string): boolean {
  return text.startsWith("=");
}

/** The ranges of a formula in the order of writing; `A5#` stands for all the cells that A5 fills. */
export function usedRanges(text: string, book: Book, sheet: string): UsedRange[] {
  if (!isFormula(text)) return [];
  const marks = new Map<string, number>();
  const found: UsedRange[] = [];
  for (const piece of pieces(text, book.locale)) {
    const reference = piece.kind === "reference" ? piece.reference : undefined;
    if (!reference) continue;
    const id = reference.sheetName === null ? sheet : book.sheetNamed(reference.sheetName)?.id;
    let { rows, columns } = reference;
    if (reference.spill && id !== undefined) {
      const extent = book.view(id, reference.row, reference.column).extent;
      if (extent) ({ rows, columns } = extent);
    }
    const area = id === undefined ? null : { sheet: id, row: reference.row, column: reference.column, rows, columns };
    const key = area ? `${id}!${areaText(area, null)}` : piece.text.toLowerCase();
    const mark = marks.get(key) ?? marks.size;
    marks.set(key, mark);
    found.push({ start: piece.start, end: piece.end, area, mark });
  }
  return found;
}

/** The beginning of a name that ends at the caret, such as `CTMC.TR`; null inside text, numbers and ranges. */
export function wordAt(text: string, caret: number, locale: Locale): { readonly start: number; readonly word: string } | null {
  if (!isFormula(text) || /[\w.(]/.test(text[caret] ?? "")) return null;
  const match = /[A-Za-z][\w.]*$/.exec(text.slice(0, caret));
  if (!match || (match.index > 0 && /[$!:'"\p{L}]/u.test(text[match.index - 1]!))) return null;
  const around = pieces(text, locale).find((piece) => piece.start < caret && caret <= piece.end);
  return around && (around.kind === "text" || around.kind === "number") ? null : { start: match.index, word: match[0] };
}

/** True where a range could stand: after an opening bracket, an operator or a separator, with nothing but space since. */
export function takesRange(text: string, caret: number, locale: Locale): boolean {
  if (!isFormula(text) || caret < 1) return false;
  if (text.slice(0, caret).trim() === "=") return true;
  let last: Piece | null = null;
  for (const piece of pieces(text.slice(0, caret), locale)) if (piece.kind !== "space") last = piece;
  if (!last || last.text === "{") return false;
  return last.kind === "open" || last.kind === "separator" || (last.kind === "operator" && !"#%".includes(last.text));
}

/** A range as a formula writes it: with its sheet's name when that is another one than the formula's. */
export function rangeText(area: Area, sheetName: string | null): string {
  return areaText(area, sheetName);
}

/** F4: the reference at the caret goes through B3, $B$3, B$3, $B3. */
export function turnAbsolute(text: string, caret: number, locale: Locale): { text: string; caret: number } | null {
  const piece = isFormula(text) ? pieces(text, locale).find((p) => p.kind === "reference" && p.start <= caret && caret <= p.end) : undefined;
  if (!piece) return null;
  const cut = piece.text.lastIndexOf("!") + 1;
  const turned = piece.text.slice(0, cut) + piece.text.slice(cut).replace(/(\$?)([A-Za-z]+)(\$?)(\d+)/g, (_, c: string, column: string, r: string, row: string) => {
    const [left, top] = c && r ? ["", "$"] : r ? ["$", ""] : c ? ["", ""] : ["$", "$"];
    return left + column + top + row;
  });
  return { text: text.slice(0, piece.start) + turned + text.slice(piece.end), caret: piece.start + turned.length };
}
