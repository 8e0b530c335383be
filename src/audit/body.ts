import { Generator, LARGEST_RATE, SMALLEST_RATE, type Arrow } from "../chain/generator";
import type { Cells, CellValue, Layout, Place } from "../table/rate-table";
import { isDash, isDiagonalMark, isEmpty, nameKey } from "../table/cell";

/**
 * A table's numbers as far as they can be read, faults and all: what the rules look at where the strict reader refuses.
 * Nothing here is ever computed with on a user's behalf.
 */
export interface Body {
  readonly form: "square" | "list";
  readonly size: number;
  /** Row-major size × size. 0 where blank or dash, NaN where the cell is no number. */
  readonly values: Float64Array;
  /** 1 where a number was typed, zero included. */
  readonly typed: Uint8Array;
  /** Of a list too long for the arrays above, which are then empty: its arrows, a cell that cannot be read included. */
  readonly long: Generator | null;
  /** Sum of the readable, positive numbers of each row off the diagonal. */
  readonly exits: Float64Array;
  /** The name of a state, or "" where the table has none. */
  nameOf(state: number): string;
  /** Where an entry stands in the given range; null for a pair that a list does not hold. */
  placeOf(from: number, to: number): Place | null;
  /** In a long list, the first row that names a state. */
  firstPlaceOf?(state: number): Place | null;
}

/** Lists of more states are judged by their graph alone: what looks at every pair of states would take seconds. */
export const LONGEST_PAIRWISE = 3000;

export function textOf(value: CellValue | undefined): string {
  return typeof value === "string" ? value.trim() : typeof value === "number" ? String(value) : "";
}

export function readBody(cells: Cells, layout: Layout): Body {
  return layout.form === "list" ? listBody(cells, layout) : squareBody(cells, layout);
}

function squareBody(cells: Cells, layout: Layout): Body {
  const { size, body } = layout;
  const values = new Float64Array(size * size);
  const typed = new Uint8Array(size * size);
  for (let i = 0; i < size; i++)
    for (let j = 0; j < size; j++) {
      const cell = cells[body.row + i]?.[body.column + j];
      values[i * size + j] = numberOf(cell ?? null, i === j);
      if (typeof cell === "number") typed[i * size + j] = 1;
    }
  return finishBody("square", layout, values, typed, (from, to) => ({ row: body.row + from, column: body.column + to }));
}

function listBody(cells: Cells, layout: Layout): Body {
  const { size, body, names } = layout;
  const long = size > LONGEST_PAIRWISE;
  const values = new Float64Array(long ? 0 : size * size);
  const typed = new Uint8Array(long ? 0 : size * size);
  const places = new Map<number, Place>();
  const first = new Map<number, Place>();
  const arrows: Arrow[] = [];
  const numbers = new Map((names ?? []).map((name, state) => [nameKey(name), state]));
  for (let row = body.row; row < body.row + body.rows; row++) {
    const from = numbers.get(nameKey(textOf(cells[row]?.[body.column])));
    const to = numbers.get(nameKey(textOf(cells[row]?.[body.column + 1])));
    if (from === undefined || to === undefined) continue;
    const at = from * size + to;
    if (places.has(at)) continue;
    const cell = cells[row]?.[body.column + 2];
    const place = { row, column: body.column + 2 };
    places.set(at, place);
    const value = numberOf(cell ?? null, false);
    if (long) {
      if (value !== 0 && from !== to) arrows.push([from, to, value >= SMALLEST_RATE && value <= LARGEST_RATE ? value : 1]);
      for (const state of [from, to]) if (!first.has(state)) first.set(state, place);
      continue;
    }
    values[at] = value;
    if (typeof cell === "number") typed[at] = 1;
  }
  if (long) {
    const chain = Generator.fromArrows(size, arrows);
    const placeOf = (from: number, to: number): Place | null => places.get(from * size + to) ?? null;
    const nameOf = (state: number): string => names?.[state] ?? "";
    return { form: "list", size, values, typed, long: chain, exits: chain.exitRate, placeOf, firstPlaceOf: (state) => first.get(state) ?? null, nameOf };
  }
  return finishBody("list", layout, values, typed, (from, to) => places.get(from * size + to) ?? null);
}

function finishBody(form: Body["form"], layout: Layout, values: Float64Array, typed: Uint8Array, placeOf: Body["placeOf"]): Body {
  const { size, names } = layout;
  const exits = new Float64Array(size);
  for (let i = 0; i < size; i++)
    for (let j = 0; j < size; j++) if (i !== j && values[i * size + j] > 0) exits[i] += values[i * size + j];
  return { form, size, values, typed, long: null, exits, placeOf, nameOf: (state) => names?.[state] ?? "" };
}

/** The chain that the readable, positive rates describe. */
export function generatorOf(body: Body): Generator {
  return chainWhere(body, (value) => (value >= SMALLEST_RATE && value <= LARGEST_RATE ? value : 0));
}

/** Who may lead to whom: a cell that cannot be read, or is no rate, counts as an arrow, since it may be meant for one. */
export function possibleArrows(body: Body): Generator {
  return chainWhere(body, (value) => (value === 0 ? 0 : 1));
}

function chainWhere(body: Body, rateOf: (value: number) => number): Generator {
  if (body.long) return body.long;
  const arrows: Arrow[] = [];
  for (let i = 0; i < body.size; i++)
    for (let j = 0; j < body.size; j++) {
      const rate = i === j ? 0 : rateOf(body.values[i * body.size + j]);
      if (rate !== 0) arrows.push([i, j, rate]);
    }
  return Generator.fromArrows(body.size, arrows);
}

function numberOf(cell: CellValue, onDiagonal: boolean): number {
  if (typeof cell === "number") return cell;
  return isEmpty(cell) || isDash(cell) || (onDiagonal && isDiagonalMark(cell)) ? 0 : NaN;
}

/**
 * How far the sum of these numbers may stray when each was rounded to the decimals of the longest of them: half a last
 * digit each. 0 for numbers that were computed rather than typed (more than 12 decimals), and for whole numbers, which are meant exactly.
 */
export function roundingBand(values: readonly number[]): number {
  let decimals = 0;
  for (const value of values) decimals = Math.max(decimals, decimalsOf(value));
  return decimals > 12 || decimals === 0 ? 0 : values.length * 0.5 * 10 ** -decimals;
}

export function decimalsOf(value: number): number {
  if (!Number.isFinite(value) || value === 0) return 0;
  const [digits, exponent] = String(Math.abs(value)).split("e");
  const fraction = digits.split(".")[1]?.length ?? 0;
  return Math.max(0, fraction - Number(exponent ?? 0));
}
