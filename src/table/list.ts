import { Generator, type Arrow } from "../chain/generator";
import { Problem } from "../chain/problem";
import { cellAt, isDash, isEmpty, isFault, isText, isVoid, nameKey, numberInText } from "./cell";
import type { Cells, CellValue, Layout, Reading, TableArrow } from "./rate-table";
import { MOST_PROBLEMS, rateIn, rateProblem } from "./square";

/** How far a range looks like a list: every row reads from, to, rate ("list"), most do ("nearly"), or not. */
export function listLikeness(cells: Cells): "list" | "nearly" | "no" {
  if (!cells.some((row) => row.length >= 3)) return "no";
  let matching = 0;
  let other = 0;
  for (let i = firstRow(cells); i < cells.length; i++) {
    const row = cells[i];
    for (let k = 3; k < row.length; k++) if (!isVoid(row[k])) return "no";
    if (isBlankRow(cells, i)) continue;
    if (isText(row[0]) && isText(row[1]) && !isText(row[2] ?? "")) matching++;
    else other++;
  }
  if (matching === 0) return "no";
  if (other === 0) return "list";
  return matching > other ? "nearly" : "no";
}

/** Whether three columns look like a list whose states are numbers, which the form does not take: names are text. */
export function isNumberedList(cells: Cells): boolean {
  const first = firstRow(cells);
  let rows = 0;
  for (let i = first; i < cells.length; i++) {
    if (isBlankRow(cells, i)) continue;
    const [from, to, rate] = [0, 1, 2].map((column) => cellAt(cells, i, column));
    if (!isStateNumber(from) || !isStateNumber(to) || from === to || typeof rate !== "number") return false;
    if (cells[i].slice(3).some((cell) => !isVoid(cell))) return false;
    rows++;
  }
  return rows > 0 && (first === 1 || rows !== 3);
}

function isStateNumber(cell: CellValue): boolean {
  return typeof cell === "number" && Number.isInteger(cell) && cell >= 1;
}

/** 1 when the first row is headings: three texts, the last of which is no number in disguise. */
function firstRow(cells: Cells): number {
  const rate = cellAt(cells, 0, 2);
  return isText(cellAt(cells, 0, 0)) && isText(cellAt(cells, 0, 1)) && isText(rate) && numberInText(rate) === null ? 1 : 0;
}

function isBlankRow(cells: Cells, row: number): boolean {
  return isVoid(cellAt(cells, row, 0)) && isVoid(cellAt(cells, row, 1)) && isVoid(cellAt(cells, row, 2));
}

/** Reads the three-column form. States count in order of first appearance, down the list, from before to. */
export function readList(cells: Cells): Reading {
  const problems: Problem[] = [];
  const names: string[] = [];
  const states = new Map<string, number>();
  const arrows: TableArrow[] = [];
  const seen = new Map<string, number>();
  const first = firstRow(cells);
  let last = first;
  for (let i = first; i < cells.length && problems.length < MOST_PROBLEMS; i++) {
    if (isBlankRow(cells, i)) continue;
    last = i + 1;
    const ends: number[] = [];
    for (const column of [0, 1]) {
      const cell = cellAt(cells, i, column);
      const span = [i, column, 1, 1];
      if (isFault(cell)) problems.push(new Problem("cellFault", { listRow: i, column, fault: cell.fault, span }));
      else if (!isText(cell)) problems.push(new Problem("listNameMissing", { listRow: i, column, found: isVoid(cell) ? null : String(cell), span }));
      else ends.push(stateNumber(cell.trim(), names, states));
    }
    const where = { listRow: i, column: 2, span: [i, 2, 1, 1] };
    const cell = cellAt(cells, i, 2);
    const rate = cell === 0 || isEmpty(cell) || isDash(cell) ? 0 : rateIn(cell, where);
    const problem = rate instanceof Problem ? rate : rate === 0 ? null : rateProblem(rate, where);
    if (problem) problems.push(problem);
    if (ends.length < 2) continue;
    const [from, to] = ends;
    if (from === to) {
      problems.push(new Problem("arrowToItself", { listRow: i, from, fromName: names[from], span: [i, 0, 1, 3] }));
      continue;
    }
    const key = `${from} ${to}`;
    const earlier = seen.get(key);
    if (earlier !== undefined) {
      problems.push(new Problem("arrowRepeated", { listRow: i, firstRow: earlier, from, to, fromName: names[from], toName: names[to], span: [i, 0, 1, 3] }));
      continue;
    }
    seen.set(key, i);
    if (typeof rate === "number" && rate > 0 && !problem) arrows.push({ from, to, rate, place: { row: i, column: 2 } });
  }
  const layout: Layout = {
    form: "list",
    headings: first === 1 ? "top" : "none",
    body: { row: first, column: 0, rows: last - first, columns: 3 },
    size: names.length,
    names,
  };
  if (problems.length > 0) return { layout, problems, table: null };
  const generator = Generator.fromArrows(names.length, arrows.map(({ from, to, rate }): Arrow => [from, to, rate]));
  return { layout, problems, table: { ...layout, generator, arrows, givenDiagonal: [] } };
}

function stateNumber(name: string, names: string[], states: Map<string, number>): number {
  const key = nameKey(name);
  let state = states.get(key);
  if (state === undefined) {
    state = names.push(name) - 1;
    states.set(key, state);
  }
  return state;
}
