import { Problem } from "../chain/problem";
import { isEmpty } from "../table/cell";
import type { CellValue, RateTable } from "../table/rate-table";
import { cellsOf, placeIn, shown, singleCell, type Argument } from "./argument";

/** The numbers that an argument takes; bounds are part of the domain unless the name says otherwise. */
export interface Domain {
  readonly least?: number;
  readonly above?: number;
  readonly most?: number;
  readonly below?: number;
  readonly whole?: boolean;
}

export const NOT_NEGATIVE: Domain = { least: 0 };

/** Seeds: whole numbers that a double holds exactly. */
export const SEED: Domain = { least: 0, most: Number.MAX_SAFE_INTEGER, whole: true };

/** Numbers in the shape they were given in; blank cells are 0, as the host may send them. */
export interface NumberRange {
  readonly values: Float64Array;
  readonly rows: number;
  readonly columns: number;
}

/** Times, horizons, fractions: a number or a range of numbers, each in the domain. @throws numberNeeded, numberOutside */
export function readNumbers(argument: Argument, name: string, domain: Domain): NumberRange {
  const { cells, rows, columns } = cellsOf(argument, name);
  const values = new Float64Array(cells.length);
  cells.forEach((cell, at) => (values[at] = numberFrom(cell, domain, placeIn(name, at, rows, columns))));
  return { values, rows, columns };
}

export function readTimes(argument: Argument, name: string): NumberRange {
  return readNumbers(argument, name, NOT_NEGATIVE);
}

/** One number; `omitted` stands in where the argument was left out, else it is required. */
export function readNumber(argument: Argument, name: string, domain: Domain, omitted?: number): number {
  if (argument === null && omitted !== undefined) return omitted;
  return numberFrom(singleCell(argument, name), domain, { argument: name });
}

/** n costs per time unit, one for each state, in one row or column; blanks are 0. @throws statesNeeded */
export function readStateCosts(argument: Argument, name: string, table: RateTable): Float64Array {
  const { values, rows, columns } = readNumbers(argument, name, {});
  if (values.length !== table.size || (rows > 1 && columns > 1)) throw new Problem("oneForEachState", { argument: name, rows, columns, size: table.size });
  return values;
}

function numberFrom(cell: CellValue, domain: Domain, where: Readonly<Record<string, string | number>>): number {
  const value = isEmpty(cell) ? 0 : cell;
  if (typeof value !== "number" || !Number.isFinite(value)) throw new Problem("numberNeeded", { ...where, found: shown(cell), ...domain });
  const { least = -Infinity, above = -Infinity, most = Infinity, below = Infinity, whole = false } = domain;
  if (value < least || value <= above || value > most || value >= below || (whole && !Number.isInteger(value)))
    throw new Problem("numberOutside", { ...where, value, ...domain });
  return value === 0 ? 0 : value;
}
