/** Finding cells and values. */
import { cellText, columnText, parseArea, quoteSheet, splitSheet, COLUMN_LIMIT, ROW_LIMIT } from "../address";
import type { Evaluation } from "../evaluate";
import { lift } from "../operators";
import { compare, Fault, isGrid, Reference, toLogical, type Grid, type Scalar, type Value } from "../value";
import { wildcard } from "./criteria";
import { asGrid, define, defineLifted, numberFrom, type Definition } from "./define";

type Plain = Exclude<Scalar, Fault>;
const NOT_FOUND = (wanted: Scalar): Fault => new Fault("#N/A", `${wanted === null ? "A blank" : wanted instanceof Fault ? wanted.code : typeof wanted === "string" ? `"${wanted}"` : String(wanted)} was not found.`);

const sameKind = (a: Plain, b: Plain): boolean => typeof a === typeof b;

/** How a match is sought: 0 exact, -1 exact or next smaller, 1 exact or next larger, 2 with wildcards. */
function search(wanted: Scalar, entries: readonly Scalar[], mode: number, backward: boolean): number {
  if (wanted instanceof Fault) return -1;
  const target = wanted ?? 0;
  const order = entries.map((_, index) => (backward ? entries.length - 1 - index : index));
  if (mode === 2 && typeof target === "string") {
    const pattern = wildcard(target);
    return order.find((index) => typeof entries[index] === "string" && pattern.test(entries[index])) ?? -1;
  }
  let best = -1;
  for (const index of order) {
    const entry = entries[index]!;
    if (entry === null || entry instanceof Fault || !sameKind(entry, target)) continue;
    const difference = compare(entry, target);
    if (difference === 0) return index;
    if ((mode === -1 && difference < 0) || (mode === 1 && difference > 0)) {
      if (best < 0 || compare(entry, entries[best] as Plain) * mode < 0) best = index;
    }
  }
  return best;
}

/** The last entry at or below the target in a list in rising order (at or above in a falling one), by halving as the old look-ups do. */
function searchSorted(wanted: Scalar, entries: readonly Scalar[], falling = false): number {
  if (wanted instanceof Fault) return -1;
  const target = wanted ?? 0;
  const places = entries.map((_, index) => index).filter((index) => {
    const entry = entries[index]!;
    return entry !== null && !(entry instanceof Fault) && sameKind(entry, target);
  });
  let low = 0;
  let high = places.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    const difference = compare(entries[places[middle]!] as Plain, target);
    if (falling ? difference >= 0 : difference <= 0) low = middle + 1;
    else high = middle;
  }
  return low === 0 ? -1 : places[low - 1]!;
}

function single(value: Value | undefined, evaluation: Evaluation): Scalar {
  return value === undefined ? null : asGrid(evaluation.read(value))[0]![0]!;
}

function lineOf(value: Value, evaluation: Evaluation): Scalar[] | Fault {
  const grid = asGrid(evaluation.read(value));
  return grid.length === 1 || grid[0]!.length === 1 ? grid.flat() : new Fault("#N/A", "The search needs a single row or column.");
}

function overWanted(wanted: Value, evaluation: Evaluation, find: (scalar: Scalar) => Scalar): Value {
  return lift([evaluation.read(wanted)], (scalar = null) => (scalar instanceof Fault ? scalar : find(scalar)));
}

function match(values: readonly Value[], evaluation: Evaluation, exactByDefault: boolean): Value {
  const entries = lineOf(values[1]!, evaluation);
  if (entries instanceof Fault) return entries;
  const mode = numberFrom(values[2], evaluation, exactByDefault ? 0 : 1);
  if (mode instanceof Fault) return mode;
  const way = exactByDefault ? numberFrom(values[3], evaluation, 1) : 1;
  if (way instanceof Fault) return way;
  return overWanted(values[0]!, evaluation, (wanted) => {
    const at = exactByDefault ? search(wanted, entries, mode, way < 0) : mode === 0 ? search(wanted, entries, 2, false) : searchSorted(wanted, entries, mode < 0);
    return at < 0 ? NOT_FOUND(wanted) : at + 1;
  });
}

