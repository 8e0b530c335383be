import type { Argument } from "../cells/argument";
import type { CellValue } from "../table/rate-table";

/**
 * A digest of arguments, 128 bits as text.
 *
 * Four multiply-and-rotate lanes of 32 bits over all content, each fed by the one before: enough that two tables of one
 * workbook do not meet by chance, with no cryptographic claim. Whoever trusts it compares the cells (`sameArguments`).
 */
export function digestOf(...args: readonly Argument[]): string {
  const hash = new Hash();
  for (const argument of args) hash.argument(argument);
  return hash.text();
}

const float = new Float64Array(1);
const halves = new Uint32Array(float.buffer);

class Hash {
  private a = 0x9e3779b1;
  private b = 0x85ebca77;
  private c = 0xc2b2ae3d;
  private d = 0x27d4eb2f;

  private word(word: number): void {
    this.a = Math.imul(this.a ^ word, 0x85ebca6b);
    this.a = (this.a << 13) | (this.a >>> 19);
    this.b = Math.imul(this.b + word, 0xcc9e2d51) ^ this.a;
    this.b = (this.b << 15) | (this.b >>> 17);
    this.c = Math.imul(this.c ^ word, 0x1b873593) + this.b;
    this.c = (this.c << 17) | (this.c >>> 15);
    this.d = Math.imul(this.d + word, 0x2545f491) ^ this.c;
    this.d = (this.d << 11) | (this.d >>> 21);
  }

  argument(cells: Argument): void {
    if (cells === null) {
      this.word(0x0a11);
      return;
    }
    this.word(0x5a11 + cells.length);
    for (let i = 0; i < cells.length; i++) {
      const row = cells[i];
      if (i > 0 && row === cells[i - 1]) continue; // the same array again: rows before and after tell how often
      this.word(i);
      this.word(0x7000 + row.length);
      for (const cell of row) this.cell(cell);
    }
  }

  private cell(cell: CellValue): void {
    if (typeof cell === "number") {
      float[0] = cell;
      this.word(1);
      this.word(halves[0]);
      this.word(halves[1]);
    } else if (typeof cell === "string") this.letters(2, cell);
    else if (typeof cell === "boolean") this.word(cell ? 3 : 4);
    else if (cell === null) this.word(5);
    else this.letters(6, cell.fault);
  }

  private letters(kind: number, text: string): void {
    this.word(kind + (text.length << 3));
    for (let i = 0; i < text.length; i++) this.word(text.charCodeAt(i));
  }

  text(): string {
    for (let i = 0; i < 4; i++) this.word(0x51ed + i);
    return [this.a, this.b, this.c, this.d].map((lane) => (lane >>> 0).toString(36)).join(".");
  }
}

/** Whether two lists of arguments hold the same cells, which settles what equal digests suggest. */
export function sameArguments(left: readonly Argument[], right: readonly Argument[]): boolean {
  return left.length === right.length && left.every((argument, k) => sameCells(argument, right[k]));
}

function sameCells(left: Argument, right: Argument): boolean {
  if (left === right) return true;
  if (left === null || right === null || left.length !== right.length) return false;
  return left.every((row, i) => {
    const other = right[i];
    if (i > 0 && row === left[i - 1] && other === right[i - 1]) return true;
    return row.length === other.length && row.every((cell, j) => sameCell(cell, other[j]));
  });
}

function sameCell(left: CellValue, right: CellValue): boolean {
  if (typeof left === "object" && left !== null) return typeof right === "object" && right !== null && left.fault === right.fault;
  return Object.is(left, right);
}

/** Rough size of cells in memory, for the bound of the cache. */
export function bytesOf(cells: readonly (readonly unknown[])[] | null): number {
  let bytes = 64;
  let last: readonly unknown[] | null = null;
  for (const row of cells ?? []) {
    bytes += 8;
    if (row === last) continue;
    last = row;
    bytes += 24;
    for (const cell of row) bytes += typeof cell === "string" ? 24 + 2 * cell.length : 12;
  }
  return bytes;
}
