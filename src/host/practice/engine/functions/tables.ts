/** Functions that make tables of tables. */
import type { Evaluation } from "../evaluate";
import { GRID_LIMIT } from "../operators";
import { compare, Fault, isGrid, toLogical, type Grid, type Scalar, type Value } from "../value";
import { asGrid, define, firstFault, fromLibrary, numberFrom, numbersIn, type Definition } from "./define";
import { invert, product } from "./matrix";

const EMPTY_TABLE = "Nothing is left of the table.";
const transpose = (grid: Grid): Scalar[][] => grid[0]!.map((_, column) => grid.map((row) => row[column]!));
const whole = (value: Value | undefined, evaluation: Evaluation, otherwise: number): number | Fault => {
  const number = numberFrom(value === null ? undefined : value, evaluation, otherwise);
  return number instanceof Fault ? number : Math.trunc(number);
};

/** A function whose first value is a table and whose further ones are whole numbers. */
function ofTable(name: string, signature: string, description: string, defaults: readonly number[], apply: (grid: Grid, ...numbers: number[]) => Value): Definition {
  return define(name, signature, description, ([table, ...rest], evaluation) => {
    const numbers: number[] = [];
    for (const [index, otherwise] of defaults.entries()) {
      const number = whole(rest[index], evaluation, otherwise);
      if (number instanceof Fault) return number;
      numbers.push(number);
    }
    return apply(asGrid(evaluation.read(table!)), ...numbers);
  });
}

/** Numbers of a table for the matrix functions; anything else is refused. */
function matrixOf(value: Value, evaluation: Evaluation): number[][] | Fault {
  const grid = asGrid(evaluation.read(value));
  const fault = firstFault(grid);
  if (fault) return fault;
  return grid.every((row) => row.every((entry) => typeof entry === "number")) ? (grid as number[][]) : new Fault("#VALUE!", "The table must hold numbers only.");
}

function ofSquare(name: string, description: string, apply: (matrix: number[][]) => Value): Definition {
  return define(name, "table", description, ([table], evaluation) => {
    const numbers = matrixOf(table!, evaluation);
    if (numbers instanceof Fault) return numbers;
    if (numbers.length !== numbers[0]!.length) return new Fault("#VALUE!", `The table has ${numbers.length} rows and ${numbers[0]!.length} columns; it must be square.`);
    return apply(numbers);
  });
}

const sealed = (rows: number[][]): Grid => rows.map((row) => row.map(fromLibrary));

/** Rows in order by keys; -1 turns a key around. Errors stop it, blanks go last. */
function sortRows(grid: Grid, keys: readonly { readonly at: (row: number) => Scalar; readonly order: number }[]): Value {
  const places = grid.map((_, index) => index);
  for (const key of keys) {
    if (key.order !== 1 && key.order !== -1) return new Fault("#VALUE!", "The order is 1 (up) or -1 (down).");
    for (const row of places) {
      const value = key.at(row);
      if (value instanceof Fault) return value;
    }
  }
  places.sort((a, b) => {
    for (const { at, order } of keys) {
      const x = at(a) as Exclude<Scalar, Fault>;
      const y = at(b) as Exclude<Scalar, Fault>;
      if ((x === null) !== (y === null)) return x === null ? 1 : -1;
      const difference = x === null || y === null ? 0 : compare(x, y) * order;
      if (difference !== 0) return difference;
    }
    return a - b;
  });
  return places.map((row) => grid[row]!);
}

function stack(values: readonly Value[], evaluation: Evaluation, sideways: boolean): Value {
  const grids = values.map((value) => (sideways ? transpose(asGrid(evaluation.read(value))) : asGrid(evaluation.read(value))));
  const width = Math.max(...grids.map((grid) => grid[0]!.length));
  const filler = new Fault("#N/A", "The tables differ in size; here is nothing.");
  const rows = grids.flatMap((grid) => grid.map((row) => [...row, ...new Array<Scalar>(width - row.length).fill(filler)]));
  return sideways ? transpose(rows) : rows;
}

function part(grid: Grid, rows: number, columns: number, take: boolean): Value {
  const cut = <T>(list: readonly T[], count: number): readonly T[] => {
    if (take) return count >= 0 ? list.slice(0, count) : list.slice(count);
    return count >= 0 ? list.slice(count) : list.slice(0, count);
  };
  const kept = cut(grid, rows).map((row) => cut(row, columns));
  return kept.length === 0 || kept[0]!.length === 0 ? new Fault("#CALC!", EMPTY_TABLE) : kept;
}

function chosen(name: string, what: string, pick: (grid: Grid, places: readonly number[]) => Value): Definition {
  return define(name, "table, number, [more]...", `Some ${what} of a table, negative numbers from the end.`, ([table, ...places], evaluation) => {
    const numbers = numbersIn(places, evaluation);
    return numbers instanceof Fault ? numbers : pick(asGrid(evaluation.read(table!)), numbers.map(Math.trunc));
  });
}

