import { cellText, contains, sameRange, within } from "./address";
import { BookWatch } from "./book-watch";
import { unitAbove } from "./unit-above";
import { examine, type Item, type Question } from "./examine";
import { Memory, without, type TableMemory } from "./memory";
import { previewOf, sameContent, sameEntries, stillAsShown } from "./preview";
import { putBack, rangeOf } from "./remedy-write";
import { act, sharingOf, type SharingAct } from "./sharing";
import { signOffOf } from "./sign-off";
import { START, type PaneState, type View } from "./state";
import { chooseSubject, followSubject, type Subject } from "./subject";
import { VERSION } from "./version";
import type { RangeAddress, Workbook } from "./workbook";
import { checkSheet } from "./check-sheet";
import { plainUnit } from "../cells/sentences/arrows";

export interface SessionOptions {
  now?(): Date;
}

/** Waits after the last event, so that a drag or a fill is looked at once. */
const SELECTION_QUIET = 120;
const CHANGE_QUIET = 250;

/**
 * The pane without its DOM: listens to the workbook, holds the one state, offers what a person can do.
 *
 * Nothing is written to a cell but by `applyRemedy`, `undo` and `writeCheckSheet`, each behind a button.
 * Longer than most files, since every act and every event of the host turns the same state.
 */
export class Session {
  private current: PaneState = START;
  private readonly memory: Memory;
  private readonly watch: BookWatch;
  private readonly listeners = new Set<() => void>();
  private readonly off: (() => void)[] = [];
  private readonly timers = new Map<string, ReturnType<typeof setTimeout>>();
  /** The subject of the newest examination, which may still be on its way. */
  private aim: Subject | null = null;
  /** Counts examinations: an answer that arrives after a newer question is dropped. */
  private turn = 0;
  /** A selection that the pane made itself does not move the pane. */
  private ownSelection: RangeAddress | null = null;
  private initials = "";
  private disposed = false;

  constructor(
    private readonly workbook: Workbook,
    private readonly options: SessionOptions = {},
  ) {
    this.memory = new Memory(workbook.store);
    this.watch = new BookWatch(workbook, (book) => {
      const fresh = book.status === "ready" && book.scanned !== this.current.book.scanned;
      this.set({ book });
      if (fresh && this.aim) void this.saying(() => this.look(this.aim!));
    });
  }

  get state(): PaneState {
    return this.current;
  }

  /** Initials typed last, offered again in the next form. */
  get lastInitials(): string {
    return this.initials;
  }

  subscribe(listener: () => void): void {
    this.listeners.add(listener);
  }

  async start(): Promise<void> {
    this.off.push(
      this.workbook.on("selection", () => this.later("selection", SELECTION_QUIET, () => this.selectionMoved())),
      this.workbook.on("change", () => this.later("change", CHANGE_QUIET, () => this.cellsChanged())),
      this.workbook.on("sheets", () => this.later("sheets", CHANGE_QUIET, () => this.sheetsChanged())),
    );
    await this.attempt(async () => {
      await this.loadMemory();
      await this.selectionMoved();
    });
    this.set({ busy: false });
    this.watch.changed();
  }

  dispose(): void {
    this.disposed = true;
    this.off.forEach((stop) => stop());
    this.timers.forEach((timer) => clearTimeout(timer));
    this.watch.dispose();
    this.listeners.clear();
  }

  // What a person can do

  show(view: View): void {
    this.set({ view, opened: null });
    this.watch.wanted(view === "book");
    if (view === "book") void this.attempt(() => this.loadSharing());
  }

  hold(held: boolean): void {
    this.set({ held });
    if (!held) this.later("selection", 0, () => this.selectionMoved());
  }

  async refresh(): Promise<void> {
    this.set({ busy: true });
    await this.attempt(async () => {
      await this.loadMemory();
      await this.lookAgain();
    });
    this.set({ busy: false });
    this.watch.refresh();
    if (this.current.view === "book") await this.attempt(() => this.loadSharing());
  }

  /** Selects cells; the pane keeps looking at its table. */
  goTo(range: RangeAddress): Promise<void> {
    this.ownSelection = range;
    return this.attempt(() => this.workbook.select(range));
  }

  /** Selects a table and looks at it in Check. */
  async lookAt(range: RangeAddress): Promise<void> {
    await this.goTo(range);
    this.show("check");
    await this.attempt(() => this.look({ address: range, how: "around" }));
  }

  open(opened: PaneState["opened"]): void {
    this.set({ opened });
  }

  drawMore(list: string, count: number): void {
    this.set({ drawn: { ...this.current.drawn, [list]: count } });
  }

  /** Opens the form for the unit, with the unit that the labels above the table speak of, if they do. */
  async openUnit(): Promise<void> {
    const { subject, looked } = this.current;
    if (!subject || !looked) return;
    await this.attempt(async () => {
      const suggestion = looked.entry.unit ?? (await unitAbove(this.workbook, subject.address));
      this.set({ opened: { kind: "unit", suggestion } });
    });
  }

