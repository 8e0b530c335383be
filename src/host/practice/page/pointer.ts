/** The mouse, the pen and the finger on the grid: selecting, pointing into a formula, filling, column widths. */
import { COLUMN_LIMIT, ROW_LIMIT, cellText, columnText, fill as fillBook } from "../engine";
import type { Editor } from "./editor";
import { GUTTER, HEADS, type Grid } from "./grid";
import type { Outlines } from "./outlines";
import { areaOf, extendTo, moveTo, over, type Area, type Cell } from "./selection";
import type { Session } from "./session";
import { fitColumns, setWidth, SMALLEST } from "./widths";

/** Distance from a heading's edge within which it can be dragged. */
const EDGE = 5;

type Drag =
  | { readonly kind: "select" }
  | { readonly kind: "point" }
  | { readonly kind: "rows"; readonly from: Cell }
  | { readonly kind: "columns"; readonly from: Cell }
  | { readonly kind: "fill"; readonly source: Area; target: Area }
  | { readonly kind: "width"; readonly column: number; readonly x: number; readonly width: number };

export function listenToPointer(session: Session, grid: Grid, outlines: Outlines, editor: Editor): void {
  const { element } = grid;
  let drag: Drag | null = null;
  let last: PointerEvent | null = null;
  let scrolling = 0;

  /** The column whose right edge is under the pointer, in the headings. */
  const edgeAt = (event: PointerEvent | MouseEvent): number | null => {
    const hit = grid.cellAt(event.clientX, event.clientY);
    if (!hit.onColumnHead || hit.onRowHead) return null;
    const x = event.clientX - element.getBoundingClientRect().left + element.scrollLeft;
    const { columns } = session;
    if (x > grid.left(hit.column) + columns.size(hit.column) - EDGE) return hit.column;
    if (x < grid.left(hit.column) + EDGE && hit.column > 0) return columns.step(hit.column, -1);
    return null;
  };

  const start = (event: PointerEvent): Drag | null => {
    if (event.target === outlines.handle) {
      const source = areaOf(session.selection);
      return { kind: "fill", source, target: source };
    }
    const hit = grid.cellAt(event.clientX, event.clientY);
    const merged = session.mergedAt(hit.row, hit.column);
    const cell = { row: merged?.row ?? hit.row, column: merged?.column ?? hit.column };
    const edge = edgeAt(event);
    if (edge !== null && session.readOnly === null) return { kind: "width", column: edge, x: event.clientX, width: session.columns.size(edge) };
    if (editor.pointing) {
      if (event.shiftKey) editor.extendPoint(cell);
      else if (hit.onRowHead) editor.point({ row: cell.row, column: 0 }, { row: cell.row, column: COLUMN_LIMIT - 1 });
      else if (hit.onColumnHead) editor.point({ row: 0, column: cell.column }, { row: ROW_LIMIT - 1, column: cell.column });
      else editor.point(cell, cell);
      return { kind: "point" };
    }
    if (!editor.commit()) return null;
    element.focus({ preventScroll: true });
    if (hit.onRowHead && hit.onColumnHead) {
      session.select({ ...over({ row: 0, column: 0, rows: ROW_LIMIT, columns: COLUMN_LIMIT }), active: session.active });
      return null;
    }
    const { anchor } = session.selection;
    if (hit.onRowHead) {
      const from = event.shiftKey ? anchor.row : cell.row;
      lines("row", from, cell.row);
      return { kind: "rows", from: { row: from, column: 0 } };
    }
    if (hit.onColumnHead) {
      const from = event.shiftKey ? anchor.column : cell.column;
      lines("column", from, cell.column);
      return { kind: "columns", from: { row: 0, column: from } };
    }
    session.select(event.shiftKey ? extendTo(session.selection, cell) : moveTo(cell));
    return { kind: "select" };
  };

  const lines = (axis: "row" | "column", from: number, to: number): void => {
    const anchor = axis === "row" ? { row: from, column: 0 } : { row: 0, column: from };
    const head = axis === "row" ? { row: to, column: COLUMN_LIMIT - 1 } : { row: ROW_LIMIT - 1, column: to };
    session.select({ active: anchor, anchor, head });
  };

  const move = (event: PointerEvent): void => {
    if (!drag) return;
    if (drag.kind === "width") {
      session.columns.setSizes(new Map([...session.book.widths(session.sheet), [drag.column, Math.max(SMALLEST, drag.width + event.clientX - drag.x)]]));
      grid.drawSoon(true);
      return;
    }
    const { row, column } = grid.cellAt(event.clientX, event.clientY);
    if (drag.kind === "select") session.select(extendTo(session.selection, { row, column }));
    else if (drag.kind === "point") editor.extendPoint({ row, column });
    else if (drag.kind === "rows") lines("row", drag.from.row, row);
    else if (drag.kind === "columns") lines("column", drag.from.column, column);
    else {
      drag.target = stretched(drag.source, { row, column });
      outlines.fill(drag.target);
    }
  };

  /** While a drag is outside, the sheet scrolls towards the pointer. */
  const scroll = (): void => {
    scrolling = 0;
    if (!drag || !last || drag.kind === "width") return;
    const frame = element.getBoundingClientRect();
    const pull = (low: number, at: number, high: number): number => (at < low ? at - low : at > high ? at - high : 0);
    const x = pull(frame.left + GUTTER, last.clientX, frame.left + element.clientWidth);
    const y = pull(frame.top + HEADS, last.clientY, frame.top + element.clientHeight);
    if (x === 0 && y === 0) return;
    element.scrollBy(Math.sign(x) * Math.min(60, Math.abs(x)), Math.sign(y) * Math.min(60, Math.abs(y)));
    move(last);
    scrolling = requestAnimationFrame(scroll);
  };

  element.addEventListener("pointerdown", (event) => {
    const onScrollbar = event.clientX > element.getBoundingClientRect().left + element.clientWidth || event.clientY > element.getBoundingClientRect().top + element.clientHeight;
    if (event.button !== 0 || onScrollbar || event.pointerType === "touch") return;
    event.preventDefault(); // the focus stays where the drag puts it
    drag = start(event);
    if (drag) element.setPointerCapture(event.pointerId);
  });
  element.addEventListener("pointermove", (event) => {
    if (!drag) {
      element.classList.toggle("at-edge", session.readOnly === null && edgeAt(event) !== null);
      return;
    }
    last = event;
    move(event);
    if (scrolling === 0) scrolling = requestAnimationFrame(scroll);
  });
  const end = (event: PointerEvent): void => {
    if (!drag) return;
    const ended = drag;
    drag = null;
    last = null;
    if (ended.kind === "width") setWidth(session, ended.column, 1, Math.round(ended.width + event.clientX - ended.x));
    else if (ended.kind === "fill") {
      outlines.fill(null);
      fill(ended.source, ended.target);
    }
  };
  element.addEventListener("pointerup", end);
  element.addEventListener("pointercancel", end);

  const fill = (source: Area, target: Area): void => {
    if (source.rows === target.rows && source.columns === target.columns) return;
    const sheet = session.sheet;
    const label = `filling ${cellText(target.row, target.column)}`;
    if (session.attempt(() => fillBook(session.book, { sheet, ...source }, { sheet, ...target }, label))) session.select(over(target));
  };

  // A finger scrolls; its tap selects.
  element.addEventListener("click", (event) => {
    if ((event as PointerEvent).pointerType !== "touch") return;
    const hit = grid.cellAt(event.clientX, event.clientY);
    const cell = { row: hit.row, column: hit.column };
    if (editor.pointing) editor.point(cell, cell);
    else if (editor.commit()) {
      element.focus({ preventScroll: true });
      if (hit.onRowHead) lines("row", cell.row, cell.row);
      else if (hit.onColumnHead) lines("column", cell.column, cell.column);
      else session.select(moveTo(cell));
    }
  });

  element.addEventListener("dblclick", (event) => {
    const edge = edgeAt(event);
    const hit = grid.cellAt(event.clientX, event.clientY);
    if (edge !== null) fitColumns(session, grid.measure, edge, 1, `width of column ${columnText(edge)}`);
    else if (!hit.onRowHead && !hit.onColumnHead && !editor.open) editor.begin({ arrows: "caret" });
  });
}

/** The source stretched along the axis on which the cell lies farther outside. */
export function stretched(source: Area, cell: Cell): Area {
  const down = cell.row - (source.row + source.rows - 1);
  const up = source.row - cell.row;
  const right = cell.column - (source.column + source.columns - 1);
  const left = source.column - cell.column;
  const vertical = Math.max(down, up, 0);
  const horizontal = Math.max(right, left, 0);
  if (vertical === 0 && horizontal === 0) return source;
  if (vertical >= horizontal) return down > 0 ? { ...source, rows: source.rows + down } : { ...source, row: cell.row, rows: source.rows + up };
  return right > 0 ? { ...source, columns: source.columns + right } : { ...source, column: cell.column, columns: source.columns + left };
}
