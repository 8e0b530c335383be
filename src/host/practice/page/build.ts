/** Puts the parts of the page together and lets them know of each other. */
import { DEFAULT_WIDTH, functionList, type Book, type BookFile, type CustomFunctionHost } from "../engine";
import { PracticeWorkbook } from "../workbook";
import { Announcer } from "./announce";
import { Banner } from "./banner";
import { listenToClipboard } from "./clipboard";
import { Commands } from "./commands";
import { el, set, word } from "./dom";
import { Drafts } from "./drafts";
import { Editor } from "./editor";
import { Files } from "./files";
import { FootLine } from "./foot-line";
import { FormulaLine } from "./formula-line";
import { Grid } from "./grid";
import { Help } from "./help";
import { Keeper, type Keeping } from "./keeper";
import { listenToKeys } from "./keyboard";
import { Outlines } from "./outlines";
import { listenToPointer } from "./pointer";
import { Sentence } from "./sentence";
import { Session } from "./session";
import { SheetsLine } from "./sheets-line";
import type { Storage } from "./storage";
import { TopLine } from "./top-line";

/** A record that could not be read, and why. */
export interface Unreadable {
  readonly reason: string;
  readonly record: unknown;
}

export interface PageParts {
  readonly book: Book;
  readonly host: CustomFunctionHost;
  readonly storage: Storage | null;
  readonly demo: () => BookFile;
  readonly unreadable: Unreadable | null;
}

const keeping: Readonly<Record<Keeping, string>> = {
  kept: "Kept on this computer",
  keeping: "Keeping …",
  failed: "Not kept: the browser refused to store. Save a copy as a file.",
  nowhere: "Not kept: this browser offers no storage. Save a copy as a file.",
};