function pickRows(grid: Grid, places: readonly number[]): Value {
  const rows: (readonly Scalar[])[] = [];
  for (const place of places) {
    const row = grid[place < 0 ? grid.length + place : place - 1];
    if (!row) return new Fault("#VALUE!", `The table has ${grid.length} lines; ${place} is not one of them.`);
    rows.push(row);
  }
  return rows;
}

function filter(table: Value, keep: Value, otherwise: Value | undefined, evaluation: Evaluation): Value {
  const grid = asGrid(evaluation.read(table));
  const tests = asGrid(evaluation.read(keep));
  const byRow = tests[0]!.length === 1 && tests.length === grid.length;
  if (!byRow && !(tests.length === 1 && tests[0]!.length === grid[0]!.length)) return new Fault("#VALUE!", "The conditions must be one column as high as the table, or one row as wide.");
  const flags: boolean[] = [];
  for (const entry of tests.flat()) {
    const flag = toLogical(entry);
    if (flag instanceof Fault) return flag;
    flags.push(flag);
  }
  if (!flags.includes(true)) return otherwise ?? new Fault("#CALC!", "No row meets the conditions.");
  return byRow ? grid.filter((_, row) => flags[row]) : grid.map((row) => row.filter((_, column) => flags[column]));
}

function unique(grid: Grid, byColumn: boolean, onlyOnce: boolean): Value {
  const rows = byColumn ? transpose(grid) : grid;
  const seen = new Map<string, { row: readonly Scalar[]; count: number }>();
  for (const row of rows) {
    const name = JSON.stringify(row.map((entry) => (typeof entry === "string" ? entry.toLowerCase() : entry instanceof Fault ? { code: entry.code } : entry)));
    const known = seen.get(name);
    if (known) known.count++;
    else seen.set(name, { row, count: 1 });
  }
  const kept = [...seen.values()].filter((entry) => !onlyOnce || entry.count === 1).map((entry) => entry.row);
  if (kept.length === 0) return new Fault("#CALC!", EMPTY_TABLE);
  return byColumn ? transpose(kept) : kept;
}

/** A list of entries laid out row by row. */
function wrap(grid: Grid, width: number, filler: Scalar): Value {
  const entries = grid.flat();
  if (grid.length > 1 && grid[0]!.length > 1) return new Fault("#VALUE!", "Only a single row or column can be wrapped.");
  if (width < 1) return new Fault("#NUM!", "The lines need at least one entry.");
  const rows: Scalar[][] = [];
  for (let at = 0; at < entries.length; at += width) {
    const row = entries.slice(at, at + width);
    rows.push([...row, ...new Array<Scalar>(width - row.length).fill(filler)]);
  }
  return rows;
}

const flatten = (grid: Grid, ignore: number, byColumn: number): Scalar[] | Fault => {
  const entries = (byColumn === 1 ? transpose(grid) : grid).flat().filter((entry) => !((ignore & 1) === 1 && entry === null) && !((ignore & 2) === 2 && entry instanceof Fault));
  return entries.length === 0 ? new Fault("#CALC!", EMPTY_TABLE) : entries;
};

const NO_FILLER = new Fault("#N/A", "The list ends before the table is full.");

