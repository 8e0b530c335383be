import type { Argument } from "../cells/argument";
import type { Cells, CellValue } from "../table/rate-table";

/**
 * A digest of arguments as text, 64 bits for each. Whoever finds something by it compares the cells (`sameArguments`): a
 * digest that two tables share costs time and nothing else.
 *
 * Two multiply-and-rotate lanes of 32 bits over all content, the second fed by the first. An argument's digest is kept as
 * long as its cells live, so that a table is walked once although answers and tables are kept under different keys.
 */
export function digestOf(...args: readonly Argument[]): string {
  return args.map(digestOfOne).join(" ");
}

const known = new WeakMap<Cells, string>();

function digestOfOne(cells: Argument): string {
  if (cells === null) return "-";
  let digest = known.get(cells);
  if (digest === undefined) known.set(cells, (digest = new Hash().cells(cells)));
  return digest;
}

const float = new Float64Array(1);
const halves = new Uint32Array(float.buffer);

class Hash {
  private a = 0x9e3779b1;
  private b = 0x85ebca77;

  private word(word: number): void {
    const a = Math.imul(this.a ^ word, 0x85ebca6b);
    this.a = (a << 13) | (a >>> 19);
    const b = Math.imul(this.b + word, 0xcc9e2d51) ^ this.a;
    this.b = (b << 15) | (b >>> 17);
  }

  cells(cells: Cells): string {
    this.word(cells.length);
    for (let i = 0; i < cells.length; i++) {
      const row = cells[i];
      if (i > 0 && row === cells[i - 1]) continue; // the same array again: rows before and after tell how often
      this.word(i);
      this.word(row.length);
      for (const cell of row) this.cell(cell);
    }
    for (let i = 0; i < 4; i++) this.word(0x51ed + i);
    return `${(this.a >>> 0).toString(36)}.${(this.b >>> 0).toString(36)}`;
  }

  private cell(cell: CellValue): void {
    if (typeof cell === "number") {
      float[0] = cell;
      this.word(halves[0]);
      this.word(halves[1] ^ 1);
    } else if (typeof cell === "string") this.letters(2, cell);
    else if (typeof cell === "boolean") this.word(cell ? 3 : 4);
    else if (cell === null) this.word(5);
    else this.letters(6, cell.fault);
  }

  private letters(kind: number, text: string): void {
    this.word(kind + (text.length << 3));
    for (let i = 0; i < text.length; i++) this.word(text.charCodeAt(i));
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

/** Rough size of cells in memory, for the bound of the cache; a row that several places share counts once. */
export function bytesOf(cells: readonly (readonly unknown[])[] | null): number {
  let bytes = 64;
  let last: readonly unknown[] | null = null;
  for (const row of cells ?? []) {
    bytes += row === last ? 8 : 40 + 24 * row.length;
    last = row;
  }
  return bytes;
}