  setUnit(typed: string): Promise<void> {
    const unit = plainUnit(typed);
    return this.keep((entry) => (unit === "" ? without(entry, "unit") : { ...entry, unit }));
  }

  answer(question: Question, answer: string): Promise<void> {
    return this.keep((entry) => ({ ...entry, answers: { ...entry.answers, [question.code]: answer } }));
  }

  forgetAnswers(): Promise<void> {
    return this.keep((entry) => without(entry, "answers"));
  }

  accept(item: Item, reason: string, initials: string): Promise<void> {
    this.initials = initials.trim();
    const accepted = {
      key: item.acceptanceKey,
      code: item.finding.code,
      sentence: item.sentence,
      reason: reason.trim(),
      initials: this.initials,
      date: this.today(),
    };
    const others = (entry: TableMemory) => (entry.accepted ?? []).filter((other) => other.key !== accepted.key && other.key !== item.formerly?.key);
    return this.keep((entry) => ({ ...entry, accepted: [...others(entry), accepted] }));
  }

  takeBack(item: Item): Promise<void> {
    return this.keep((entry) => ({ ...entry, accepted: (entry.accepted ?? []).filter((other) => other.key !== item.acceptanceKey) }));
  }

  async signOff(checker: string): Promise<void> {
    const table = this.current.looked?.table.table;
    if (!table) return;
    this.initials = checker.trim();
    await this.keep((entry) => ({ ...entry, signOff: signOffOf(table, this.initials, this.today()) }));
  }

  withdrawSignOff(): Promise<void> {
    return this.keep((entry) => without(entry, "signOff"));
  }

  /** Shows what a remedy would do; a remedy that only changes the range looked at is done at once, since it writes nothing. */
  async openRemedy(item: Item): Promise<void> {
    const { looked, subject } = this.current;
    if (!item.remedy || !looked || !subject) return;
    const { remedy, done } = item.remedy;
    if (remedy.kind === "selection") {
      const address = within(subject.address, remedy.range);
      this.set({ opened: null, notice: { text: done, undo: { kind: "subject", subject } } });
      await this.goTo(address);
      await this.attempt(() => this.look({ address, how: "adjusted" }));
      return;
    }
    await this.attempt(async () => {
      const preview = await previewOf(this.workbook, remedy, looked.reading);
      this.set({ opened: { kind: "remedy", key: item.key, preview } });
    });
  }

  async applyRemedy(item: Item): Promise<void> {
    const { opened, looked, subject } = this.current;
    if (opened?.kind !== "remedy" || !opened.preview.write || !item.remedy || !looked || !subject) return;
    const { write, place, reading } = opened.preview;
    const { label, done } = item.remedy;
    await this.attempt(async () => {
      const before = await this.workbook.read(rangeOf(write));
      if (!stillAsShown(before, reading, place)) {
        this.set({ opened: null, trouble: "The cells have changed since the preview. Nothing was written; look again." });
        await this.look(subject);
        return;
      }
      await this.workbook.write([write], label);
      const after = await this.workbook.read(rangeOf(write));
      const undo = { kind: "cells", write: putBack(before, write), after, label: `Undo: ${label}` } as const;
      this.set({ opened: null, notice: { text: done, undo, ...(place ? { jump: { label: cellText(place), range: place } } : {}) } });
      await this.look(subject);
    });
  }

  /** Puts back what the last remedy replaced, unless somebody has changed those cells since. */
  async undo(): Promise<void> {
    const undo = this.current.notice?.undo;
    if (!undo) return;
    this.set({ notice: null });
    if (undo.kind === "subject") {
      await this.goTo(undo.subject.address);
      await this.attempt(() => this.look(undo.subject));
      return;
    }
    await this.attempt(async () => {
      const now = await this.workbook.read(rangeOf(undo.write));
      if (!sameEntries(now, undo.after)) throw new Error(`${cellText(rangeOf(undo.write))} has changed since. Nothing was put back.`);
      await this.workbook.write([undo.write], undo.label);
      this.set({ notice: { text: "Put back as it was." } });
      if (this.current.subject) await this.look(this.current.subject);
    });
  }

  async writeCheckSheet(): Promise<void> {
    const { looked } = this.current;
    if (!looked) return;
    this.set({ busy: true });
    await this.attempt(async () => {
      const sheet = await checkSheet(looked, {
        version: VERSION,
        date: this.today(),
        workbook: (await this.workbook.name?.()) ?? "",
        formulas: this.watch.readersOf(looked.reading.address),
      });
      const name = await this.workbook.addSheet(sheet.name, sheet.cells);
      await this.workbook.presentSheet?.(name, sheet.look);
      const range = { sheet: name, row: 0, column: 0, rows: 1, columns: 1 };
      this.set({ notice: { text: `Check sheet written: ${name}.`, jump: { label: "Go there", range } } });
    });
    this.set({ busy: false });
  }