export function buildPage({ book, host, storage, demo, unreadable }: PageParts): void {
  const session = new Session(book, DEFAULT_WIDTH);
  const announcer = new Announcer();
  session.say = (sentence) => announcer.say(sentence);
  const drafts = new Drafts(localStorageOrNull());
  const grid = new Grid(session);
  const outlines = new Outlines(session, grid);
  const help = new Help(book, functionList(host), (text) => announcer.speak(text));
  const editor = new Editor(session, grid, outlines, help, drafts);
  const commands = new Commands(session, grid, outlines, editor);
  const sentence = new Sentence(session, grid, editor, announcer);
  const keeper = new Keeper(book, storage, drafts);
  const banner = new Banner();
  const focusGrid = (): void => grid.element.focus({ preventScroll: true });
  commands.closeFloating = () => sentence.close();

  const startOver = (): void => {
    editor.cancel();
    book.replaceWith(demo());
    session.reopened();
    session.say("The example is back.");
    focusGrid();
  };

  const paneWord = word("Pane", () => showPane(true), { class: "word pane-word", "aria-expanded": "false", "aria-controls": "pane" });
  const paneClose = word("Close", () => showPane(false), { class: "word pane-close" });
  const paneBody = el("div", { class: "pane-body" });
  const pane = el("aside", { class: "pane-area", id: "pane", "aria-label": "Looking into the table" }, paneClose, paneBody);
  const showPane = (shown: boolean): void => {
    page.classList.toggle("with-pane", shown);
    set(paneWord, "aria-expanded", String(shown));
    (shown ? paneClose : paneWord).focus();
  };
  pane.addEventListener("keydown", (event) => {
    if (event.key === "Escape" && page.classList.contains("with-pane")) showPane(false);
  });

  const sheets = new SheetsLine(session, editor, commands, focusGrid);
  const files = new Files(session, banner, focusGrid);
  const top = new TopLine(session, commands, sheets.element, [...files.words, paneWord]);
  const line = new FormulaLine(session, editor, commands, focusGrid);
  const foot = new FootLine(session, announcer, startOver);
  const keysHint = el("p", { class: "unseen", id: "grid-keys" }, "Tab and arrows move between cells. F2 edits, Escape gives up. F6 leaves the sheet.");
  set(grid.element, "aria-describedby", "grid-keys");
  const sheetArea = el("main", { class: "sheet-area", "aria-label": "Sheet" }, grid.element, editor.floor, sentence.element);
  const page = el("div", { class: "page" }, banner.element, top.element, line.element, sheetArea, pane, foot.element, help.element, keysHint, announcer.unseen);
  document.body.append(page);

  listenToKeys(session, grid, editor, commands);
  listenToPointer(session, grid, outlines, editor);
  listenToClipboard(session, grid, outlines, editor);
  listenToParts([top.element, line.element, sheetArea, pane, foot.element], focusGrid, sheetArea);

  const nameGrid = (): void => set(grid.element, "aria-label", `Sheet ${session.sheetName()}`);
  session.on("sheet", nameGrid);
  book.on("sheets", nameGrid);
  nameGrid();

  // Keeping
  const showKeeping = (): void => foot.keeping(keeping[keeper.state], keeper.state === "failed" || keeper.state === "nowhere");
  keeper.onState = showKeeping;
  keeper.beforeHandOver = () => void editor.commit();
  keeper.onNewer = (file) => {
    editor.cancel();
    book.replaceWith(file);
    session.reopened(true);
  };
  keeper.onRole = (role, lost) => {
    session.close(role === "writer" ? null : "Another tab is editing this workbook. Take over to edit here.");
    if (role === "writer") banner.hide();
    else banner.show(lost ? "Another tab has taken over. This one shows the workbook and follows it." : "Another tab is editing this workbook. This one shows it and follows.", [word("Take over", () => void keeper.takeOver())]);
  };
  showKeeping();
  grid.measure.use(grid.element);
  grid.draw();
  focusGrid();
  void keeper.start().then((role) => {
    if (unreadable) banner.show(`What was kept cannot be read: ${unreadable.reason} It was put aside, and the example is shown.`, [word("Save what was kept as a file", () => saveJson(unreadable.record)), word("Go on", () => banner.hide())]);
    const draft = role === "writer" ? drafts.read() : null;
    const sheet = draft && (book.sheets().find((entry) => entry.id === draft.sheet && !entry.hidden) ?? book.sheetNamed(draft.sheetName));
    if (!draft || !sheet || sheet.hidden) return;
    if (book.view(sheet.id, draft.row, draft.column).input === draft.text) return drafts.drop();
    editor.resume(sheet.id, draft.row, draft.column, draft.text);
    session.say("What was being typed when the page closed is back in its cell.");
  });

  // The pane comes after the first drawing: the sheet does not wait for it.
  const workbook = new PracticeWorkbook(book, {
    get selection() {
      return session.area;
    },
    get readOnly() {
      return session.readOnly;
    },
    settle: () => session.settle(),
    select: (area) => {
      commands.select(area);
      // Where the pane lies over the whole sheet, it makes way for what it leads to.
      if (page.classList.contains("with-pane") && window.innerWidth < 560) {
        showPane(false);
        focusGrid();
      }
    },
    onSelection: (listener) => session.on("selection", listener),
  });
  void import("../../../pane/mount").then(({ mountPane }) => mountPane(paneBody, workbook));
}

/** F6 goes round the parts of the page, Shift and F6 back. */
function listenToParts(parts: readonly HTMLElement[], focusGrid: () => void, sheetArea: HTMLElement): void {
  document.addEventListener("keydown", (event) => {
    if (event.key !== "F6") return;
    event.preventDefault();
    const first = (part: HTMLElement): HTMLElement | undefined =>
      [...part.querySelectorAll<HTMLElement>("[tabindex='0'], button:not([tabindex='-1']), input, textarea, a[href]")].find((element) => element.getClientRects().length > 0);
    const shown = parts.filter((part) => part.getClientRects().length > 0 && first(part));
    const here = shown.findIndex((part) => part.contains(document.activeElement));
    const next = shown[(here + (event.shiftKey ? -1 : 1) + shown.length) % shown.length]!;
    if (next === sheetArea) focusGrid();
    else first(next)?.focus();
  });
}

function saveJson(record: unknown): void {
  const address = URL.createObjectURL(new Blob([JSON.stringify(record)], { type: "application/json" }));
  const link = el("a", { href: address, download: "stayrate-kept.json" });
  link.click();
  URL.revokeObjectURL(address);
}

/** Storage may be forbidden altogether. */
function localStorageOrNull(): globalThis.Storage | null {
  try {
    return window.localStorage;
  } catch {
    return null;
  }
}