function xlookup(values: readonly Value[], evaluation: Evaluation): Value {
  const [wanted, within, results, otherwise, modeValue, wayValue] = values;
  const entries = lineOf(within!, evaluation);
  if (entries instanceof Fault) return entries;
  const mode = numberFrom(modeValue ?? undefined, evaluation, 0);
  if (mode instanceof Fault) return mode;
  const way = numberFrom(wayValue ?? undefined, evaluation, 1);
  if (way instanceof Fault) return way;
  const table = asGrid(evaluation.read(results!));
  const byRow = table.length === entries.length && (asGrid(evaluation.read(within!))[0]!.length === 1 || table.length > 1);
  if (!byRow && table[0]!.length !== entries.length) return new Fault("#VALUE!", "The results must be as long as the list that is searched.");
  const target = evaluation.read(wanted!);
  const missing = (scalar: Scalar): Value => (otherwise === undefined || otherwise === null ? NOT_FOUND(scalar) : otherwise);
  if (!isGrid(target)) {
    if (target instanceof Fault) return target;
    const at = search(target, entries, mode, way < 0);
    if (at < 0) return missing(target);
    const line = byRow ? [table[at]!] : table.map((row) => [row[at]!]);
    return line.length === 1 && line[0]!.length === 1 ? line[0]![0]! : line;
  }
  return lift([target], (scalar = null) => {
    const at = search(scalar, entries, mode, way < 0);
    if (at < 0) return single(missing(scalar), evaluation);
    return byRow ? table[at]![0]! : table[0]![at]!;
  });
}

/** VLOOKUP and, with the table turned, HLOOKUP. */
function tableLookup(values: readonly Value[], evaluation: Evaluation, turned: boolean): Value {
  const grid = asGrid(evaluation.read(values[1]!));
  const table = turned ? grid[0]!.map((_, column) => grid.map((row) => row[column]!)) : grid;
  const place = numberFrom(values[2], evaluation, 1);
  if (place instanceof Fault) return place;
  const nearest = values[3] === undefined ? true : toLogical(single(values[3], evaluation));
  if (nearest instanceof Fault) return nearest;
  const column = Math.trunc(place) - 1;
  if (column < 0) return new Fault("#VALUE!", "Columns count from 1.");
  if (column >= table[0]!.length) return new Fault("#REF!", `The table has no ${turned ? "row" : "column"} ${column + 1}; its last is ${table[0]!.length}.`);
  const keys = table.map((row) => row[0]!);
  return overWanted(values[0]!, evaluation, (wanted) => {
    const at = nearest ? searchSorted(wanted, keys) : search(wanted, keys, 2, false);
    return at < 0 ? NOT_FOUND(wanted) : table[at]![column]!;
  });
}

function index(values: readonly Value[], evaluation: Evaluation): Value {
  const source = values[0]!;
  const first = numberFrom(values[1], evaluation, 0);
  if (first instanceof Fault) return first;
  const second = numberFrom(values[2], evaluation, 0);
  if (second instanceof Fault) return second;
  const area = source instanceof Reference ? source.area : null;
  const grid: Grid | null = area ? null : asGrid(evaluation.read(source));
  const height = area ? area.rows : grid!.length;
  const width = area ? area.columns : grid![0]!.length;
  // One number picks from a single row along it, else a row.
  const oneNumber = values[2] === undefined;
  const row = Math.trunc(oneNumber && height === 1 && width > 1 ? 0 : first);
  const column = Math.trunc(oneNumber ? (height === 1 && width > 1 ? first : 0) : second);
  if (row < 0 || column < 0) return new Fault("#VALUE!", "Rows and columns count from 1.");
  if (row > height || column > width) return new Fault("#REF!", `The table has ${height} rows and ${width} columns; row ${row}, column ${column} is outside.`);
  if (area) {
    return new Reference({
      sheet: area.sheet,
      row: area.row + (row === 0 ? 0 : row - 1),
      column: area.column + (column === 0 ? 0 : column - 1),
      rows: row === 0 ? area.rows : 1,
      columns: column === 0 ? area.columns : 1,
    });
  }
  const rows = row === 0 ? grid! : [grid![row - 1]!];
  const cut = column === 0 ? rows : rows.map((line) => [line[column - 1]!]);
  return cut.length === 1 && cut[0]!.length === 1 ? cut[0]![0]! : cut;
}

function offset(values: readonly Value[], evaluation: Evaluation): Value {
  const base = values[0]!;
  if (base instanceof Fault) return base;
  if (!(base instanceof Reference)) return new Fault("#VALUE!", "OFFSET starts from a cell.");
  const numbers: number[] = [];
  for (const [place, otherwise] of [0, 0, base.area.rows, base.area.columns].entries()) {
    const number = numberFrom(values[place + 1] ?? undefined, evaluation, otherwise);
    if (number instanceof Fault) return number;
    numbers.push(Math.trunc(number));
  }
  const [down, across, rows, columns] = numbers as [number, number, number, number];
  const row = base.area.row + down;
  const column = base.area.column + across;
  if (rows < 1 || columns < 1 || row < 0 || column < 0 || row + rows > ROW_LIMIT || column + columns > COLUMN_LIMIT) return new Fault("#REF!", "OFFSET leads off the sheet.");
  return new Reference({ sheet: base.area.sheet, row, column, rows, columns });
}