  /** Recalculates, relinks, freezes or puts back, and says what came of it. */
  async share(name: SharingAct): Promise<void> {
    const { shared } = this.workbook;
    if (!shared) return;
    this.set({ busy: true });
    await this.attempt(async () => {
      const text = await act(shared, name, this.now());
      this.set({ notice: { text }, opened: null });
      await this.loadSharing();
    });
    this.set({ busy: false });
    this.watch.refresh();
  }

  dismiss(): void {
    this.set({ notice: null, trouble: null });
  }

  // What the workbook tells

  private async selectionMoved(): Promise<void> {
    if (this.current.held && this.aim) return;
    // A host rejects where no cells are selected, such as a chart: nothing to look at then.
    const selection = await this.workbook.selection().catch(() => null);
    if (!selection || sameRange(selection, this.ownSelection)) return;
    this.ownSelection = null;
    const subject = await chooseSubject(this.workbook, selection, this.aim);
    if (subject && subject === this.aim && this.isNoTable(subject) && !contains(subject.address, selection)) return this.lookAway();
    if (subject && !sameRange(subject.address, this.aim?.address ?? null)) await this.look(subject);
  }

  private async cellsChanged(): Promise<void> {
    this.watch.changed();
    await this.lookAgain();
  }

  private async lookAgain(): Promise<void> {
    const { aim } = this;
    if (!aim) return this.selectionMoved();
    const followed = await followSubject(this.workbook, aim);
    if (this.aim === aim) await this.look(followed);
  }

  /** Sheets were added, renamed or removed, or another workbook was opened. */
  private async sheetsChanged(): Promise<void> {
    await this.loadMemory();
    const names = (await this.workbook.sheets()).map((sheet) => sheet.name);
    if (this.aim && !names.includes(this.aim.address.sheet)) this.lookAway();
    await this.cellsChanged();
  }

  /** Cells that a person selected, such as a block just pasted, and that are no table: not worth keeping once left. */
  private isNoTable({ address, how }: Subject): boolean {
    const { subject, looked } = this.current;
    return how === "selection" && looked !== null && (looked.layout?.size ?? 0) === 0 && sameRange(address, subject?.address ?? null);
  }

  private lookAway(): void {
    this.turn++;
    this.aim = null;
    this.set({ subject: null, looked: null, opened: null, held: false, notice: null });
  }

  private async look(subject: Subject): Promise<void> {
    const turn = ++this.turn;
    this.aim = subject;
    const reading = await this.workbook.read(subject.address).catch((error: unknown) => {
      if (turn === this.turn) this.aim = this.current.subject;
      throw error;
    });
    if (turn !== this.turn) return;
    const moved = !sameRange(subject.address, this.current.subject?.address ?? null);
    const looked = examine(reading, (states) => this.memory.table(subject.address, states, this.watch.gone), this.watch.contextOf(subject.address));
    const { opened } = this.current;
    const outdated = opened?.kind === "remedy" && !sameContent(opened.preview.reading, reading);
    const stays = opened && !moved && !outdated && (!("key" in opened) || looked.open.some((item) => item.key === opened.key));
    this.set({ subject, looked, opened: stays ? opened : null, ...(moved ? { drawn: {} } : {}) });
  }

  // Bookkeeping

  private async keep(change: (entry: TableMemory) => TableMemory): Promise<void> {
    const { subject, looked } = this.current;
    if (!subject) return;
    await this.attempt(async () => {
      await this.memory.update(subject.address, change, looked?.layout?.names ?? null, this.watch.gone);
      this.set({ opened: null, memory: this.memory.state, setAside: this.memory.setAside });
      await this.look(subject);
    });
  }

  private async loadSharing(): Promise<void> {
    if (this.workbook.shared) this.set({ sharing: await sharingOf(this.workbook.shared) });
  }

  private async loadMemory(): Promise<void> {
    await this.memory.load();
    this.set({ memory: this.memory.state, setAside: this.memory.setAside });
  }

  /** Runs what a person asked for; the trouble of an earlier action is over with it. */
  private attempt(action: () => Promise<void>): Promise<void> {
    if (this.current.trouble) this.set({ trouble: null });
    return this.saying(action);
  }

  /** What goes wrong is said, never thrown at the page. */
  private async saying(action: () => Promise<void>): Promise<void> {
    try {
      await action();
    } catch (error) {
      this.set({ trouble: sentenceOf(error), busy: false });
    }
  }

  private later(name: string, wait: number, action: () => Promise<void>): void {
    clearTimeout(this.timers.get(name));
    this.timers.set(
      name,
      setTimeout(() => void this.saying(action), wait),
    );
  }

  private now(): Date {
    return this.options.now?.() ?? new Date();
  }

  private today(): string {
    const now = this.now();
    const two = (part: number): string => String(part).padStart(2, "0");
    return `${now.getFullYear()}-${two(now.getMonth() + 1)}-${two(now.getDate())}`;
  }

  private set(change: Partial<PaneState>): void {
    if (this.disposed) return;
    this.current = { ...this.current, ...change };
    this.listeners.forEach((listener) => listener());
  }
}

function sentenceOf(error: unknown): string {
  const text = error instanceof Error ? error.message : String(error);
  return text === "" ? "The workbook did not answer." : text;
}

