/** How a cell's text fits into its width. */
import type { CellView } from "../engine";

/** Beside a text: 8 px on each side and the grid line (grid.css); a number may come nearer to its left. */
const PADDING = 18;
const NUMBER_PADDING = 12;

/** Widths of texts in the page's font, remembered. */
export class TextMeasure {
  private readonly context: CanvasRenderingContext2D | null = document.createElement("canvas").getContext("2d");
  private readonly known = new Map<string, number>();
  private font = "13px sans-serif";

  /** Takes over the font in which the grid is drawn. */
  use(element: Element): void {
    const style = getComputedStyle(element);
    this.font = `${style.fontSize} ${style.fontFamily}`;
    this.known.clear();
  }

  width(text: string, bold: boolean): number {
    const key = bold ? `b${text}` : `r${text}`;
    const known = this.known.get(key);
    if (known !== undefined) return known;
    if (!this.context) return text.length * 8;
    this.context.font = bold ? `600 ${this.font}` : this.font;
    const width = this.context.measureText(text).width;
    if (this.known.size > 20_000) this.known.clear();
    this.known.set(key, width);
    return width;
  }

  /** Column width that shows a text in full. */
  needed(text: string, bold: boolean): number {
    return Math.ceil(this.width(text, bold)) + PADDING;
  }

  fits(text: string, bold: boolean, columnWidth: number, padding = PADDING): boolean {
    // The common case costs nothing: no character of the font is wider than its size.
    return text.length * 13 + padding <= columnWidth || Math.ceil(this.width(text, bold)) + padding <= columnWidth;
  }
}

/**
 * The text of a cell, as far as its column shows it. A number is never cut: a general one is rounded to fewer digits,
 * and one that fits in no form is replaced by "…", since a cut number reads as another number.
 */
export function fitted(view: CellView, columnWidth: number, measure: TextMeasure, decimal: string): string {
  if (view.kind !== "number" || measure.fits(view.text, view.bold, columnWidth, NUMBER_PADDING)) return view.text;
  if (view.format === "General" && typeof view.value === "number") {
    for (let digits = 12; digits >= 1; digits -= 1) {
      const text = general(view.value, digits, decimal);
      if (measure.fits(text, view.bold, columnWidth, NUMBER_PADDING)) return text;
    }
  }
  return "…";
}

/** Shortest writing of a number rounded to a count of significant digits; large and small ones with a power of ten. */
export function general(value: number, digits: number, decimal: string): string {
  const rounded = Number(value.toPrecision(digits));
  const plain = String(rounded);
  const size = Math.abs(rounded);
  const text = size !== 0 && (size < 1e-4 || size >= 1e15) ? powered(rounded) : plain;
  return text.replace(".", decimal);
}

function powered(value: number): string {
  const [mantissa, exponent] = value.toExponential().split("e") as [string, string];
  return `${mantissa}E${exponent}`;
}
