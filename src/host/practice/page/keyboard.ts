/** Keys on the grid while nothing is being typed. */
import { COLUMN_LIMIT, ROW_LIMIT } from "../engine";
import type { Commands } from "./commands";
import type { Editor } from "./editor";
import type { Grid } from "./grid";
import { areaOf, blockAround, extendTo, jumped, moveTo, over, sameArea, stepped, wander, type Cell, type Direction } from "./selection";
import type { Session } from "./session";
import { setWidth } from "./widths";

const directions: Readonly<Record<string, Direction>> = { ArrowUp: "up", ArrowDown: "down", ArrowLeft: "left", ArrowRight: "right" };
const WIDER = 8;

/** What the keys do, in words, for the page's own list of keys. */
export const KEYS: readonly (readonly [string, string])[] = [
  ["Arrows, Page Up, Page Down", "move; with Shift extend the selection"],
  ["Ctrl + arrow", "to the edge of the filled cells"],
  ["Home, End", "first and last filled cell of the row; with Ctrl of the sheet"],
  ["Tab, Enter", "next cell, round the selected cells; with Shift back"],
  ["F2 or a letter", "edit the cell, or replace what it holds"],
  ["Escape", "give up the edit; close what floats over the sheet"],
  ["Delete", "clear the selected cells"],
  ["Ctrl + D, Ctrl + R", "fill down, fill right"],
  ["Ctrl + C, X, V", "copy, cut, paste"],
  ["Ctrl + Z, Ctrl + Y", "undo, redo"],
  ["Ctrl + A", "select the table around the cell, then the sheet"],
  ["Ctrl + Space, Shift + Space", "select the column, the row"],
  ["Ctrl + B", "bold"],
  ["Ctrl + G or F5", "go to an address"],
  ["Ctrl + Page Up, Page Down", "the sheet before, the sheet after"],
  ["Alt + Shift + arrow left, right", "column narrower, wider"],
  ["F4 while typing", "fix a reference: B3, $B$3, B$3, $B3"],
  ["F6", "sheet, formula line, pane, top line in turn"],
];

export function listenToKeys(session: Session, grid: Grid, editor: Editor, commands: Commands): void {
  grid.element.addEventListener("keydown", (event) => {
    if (event.target !== grid.element || editor.open) return;
    if (act(event)) event.preventDefault();
  });

  // Undo and redo also from the words and lists around the sheet; fields have their own.
  document.addEventListener("keydown", (event) => {
    const { target } = event;
    if (event.defaultPrevented || target === grid.element || target instanceof HTMLInputElement || target instanceof HTMLTextAreaElement) return;
    if (!(event.ctrlKey || event.metaKey) || !["z", "y"].includes(event.key.toLowerCase())) return;
    if (act(event)) event.preventDefault();
  });

  const go = (cell: Cell, extend: boolean): true => {
    session.select(extend ? extendTo(session.selection, cell) : moveTo(cell));
    grid.reveal(cell);
    return true;
  };

  /** True when the key was ours. */
  const act = (event: KeyboardEvent): boolean => {
    const { key, shiftKey: shift } = event;
    const control = (event.ctrlKey || event.metaKey) && !event.getModifierState("AltGraph");
    const { selection } = session;
    const from = shift ? selection.head : selection.active;
    const direction = directions[key];
    if (direction && event.altKey && shift && (direction === "left" || direction === "right")) {
      const area = areaOf(selection);
      setWidth(session, area.column, area.columns, session.columns.size(selection.active.column) + (direction === "right" ? WIDER : -WIDER));
      return true;
    }
    if (direction) return go(control ? jumped(session, from, direction) : stepped(session, from, direction), shift);
    if (control) return withControl(key.toLowerCase(), shift);
    switch (key) {
      case "Tab":
      case "Enter": {
        const way = key === "Tab" ? (shift ? "left" : "right") : shift ? "up" : "down";
        const next = wander(session, selection, way);
        // At the edge of the sheet Tab goes on to the next part of the page.
        if (key === "Tab" && sameArea(areaOf(next), areaOf(selection)) && next.active.row === selection.active.row && next.active.column === selection.active.column) return false;
        session.select(next);
        grid.reveal(next.active);
        return true;
      }
      case "Home":
        return go({ row: from.row, column: session.columns.hidden(0) ? session.columns.step(0, 1) : 0 }, shift);
      case "End":
        return go({ row: from.row, column: lastFilled(from.row) }, shift);
      case "PageUp":
      case "PageDown": {
        const row = from.row + (key === "PageDown" ? 1 : -1) * grid.pageRows();
        return go({ row: Math.max(0, Math.min(ROW_LIMIT - 1, row)), column: from.column }, shift);
      }
      case "F2":
        editor.begin({ arrows: "caret" });
        return true;
      case "F5":
        commands.goTo();
        return true;
      case "Delete":
      case "Backspace":
        commands.clear();
        return true;
      case "Escape":
        commands.escape();
        return true;
      case " ":
        if (!shift) break;
        session.select({ ...over({ row: areaOf(selection).row, column: 0, rows: areaOf(selection).rows, columns: COLUMN_LIMIT }), active: selection.active });
        return true;
    }
    // A letter begins an edit; the field has the focus before the letter arrives in it. With Alt alone only what is no
    // plain letter is typed: keyboards write accents and signs that way, plain letters belong to the browser's menus.
    const typed = key.length === 1 || event.isComposing || key === "Process";
    const forMenus = event.altKey && !event.getModifierState("AltGraph") && /^\p{ASCII}$/u.test(key);
    if (typed && !event.metaKey && !forMenus) {
      editor.begin({ text: "", arrows: "point" });
      return false;
    }
    return false;
  };

  const withControl = (key: string, shift: boolean): boolean => {
    const { selection } = session;
    switch (key) {
      case "z":
        if (shift) commands.redo();
        else commands.undo();
        return true;
      case "y":
        commands.redo();
        return true;
      case "d":
        commands.fillDown();
        return true;
      case "r":
        commands.fillRight();
        return true;
      case "b":
        commands.bold();
        return true;
      case "g":
        commands.goTo();
        return true;
      case "a": {
        const block = blockAround(session, selection.active);
        const whole = sameArea(areaOf(selection), block) || block.rows * block.columns === 1;
        session.select({ ...over(whole ? { row: 0, column: 0, rows: ROW_LIMIT, columns: COLUMN_LIMIT } : block), active: selection.active });
        return true;
      }
      case " ": {
        const area = areaOf(selection);
        session.select({ ...over({ row: 0, column: area.column, rows: ROW_LIMIT, columns: area.columns }), active: selection.active });
        return true;
      }
      case "home":
        return go({ row: 0, column: 0 }, shift);
      case "end": {
        const used = session.used();
        return go({ row: used.rows - 1, column: used.columns - 1 }, shift);
      }
      case "pageup":
      case "pagedown":
        commands.nextSheet(key === "pagedown" ? 1 : -1);
        return true;
      default:
        return false;
    }
  };

  const lastFilled = (row: number): number => {
    for (let column = session.used().columns - 1; column > 0; column -= 1) if (session.filled(row, column)) return column;
    return 0;
  };
}
