import { cellsFrom } from "../audit/facts";
import type { Span } from "../audit/finding";
import { BUILDERS, callsIn } from "../audit/formula-calls";
import { findTables } from "../audit/tables-in-sheet";
import { read } from "../table/read";
import { contains, within } from "./address";
import { contentsOf, usedPart, type Contents } from "./contents";
import type { RangeAddress, SheetInfo, Workbook } from "./workbook";

/**
 * What the pane looks at. A selection of several cells is taken as it is; a single cell stands for the table around it;
 * a cell outside any table changes nothing, so that a person can work elsewhere and keep the table in view.
 */
export interface Subject {
  readonly address: RangeAddress;
  /** "around": found around a cell, follows the table as it grows; otherwise the extent is a person's choice. */
  readonly how: "selection" | "around" | "adjusted";
  /** Totals and notes right beside the table that were left out of it: "column Total". */
  readonly leftOut?: readonly string[];
}

/** Largest range that is read as one table: a square of about 550 states, or a long list. */
const LARGEST_SUBJECT = 300_000;
/** Half the window searched around a cell, enlarged while the table found touches its edge. */
const WINDOWS = [40, 160, 600];

export async function chooseSubject(workbook: Workbook, selection: RangeAddress, current: Subject | null): Promise<Subject | null> {
  const single = selection.rows === 1 && selection.columns === 1;
  if (current && contains(current.address, selection) && (single || isPart(selection, current))) return current;
  const sheets = await workbook.sheets();
  if (!single) {
    const chosen = await fromSelection(workbook, sheets, selection);
    if (chosen) return chosen;
    if (current && contains(current.address, selection)) return current;
  }
  return (await tableAround(workbook, sheets, selection)) ?? current;
}

/** The table that now stands around the corner of one found before, after rows or columns were typed beside it. */
export async function followSubject(workbook: Workbook, subject: Subject): Promise<Subject> {
  if (subject.how !== "around") return subject;
  const { sheet, row, column } = subject.address;
  const inside = { sheet, row: row + 1, column: column + 1, rows: 1, columns: 1 };
  return (await tableAround(workbook, await workbook.sheets(), inside)) ?? subject;
}

async function fromSelection(workbook: Workbook, sheets: readonly SheetInfo[], selection: RangeAddress): Promise<Subject | null> {
  const part = usedPart(sheets, selection);
  if (!part || part.rows < 2 || part.columns < 2) return null;
  if (part.rows * part.columns > LARGEST_SUBJECT)
    throw new Error(`The selection holds ${part.rows} rows by ${part.columns} columns; a rate table has at most 500 states. Select the table alone.`);
  const contents = await contentsOf(workbook, part);
  if (!contents.values.some((row) => row.some((value) => typeof value === "number")) || isAnswer(contents)) return null;
  return { address: trimmed(contents), how: "selection" };
}

/** Some cells well inside a table that was found, such as two rates to be formatted: no table that anyone means. */
function isPart(selection: RangeAddress, { address, how }: Subject): boolean {
  return how === "around" && (selection.row > address.row + 1 || selection.column > address.column + 1);
}

/** Mostly filled by a formula that answers, or that stands elsewhere: no table to be checked. Formulas that build tables, or bring them from another place, do make one. */
function isAnswer({ values, formulas }: Contents): boolean {
  const numbers = values.flatMap((row, r) => row.flatMap((value, c) => (typeof value === "number" ? [formulas[r][c]] : [])));
  if (2 * numbers.filter((formula) => formula === "").length <= numbers.length) return false;
  const anchors = formulas.flat().filter((formula) => formula.startsWith("="));
  return !anchors.some((formula) => {
    const [outer] = callsIn(formula);
    return outer === undefined || BUILDERS.has(outer.name);
  });
}

function part({ address, values, formulas }: Contents, span: Span): Contents {
  const cut = <T>(lines: readonly (readonly T[])[]): T[][] => lines.slice(span.row, span.row + span.rows).map((line) => line.slice(span.column, span.column + span.columns));
  return { address: within(address, span), values: cut(values), formulas: cut(formulas) };
}

/** A selection without its blank margins, unless only the margins make it read as a table (a last state without exits, unnamed). */
function trimmed(contents: Contents): RangeAddress {
  const { values, address } = contents;
  const filledRows = values.flatMap((row, r) => (row.some((value) => value !== "") ? [r] : []));
  const filledColumns = values[0].flatMap((_, c) => (values.some((row) => row[c] !== "") ? [c] : []));
  const [row, column] = [filledRows[0], filledColumns[0]];
  const rows = filledRows[filledRows.length - 1] - row + 1;
  const columns = filledColumns[filledColumns.length - 1] - column + 1;
  const tight = within(address, { row, column, rows, columns });
  if (rows === values.length && columns === values[0].length) return address;
  const cells = cellsFrom(values);
  const inner = cells.slice(row, row + rows).map((line) => line.slice(column, column + columns));
  return !read(inner).layout && read(cells).layout ? address : tight;
}

async function tableAround(workbook: Workbook, sheets: readonly SheetInfo[], cell: RangeAddress): Promise<Subject | null> {
  for (const half of WINDOWS) {
    const row = Math.max(0, cell.row - half);
    const column = Math.max(0, cell.column - half);
    const asked = { sheet: cell.sheet, row, column, rows: cell.row + half + 1 - row, columns: cell.column + half + 1 - column };
    const window = usedPart(sheets, asked);
    if (!window) return null;
    const contents = await contentsOf(workbook, window);
    const table = findTables(cellsFrom(contents.values)).find(({ span }) => contains(within(window, span), { ...cell, rows: 1, columns: 1 }));
    if (!table) return null;
    const found = within(window, table.span);
    if (isAnswer(part(contents, table.span))) return null;
    const whole = usedPart(sheets, { ...window, row: 0, column: 0, rows: Infinity, columns: Infinity });
    const cut =
      (found.row === window.row && window.row > (whole?.row ?? 0)) ||
      (found.column === window.column && window.column > (whole?.column ?? 0)) ||
      (found.row + found.rows === window.row + window.rows && asked.row + asked.rows === window.row + window.rows) ||
      (found.column + found.columns === window.column + window.columns && asked.column + asked.columns === window.column + window.columns);
    if (!cut) return { address: found, how: "around", leftOut: table.leftOut.map(({ line, label }) => `${line} ${label}`.trim()) };
  }
  return null;
}
