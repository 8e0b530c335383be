import type { Axis } from "./axis";

/** A cell of the sheet, from 0. */
export interface Cell {
  readonly row: number;
  readonly column: number;
}

export interface Area extends Cell {
  readonly rows: number;
  readonly columns: number;
}

/**
 * One rectangle between two corners: `anchor` stays, `head` moves. The active cell, where typing goes, lies inside it;
 * it starts at the anchor and wanders with Tab and Enter.
 */
export interface Selection {
  readonly active: Cell;
  readonly anchor: Cell;
  readonly head: Cell;
}

/** What movement needs to know of the sheet. */
export interface Ground {
  readonly rows: Axis;
  readonly columns: Axis;
  filled(row: number, column: number): boolean;
  /** The merged area that a cell lies in, or null. */
  mergedAt(row: number, column: number): Area | null;
  /** Smallest area from the top left cell on that holds everything filled; 1 × 1 when the sheet is empty. */
  used(): { readonly rows: number; readonly columns: number };
}

export type Direction = "up" | "down" | "left" | "right";

const along: Record<Direction, { by: 1 | -1; axis: "row" | "column" }> = {
  up: { by: -1, axis: "row" },
  down: { by: 1, axis: "row" },
  left: { by: -1, axis: "column" },
  right: { by: 1, axis: "column" },
};

export function at(row: number, column: number): Selection {
  const cell = { row, column };
  return { active: cell, anchor: cell, head: cell };
}

export function over(area: Area): Selection {
  const anchor = { row: area.row, column: area.column };
  return { active: anchor, anchor, head: { row: area.row + area.rows - 1, column: area.column + area.columns - 1 } };
}

export function areaBetween(a: Cell, b: Cell): Area {
  const row = Math.min(a.row, b.row);
  const column = Math.min(a.column, b.column);
  return { row, column, rows: Math.abs(a.row - b.row) + 1, columns: Math.abs(a.column - b.column) + 1 };
}

export function areaOf(selection: Selection): Area {
  return areaBetween(selection.anchor, selection.head);
}

export function inside(area: Area, cell: Cell): boolean {
  return cell.row >= area.row && cell.row < area.row + area.rows && cell.column >= area.column && cell.column < area.column + area.columns;
}

export function sameArea(a: Area, b: Area): boolean {
  return a.row === b.row && a.column === b.column && a.rows === b.rows && a.columns === b.columns;
}

/** One shown line on; a merged area is one step. */
export function stepped(ground: Ground, from: Cell, direction: Direction): Cell {
  const { by, axis } = along[direction];
  const merged = ground.mergedAt(from.row, from.column);
  const edge = (start: number, count: number): number => (by === 1 ? start + count - 1 : start);
  const row = merged ? edge(merged.row, merged.rows) : from.row;
  const column = merged ? edge(merged.column, merged.columns) : from.column;
  const next = axis === "row" ? { ...from, row: ground.rows.step(row, by) } : { ...from, column: ground.columns.step(column, by) };
  const met = ground.mergedAt(next.row, next.column);
  return met ? { row: met.row, column: met.column } : next;
}

/**
 * To the edge of the block of filled cells, or across blank cells to the next filled one; to the edge of the sheet when
 * nothing is left to meet.
 */
export function jumped(ground: Ground, from: Cell, direction: Direction): Cell {
  const { by, axis } = along[direction];
  const used = ground.used();
  const last = axis === "row" ? used.rows - 1 : used.columns - 1;
  const filled = (cell: Cell): boolean => ground.filled(cell.row, cell.column);
  let here = from;
  let next = stepped(ground, here, direction);
  const inBlock = filled(here) && filled(next);
  while (next !== here && next[axis] !== here[axis]) {
    if (inBlock && !filled(next)) return here;
    if (!inBlock && filled(next)) return next;
    if (by === 1 && next[axis] > last) break; // nothing filled beyond: straight to the edge
    here = next;
    next = stepped(ground, here, direction);
  }
  if (inBlock && by === 1 && here[axis] >= last) return here;
  const edge = by === -1 ? 0 : (axis === "row" ? ground.rows : ground.columns).count - 1;
  return axis === "row" ? { ...from, row: edge } : { ...from, column: edge };
}

export function moveTo(cell: Cell): Selection {
  return { active: cell, anchor: cell, head: cell };
}

export function extendTo(selection: Selection, head: Cell): Selection {
  return { active: selection.anchor, anchor: selection.anchor, head };
}

/** Tab and Enter: through the selected cells, round and round, when there are several; else one cell on. */
export function wander(ground: Ground, selection: Selection, direction: Direction): Selection {
  const area = areaOf(selection);
  if (area.rows * area.columns === 1) return moveTo(stepped(ground, selection.active, direction));
  const { by, axis } = along[direction];
  let { row, column } = selection.active;
  const turn = (value: number, start: number, count: number): { value: number; turned: boolean } => {
    const next = value + by;
    if (next >= start + count) return { value: start, turned: true };
    if (next < start) return { value: start + count - 1, turned: true };
    return { value: next, turned: false };
  };
  // At most once round the area, so that an area of hidden lines ends too.
  for (let tries = area.rows * area.columns; tries > 0; tries -= 1) {
    if (axis === "column") {
      const next = turn(column, area.column, area.columns);
      column = next.value;
      if (next.turned) row = turn(row, area.row, area.rows).value;
    } else {
      const next = turn(row, area.row, area.rows);
      row = next.value;
      if (next.turned) column = turn(column, area.column, area.columns).value;
    }
    if (!ground.rows.hidden(row) && !ground.columns.hidden(column)) break;
  }
  return { ...selection, active: { row, column } };
}

/**
 * The block of filled cells around a cell, bounded by blank lines and the edges of the sheet.
 *
 * It grows in each direction as far as it goes before it looks in the next one: a side is then read once, not once for
 * each line of the other side. The order does not change what is found, since a larger block only meets more.
 */
export function blockAround(ground: Ground, cell: Cell): Area {
  const used = ground.used();
  let top = cell.row;
  let bottom = cell.row;
  let left = cell.column;
  let right = cell.column;
  const rowFilled = (row: number): boolean => {
    if (row < 0 || row >= used.rows) return false;
    for (let column = Math.max(0, left - 1); column <= right + 1; column += 1) if (ground.filled(row, column)) return true;
    return false;
  };
  const columnFilled = (column: number): boolean => {
    if (column < 0 || column >= used.columns) return false;
    for (let row = Math.max(0, top - 1); row <= bottom + 1; row += 1) if (ground.filled(row, column)) return true;
    return false;
  };
  for (let grown = true; grown; ) {
    grown = false;
    for (; rowFilled(top - 1); grown = true) top -= 1;
    for (; rowFilled(bottom + 1); grown = true) bottom += 1;
    for (; columnFilled(left - 1); grown = true) left -= 1;
    for (; columnFilled(right + 1); grown = true) right += 1;
  }
  return { row: top, column: left, rows: bottom - top + 1, columns: right - left + 1 };
}