export const tables: readonly Definition[] = [
  define("SEQUENCE", "rows, [columns], [start], [step]", "Numbers in order.", (values, evaluation) => {
    const rows = whole(values[0], evaluation, 1);
    const columns = whole(values[1], evaluation, 1);
    const start = numberFrom(values[2] ?? undefined, evaluation, 1);
    const step = numberFrom(values[3] ?? undefined, evaluation, 1);
    for (const entry of [rows, columns, start, step]) if (entry instanceof Fault) return entry;
    const [height, width, first, by] = [rows, columns, start, step] as [number, number, number, number];
    if (height < 1 || width < 1 || height * width > GRID_LIMIT) return new Fault("#VALUE!", `The table needs 1 to ${GRID_LIMIT} entries.`);
    return Array.from({ length: height }, (_, row) => Array.from({ length: width }, (__, column) => fromLibrary(first + by * (row * width + column))));
  }),
  define("RANDARRAY", "[rows], [columns], [lowest], [highest], [whole]", "A table of random numbers.", (values, evaluation) => {
    const numbers = [1, 1, 0, 1, 0].map((otherwise, index) => numberFrom(values[index] ?? undefined, evaluation, otherwise));
    for (const entry of numbers) if (entry instanceof Fault) return entry;
    const [rows, columns, low, high, inWhole] = numbers as [number, number, number, number, number];
    if (!(rows >= 1 && columns >= 1 && rows * columns <= GRID_LIMIT)) return new Fault("#VALUE!", `The table needs 1 to ${GRID_LIMIT} entries.`);
    if (high < low) return new Fault("#VALUE!", "The highest number lies below the lowest.");
    const draw = () => (inWhole !== 0 ? low + Math.floor(evaluation.sight.random() * (high - low + 1)) : low + evaluation.sight.random() * (high - low));
    return Array.from({ length: Math.trunc(rows) }, () => Array.from({ length: Math.trunc(columns) }, draw));
  }),
  define("TRANSPOSE", "table", "Rows as columns.", ([table], evaluation) => transpose(asGrid(evaluation.read(table!)))),
  define("FILTER", "table, conditions, [otherwise]", "The rows or columns that meet conditions.", ([table, keep, otherwise], evaluation) => filter(table!, keep!, otherwise, evaluation)),
  ofTable("SORT", "table, [column], [order], [by column]", "A table in the order of one of its columns.", [1, 1, 0], (grid, at, order, byColumn) => {
    const rows = byColumn ? transpose(grid) : grid;
    if (at! < 1 || at! > rows[0]!.length) return new Fault("#VALUE!", `The table has no column ${at}; its last is ${rows[0]!.length}.`);
    const sorted = sortRows(rows, [{ at: (row) => rows[row]![at! - 1]!, order: order! }]);
    return byColumn && isGrid(sorted) ? transpose(sorted) : sorted;
  }),
  define("SORTBY", "table, keys, [order], [more]...", "A table in the order of other columns.", ([table, ...rest], evaluation) => {
    const grid = asGrid(evaluation.read(table!));
    const keys: { at: (row: number) => Scalar; order: number }[] = [];
    for (let index = 0; index < rest.length; index += 2) {
      const entries = asGrid(evaluation.read(rest[index]!)).flat();
      if (entries.length !== grid.length) return new Fault("#VALUE!", `The table has ${grid.length} rows and the keys ${entries.length}.`);
      const order = numberFrom(rest[index + 1], evaluation, 1);
      if (order instanceof Fault) return order;
      keys.push({ at: (row) => entries[row]!, order });
    }
    return sortRows(grid, keys);
  }),
  ofTable("UNIQUE", "table, [by column], [only once]", "The rows of a table, each once.", [0, 0], (grid, byColumn, once) => unique(grid, byColumn !== 0, once !== 0)),
  define("HSTACK", "table, [more]...", "Tables side by side.", (values, evaluation) => stack(values, evaluation, true)),
  define("VSTACK", "table, [more]...", "Tables one below the other.", (values, evaluation) => stack(values, evaluation, false)),
  ofTable("TAKE", "table, [rows], [columns]", "The first rows and columns; the last by negative numbers.", [1e9, 1e9], (grid, rows, columns) => part(grid, rows!, columns!, true)),
  ofTable("DROP", "table, [rows], [columns]", "A table without its first rows and columns; without the last by negative numbers.", [0, 0], (grid, rows, columns) => part(grid, rows!, columns!, false)),
  chosen("CHOOSEROWS", "rows", pickRows),
  chosen("CHOOSECOLS", "columns", (grid, places) => {
    const picked = pickRows(transpose(grid), places);
    return isGrid(picked) ? transpose(picked) : picked;
  }),
  ofTable("TOCOL", "table, [ignore], [by column]", "A table as one column.", [0, 0], (grid, ignore, byColumn) => {
    const entries = flatten(grid, ignore!, byColumn!);
    return entries instanceof Fault ? entries : entries.map((entry) => [entry]);
  }),
  ofTable("TOROW", "table, [ignore], [by column]", "A table as one row.", [0, 0], (grid, ignore, byColumn) => {
    const entries = flatten(grid, ignore!, byColumn!);
    return entries instanceof Fault ? entries : [entries];
  }),
  ofTable("WRAPROWS", "list, width", "A list laid out in rows.", [1], (grid, width) => wrap(grid, width!, NO_FILLER)),
  ofTable("WRAPCOLS", "list, height", "A list laid out in columns.", [1], (grid, height) => {
    const rows = wrap(grid, height!, NO_FILLER);
    return isGrid(rows) ? transpose(rows) : rows;
  }),
  ofTable("MUNIT", "size", "The unit matrix.", [], (grid) => {
    const size = grid[0]![0]!;
    if (typeof size !== "number" || !(size >= 1 && size <= 2000)) return new Fault("#VALUE!", "The size is a number from 1 to 2000.");
    return Array.from({ length: Math.trunc(size) }, (_, row) => Array.from({ length: Math.trunc(size) }, (__, column) => (row === column ? 1 : 0)));
  }),
  define("MMULT", "first, second", "The matrix product.", ([first, second], evaluation) => {
    const left = matrixOf(first!, evaluation);
    const right = matrixOf(second!, evaluation);
    if (left instanceof Fault) return left;
    if (right instanceof Fault) return right;
    if (left[0]!.length !== right.length) return new Fault("#VALUE!", `The first table has ${left[0]!.length} columns and the second ${right.length} rows; they must agree.`);
    return sealed(product(left, right));
  }),
  ofSquare("MINVERSE", "The inverse matrix.", (matrix) => {
    const { inverse } = invert(matrix);
    return inverse === null ? new Fault("#NUM!", "The matrix has no inverse.") : sealed(inverse);
  }),
  ofSquare("MDETERM", "The determinant.", (matrix) => fromLibrary(invert(matrix).determinant)),
];