function indirect(values: readonly Value[], evaluation: Evaluation): Value {
  const text = single(values[0], evaluation);
  if (text instanceof Fault) return text;
  const { sheetName, address } = splitSheet(String(text ?? "").trim());
  const rect = parseArea(address.replace(/#$/, ""));
  const sheet = sheetName === null ? evaluation.sight.here.sheet : evaluation.sight.sheetId(sheetName);
  if (!rect || sheet === null) return new Fault("#REF!", `"${String(text ?? "")}" is no cell or range.`);
  if (!address.endsWith("#")) return new Reference({ sheet, ...rect });
  evaluation.sight.cell(sheet, rect.row, rect.column);
  const spill = evaluation.sight.spill(sheet, rect.row, rect.column);
  return spill ? new Reference(spill) : new Fault("#REF!", `There is no table at ${address}.`);
}

/** ROW, COLUMN: the numbers of a reference's lines, or of the formula's own. */
function lines(name: "ROW" | "COLUMN"): Definition {
  const down = name === "ROW";
  return define(name, "[reference]", down ? "The number of a row." : "The number of a column.", ([value], evaluation) => {
    if (value instanceof Fault) return value;
    if (value !== undefined && !(value instanceof Reference)) return new Fault("#VALUE!", `${name} needs a cell.`);
    const area = value === undefined ? evaluation.sight.here : value.area;
    const first = down ? area.row : area.column;
    const count = down ? area.rows : area.columns;
    if (count === 1) return first + 1;
    const numbers = Array.from({ length: count }, (_, at) => first + at + 1);
    return down ? numbers.map((number) => [number]) : [numbers];
  });
}

function size(name: "ROWS" | "COLUMNS"): Definition {
  const down = name === "ROWS";
  return define(name, "table", down ? "How many rows a table has." : "How many columns a table has.", ([value], evaluation) => {
    if (value instanceof Reference) return down ? value.area.rows : value.area.columns;
    const content = evaluation.read(value!);
    if (content instanceof Fault) return content;
    return down ? asGrid(content).length : asGrid(content)[0]!.length;
  });
}

export const lookup: readonly Definition[] = [
  define("INDEX", "table, row, [column]", "The entry at a row and column of a table; 0 for all.", index),
  define("MATCH", "value, list, [kind]", "The place of a value in a list: kind 0 exact, 1 in a rising list, -1 in a falling one.", (values, evaluation) => match(values, evaluation, false)),
  define("XMATCH", "value, list, [kind], [from end]", "The place of a value in a list: kind 0 exact, -1 or next smaller, 1 or next larger, 2 with * and ?.", (values, evaluation) => match(values, evaluation, true)),
  define("XLOOKUP", "value, list, results, [otherwise], [kind], [from end]", "The result beside a value in a list.", xlookup),
  define("VLOOKUP", "value, table, column, [nearest]", "Finds a value in the first column and gives the entry beside it.", (values, evaluation) => tableLookup(values, evaluation, false)),
  define("HLOOKUP", "value, table, row, [nearest]", "Finds a value in the first row and gives the entry below it.", (values, evaluation) => tableLookup(values, evaluation, true)),
  define("LOOKUP", "value, list, [results]", "Finds a value in a rising list and gives the result beside it.", (values, evaluation) => {
    const entries = lineOf(values[1]!, evaluation);
    if (entries instanceof Fault) return entries;
    const results = values[2] === undefined ? entries : lineOf(values[2], evaluation);
    if (results instanceof Fault) return results;
    return overWanted(values[0]!, evaluation, (wanted) => {
      const at = searchSorted(wanted, entries);
      return at < 0 ? NOT_FOUND(wanted) : (results[at] ?? new Fault("#REF!", "The results are shorter than the list."));
    });
  }),
  define("OFFSET", "reference, rows, columns, [height], [width]", "A range at a distance from another.", offset),
  define("INDIRECT", "text", "The range that a text names.", indirect),
  lines("ROW"),
  lines("COLUMN"),
  size("ROWS"),
  size("COLUMNS"),
  defineLifted("ADDRESS", "row, column, [kind], [unused], [sheet]", "nnnvt", "The address of a cell as text.", ([row, column, kind = 1, , sheet]: readonly [number, number, number?, unknown?, string?]) => {
    if (!(row >= 1 && column >= 1 && row <= ROW_LIMIT && column <= COLUMN_LIMIT)) return new Fault("#VALUE!", "That is off the sheet.");
    const prefix = sheet === undefined ? "" : `${quoteSheet(sheet)}!`;
    if (kind === 4) return prefix + cellText(row - 1, column - 1);
    return `${prefix}${kind === 3 || kind === 1 ? "$" : ""}${columnText(column - 1)}${kind === 2 || kind === 1 ? "$" : ""}${row}`;
  }),
];
