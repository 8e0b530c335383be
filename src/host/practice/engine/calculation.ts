/**
 * Keeps the values of all formulas right. After an edit only the formulas that follow it, directly or through others,
 * are marked and evaluated anew. Evaluation is by demand and without recursion from cell to cell: a formula that
 * meets a marked one gives way to it and comes back, so that chains of any length and references known only on
 * evaluation are handled alike. Formulas that can only wait for each other form a circle, and all of them say so
 * (the strongly connected components of "waits for": Tarjan, Depth-first search and linear graph algorithms, SIAM
 * J. Comput. 1, 1972), so that what is shown follows from the contents and not from the order of the edits.
 * Longer than most files, since marking, evaluating and spilling share one state.
 */
import { cellText, columnOf, COLUMN_LIMIT, keyOf, overlap, quoteSheet, rowOf, ROW_LIMIT, type Area, type Rect } from "./address";
import type { CustomFunctionHost, CustomOutcome } from "./custom-functions";
import { DependencyIndex } from "./dependency-index";
import { Evaluation, type CustomParameter, type Sight } from "./evaluate";
import { readFormula } from "./formula";
import { BUSY, FormulaCell } from "./formula-cell";
import type { Locale } from "./locale";
import { GRID_LIMIT } from "./operators";
import { ordinaryFunction } from "./functions/library";
import { eachCell, type Sheet } from "./sheet";
import { clipped, obstacle } from "./spill";
import { Fault, isGrid, type Grid, type Scalar, type Value } from "./value";

/** Thrown by a reader that meets formulas still to be evaluated. */
class GiveWay {
  constructor(readonly to: readonly FormulaCell[]) {}
}

/** Thrown where an answer is still on its way. */
const ON_ITS_WAY = Symbol("on its way");
/** Evaluations of one formula in one run; more can only come from results that push each other about. */
const ROUND_LIMIT = 100;

export interface Surroundings {
  readonly locale: Locale;
  readonly functions: CustomFunctionHost | null;
  readonly sheets: () => readonly Sheet[];
  readonly sheetById: (id: string) => Sheet | undefined;
  readonly sheetId: (name: string) => string | null;
  /** The formula that a name stands for on a sheet. */
  readonly named: (name: string, sheet: string) => string | null;
  readonly now: () => Date;
  readonly random: () => number;
  /** Called with the cells whose value changed, when an answer came late. */
  readonly settled: () => void;
}

export class Calculation {
  private readonly readers = new DependencyIndex<FormulaCell>();
  private readonly watchers = new DependencyIndex<FormulaCell>();
  private readonly marks = new Set<FormulaCell>();
  private readonly volatile = new Set<FormulaCell>();
  private readonly pending = new Set<FormulaCell>();
  private readonly counted: FormulaCell[] = [];
  /** Formulas that have been asked for and have no value yet, in the order in which they were first met. */
  private readonly open: FormulaCell[] = [];
  /** Cells whose value changed since the last `takeChanges`. */
  private changes = new Map<string, Set<number>>();

  constructor(private readonly around: Surroundings) {}

  get unfinished(): boolean {
    return this.marks.size > 0;
  }

  get waitingForAnswers(): boolean {
    return this.pending.size > 0;
  }

  takeChanges(): Map<string, Set<number>> {
    const taken = this.changes;
    this.changes = new Map();
    return taken;
  }

  /** Takes note that a cell's content changed: its formula, if any, is replaced, and what follows it is marked. */
  contentChanged(sheet: Sheet, row: number, column: number): void {
    const key = keyOf(row, column);
    const old = sheet.formulas.get(key);
    const text = sheet.contents.get(key)?.formula ?? null;
    if (old && old.formula.text !== text) this.drop(old);
    if (text !== null && !(old && old.formula.text === text)) this.install(sheet, row, column, text);
    this.note(sheet, key);
    const cell: Area = { sheet: sheet.id, row, column, rows: 1, columns: 1 };
    const formula = sheet.formulas.get(key);
    if (formula) this.mark(formula);
    this.markFollowers(cell);
    this.watchers.visit(cell, (watcher) => this.mark(watcher));
  }

  /** After merging or the like: formulas that spill over the area look again. */
  areaChanged(area: Area): void {
    this.watchers.visit(area, (watcher) => this.mark(watcher));
  }

  /** Starts from the contents alone: after opening, and when names of sheets or functions change their meaning. */
  restart(): void {
    this.readers.clear();
    this.watchers.clear();
    this.marks.clear();
    this.volatile.clear();
    for (const cell of this.pending) this.cancel(cell);
    for (const sheet of this.around.sheets()) {
      for (const key of [...sheet.spilled.keys()]) {
        sheet.clearSpilled(key);
        this.note(sheet, key);
      }
      sheet.formulas.clear();
      sheet.contents.forEach((content, key) => {
        if (content.formula === null) return;
        this.install(sheet, rowOf(key), columnOf(key), content.formula);
        this.note(sheet, key);
      });
    }
  }

  markVolatile(): void {
    this.volatile.forEach((cell) => this.mark(cell));
  }

  /** How many formulas follow the area, directly or through others. */
  followers(area: Area): number {
    const seen = new Set<FormulaCell>();
    const queue: Area[] = [area];
    for (let next = queue.pop(); next; next = queue.pop()) {
      this.readers.visit(next, (cell) => {
        if (seen.has(cell)) return;
        seen.add(cell);
        queue.push(cell.area);
      });
    }
    let inside = 0;
    for (const cell of seen) if (cell.sheet.id === area.sheet && overlap(area, { row: cell.row, column: cell.column, rows: 1, columns: 1 })) inside++;
    return seen.size - inside;
  }

  private install(sheet: Sheet, row: number, column: number, text: string): void {
    const cell = new FormulaCell(sheet, row, column, readFormula(text));
    sheet.formulas.set(keyOf(row, column), cell);
    for (const { sheetName, rect } of cell.formula.references) {
      const id = sheetName === null ? sheet.id : this.around.sheetId(sheetName);
      if (id !== null) this.follow(cell, { sheet: id, ...rect });
    }
    if (cell.formula.volatile) this.volatile.add(cell);
    cell.marked = true;
    this.marks.add(cell);
  }

  private follow(cell: FormulaCell, area: Area): void {
    cell.reads.push(area);
    this.readers.add(area, cell);
  }

  private drop(cell: FormulaCell): void {
    this.cancel(cell);
    if (cell.watched) this.markFollowers(cell.watched);
    this.reshape(cell, null);
    for (const area of cell.reads) this.readers.remove(area, cell);
    this.watch(cell, null);
    this.volatile.delete(cell);
    this.marks.delete(cell);
    cell.marked = false;
    cell.sheet.formulas.delete(keyOf(cell.row, cell.column));
  }

  private mark(cell: FormulaCell): void {
    if (cell.marked) return;
    cell.marked = true;
    this.marks.add(cell);
    this.cancel(cell);
    this.markFollowers(cell.watched ?? cell.area);
  }

  /** Whoever reads cells that a formula wants to fill follows it even while it does not fill them: once marked, it may. */
  private markFollowers(area: Area): void {
    const queue: Area[] = [area];
    for (let next = queue.pop(); next; next = queue.pop()) {
      this.readers.visit(next, (cell) => {
        if (cell.marked) return;
        cell.marked = true;
        this.marks.add(cell);
        this.cancel(cell);
        queue.push(cell.watched ?? cell.area);
      });
    }
  }

  /** Evaluates marked formulas until none is left or the time is up. */
  run(deadline: number): void {
    const stack: FormulaCell[] = [];
    for (const first of this.marks) {
      stack.push(first);
      while (stack.length > 0) {
        const cell = stack[stack.length - 1]!;
        // A cell asked for twice stands in the stack twice; the later place has done the work.
        if (!cell.marked || cell.parked) stack.pop();
        else this.step(cell, stack);
      }
      if (performance.now() > deadline) return;
    }
    for (const cell of this.counted) {
      cell.rounds = 0;
      cell.spilledNow = false;
    }
    this.counted.length = 0;
  }

  private step(cell: FormulaCell, stack: FormulaCell[]): void {
    if (cell.order === 0) cell.low = cell.order = this.open.push(cell);
    const place = cell.order - 1;
    const asked = this.attempt(cell);
    if (asked === null) {
      this.open.length = place;
      return;
    }
    let fresh = false;
    for (const other of asked) {
      if (other.order > 0) continue;
      fresh = true;
      stack.push(other);
    }
    if (fresh) return;
    for (const other of asked) cell.low = Math.min(cell.low, other.low);
    if (cell.low === cell.order) this.closeCircle(this.open.splice(place));
    else cell.parked = true;
  }

  /** Evaluates a formula; the marked formulas that it has to wait for, null when it is finished. */
  private attempt(cell: FormulaCell): readonly FormulaCell[] | null {
    // What a formula names it needs, unless it chooses among its arguments: asking for all at once keeps evaluations few.
    const asked = cell.asked ?? (cell.formula.strict ? this.markedIn(cell) : []);
    cell.asked = asked.filter((other) => other.marked);
    if (cell.asked.length > 0) return cell.asked;
    try {
      if (cell.rounds++ === 0) this.counted.push(cell);
      this.finish(cell, cell.rounds > ROUND_LIMIT ? circular([cell]) : this.evaluate(cell));
    } catch (signal) {
      if (signal instanceof GiveWay) return (cell.asked = signal.to);
      if (signal === ON_ITS_WAY) this.finish(cell, BUSY);
      else if (signal instanceof RangeError) this.finish(cell, new Fault("#NUM!", "The formula is nested too deeply, or its result is too large."));
      else this.finish(cell, new Fault("#VALUE!", "The formula could not be worked out."));
    }
    return null;
  }

  /**
   * Formulas that wait for each other and for nothing else. Where one still fills the cells of an earlier result the circle
   * may go with them: it is emptied and all are tried again. Otherwise all are circular, and those that spilled keep watch
   * over the cells that they would fill.
   */
  private closeCircle(members: readonly FormulaCell[]): void {
    const spills = (cell: FormulaCell) => cell.extent.rows * cell.extent.columns > 1;
    const earlier = members.filter((cell) => spills(cell) && !cell.spilledNow);
    if (earlier.length > 0) {
      for (const cell of earlier) this.reshape(cell, null);
      for (const cell of members) cell.forgetWait();
      return;
    }
    const fault = circular(wayRound(members));
    const wanted = members.map((cell) => (spills(cell) ? cell.area : null));
    // All are emptied while all are still marked, so that no change of shape marks a member again.
    for (const cell of members) this.reshape(cell, null);
    members.forEach((cell, at) => {
      this.finish(cell, fault);
      this.watch(cell, wanted[at]!);
    });
  }

  /** Marked formulas among the cells that a formula names. */
  private markedIn(cell: FormulaCell): FormulaCell[] {
    const found = new Set<FormulaCell>();
    for (const area of cell.reads) {
      const sheet = this.around.sheetById(area.sheet);
      if (sheet) this.collectMarked(sheet, area, found);
    }
    return [...found];
  }

  private collectMarked(sheet: Sheet, area: Rect, found: Set<FormulaCell>): void {
    if (area.rows * area.columns > this.marks.size) {
      for (const cell of this.marks) if (cell.sheet === sheet && overlap(cell.extent, area)) found.add(cell);
      return;
    }
    for (let column = area.column; column < area.column + area.columns; column++) {
      for (let row = area.row; row < area.row + area.rows; row++) {
        const key = keyOf(row, column);
        const cell = sheet.formulas.get(key) ?? sheet.spilled.get(key)?.owner;
        if (cell?.marked) found.add(cell);
      }
    }
  }

  private evaluate(cell: FormulaCell): Scalar | Grid {
    const { expression, problem } = cell.formula;
    if (!expression) return new Fault("#NAME?", problem ?? undefined);
    const evaluation = new Evaluation(this.sightFrom(cell));
    return evaluation.read(evaluation.value(expression));
  }

  private sightFrom(cell: FormulaCell): Sight {
    const { around } = this;
    let calls = 0;
    const sheetOf = (id: string): Sheet => {
      const sheet = around.sheetById(id);
      if (!sheet) throw new Error("no such sheet");
      return sheet;
    };
    const noteRead = (area: Area) => {
      const known = cell.reads.some((entry) => entry.sheet === area.sheet && overlap(entry, area)?.rows === area.rows && overlap(entry, area)?.columns === area.columns);
      if (!known) this.follow(cell, area);
    };
    return {
      here: { sheet: cell.sheet.id, row: cell.row, column: cell.column, rows: 1, columns: 1 },
      locale: around.locale,
      sheetId: around.sheetId,
      named: (name) => around.named(name, cell.sheet.id),
      ordinary: ordinaryFunction,
      now: around.now,
      random: around.random,
      cell: (id, row, column) => {
        const sheet = sheetOf(id);
        noteRead({ sheet: id, row, column, rows: 1, columns: 1 });
        const key = keyOf(row, column);
        const source = sheet.formulas.get(key) ?? sheet.spilled.get(key)?.owner;
        if (source?.marked) throw new GiveWay([source]);
        const value = sheet.valueAt(row, column);
        if (value === BUSY) throw ON_ITS_WAY;
        return value;
      },
      grid: (area) => {
        const sheet = sheetOf(area.sheet);
        noteRead(area);
        const marked = new Set<FormulaCell>();
        this.collectMarked(sheet, area, marked);
        if (marked.size > 0) throw new GiveWay([...marked]);
        return readGrid(sheet, area);
      },
      spill: (id, row, column) => {
        const source = sheetOf(id).formulas.get(keyOf(row, column));
        return source && source.extent.rows * source.extent.columns > 1 ? source.area : null;
      },
      custom: (name, parameters) => this.callCustom(cell, calls++, name, parameters),
    };
  }

  private callCustom(cell: FormulaCell, call: number, name: string, parameters: readonly CustomParameter[]): Value | null {
    const known = cell.late?.answers.get(call);
    if (known !== undefined) return known;
    if (cell.late && cell.late.cancels.size > 0) throw ON_ITS_WAY;
    const address = `${cell.sheet.properties.name}!${cellText(cell.row, cell.column)}`;
    const outcome: CustomOutcome | null = this.around.functions?.call(name, parameters, address) ?? null;
    if (outcome === null || outcome.kind === "answer") return outcome === null ? null : outcome.value;
    const late = (cell.late ??= { answers: new Map(), cancels: new Set() });
    late.cancels.add(outcome.cancel);
    this.pending.add(cell);
    void outcome.answer.then((value) => {
      late.cancels.delete(outcome.cancel);
      if (cell.late !== late) return;
      late.answers.set(call, value);
      this.pending.delete(cell);
      cell.late = null; // keeps `mark` from taking the answer for an abandoned one
      this.mark(cell);
      cell.late = late;
      this.around.settled();
    });
    throw ON_ITS_WAY;
  }

  private cancel(cell: FormulaCell): void {
    const { late } = cell;
    if (!late) return;
    cell.late = null;
    this.pending.delete(cell);
    late.cancels.forEach((cancel) => cancel());
  }

  private finish(cell: FormulaCell, result: Scalar | Grid): void {
    cell.marked = false;
    cell.forgetWait();
    this.marks.delete(cell);
    this.note(cell.sheet, keyOf(cell.row, cell.column));
    const grid = isGrid(result) && (result.length > 1 || result[0]!.length > 1) ? result : null;
    const single = isGrid(result) ? (result[0]?.[0] ?? null) : result;
    if (!grid) {
      cell.value = single ?? 0;
      this.reshape(cell, null);
      return;
    }
    const extent: Rect = { row: cell.row, column: cell.column, rows: grid.length, columns: grid[0]!.length };
    const readsItself = cell.formula.strict && cell.reads.some((area) => area.sheet === cell.sheet.id && overlap(area, extent));
    const refused = readsItself ? circular([cell]) : obstacle(cell, extent);
    if (refused) {
      cell.value = refused;
      this.reshape(cell, null);
      this.watch(cell, { sheet: cell.sheet.id, ...clipped(extent) });
      return;
    }
    cell.value = grid[0]![0] ?? 0;
    cell.spilledNow = true;
    this.reshape(cell, { extent, grid });
  }

  /** Moves the result to its new extent; whoever reads or waits for cells that a change of shape touched is marked. */
  private reshape(cell: FormulaCell, spill: { extent: Rect; grid: Grid } | null): void {
    const { sheet, extent: before } = cell;
    const after: Rect = spill?.extent ?? { row: cell.row, column: cell.column, rows: 1, columns: 1 };
    const sameShape = before.rows === after.rows && before.columns === after.columns;
    if (!sameShape) {
      eachCell(before, (row, column) => {
        const key = keyOf(row, column);
        if (sheet.spilled.get(key)?.owner !== cell) return;
        sheet.clearSpilled(key);
        this.note(sheet, key);
      });
    }
    if (spill) {
      spill.grid.forEach((line, down) =>
        line.forEach((value, across) => {
          if (down === 0 && across === 0) return;
          const key = keyOf(cell.row + down, cell.column + across);
          sheet.setSpilled(key, cell, value ?? 0);
          this.note(sheet, key);
        }),
      );
    }
    cell.extent = after;
    const spills = after.rows * after.columns > 1;
    this.watch(cell, spills ? { sheet: sheet.id, ...after } : null);
    if (sameShape) return;
    for (const rect of [before, after]) {
      if (rect.rows * rect.columns === 1) continue;
      const area = { sheet: sheet.id, ...rect };
      this.readers.visit(area, (reader) => {
        if (reader !== cell && reader.rounds <= ROUND_LIMIT) this.mark(reader);
      });
      this.watchers.visit(area, (watcher) => {
        if (watcher !== cell && watcher.rounds <= ROUND_LIMIT) this.mark(watcher);
      });
    }
  }

  private watch(cell: FormulaCell, area: Area | null): void {
    if (cell.watched) this.watchers.remove(cell.watched, cell);
    cell.watched = area;
    if (area) this.watchers.add(area, cell);
  }

  /** Takes note that a cell looks different, for those who draw it. */
  note(sheet: Sheet, key: number): void {
    const keys = this.changes.get(sheet.id);
    if (keys) keys.add(key);
    else this.changes.set(sheet.id, new Set([key]));
  }
}

/** The shortest way from the first member, by sheet, row and column, through others back to it. */
function wayRound(members: readonly FormulaCell[]): readonly FormulaCell[] {
  const first = members.reduce((best, cell) => (cell.sheet === best.sheet && (cell.row - best.row || cell.column - best.column) < 0 ? cell : best));
  const inside = new Set(members);
  const from = new Map<FormulaCell, FormulaCell>();
  const reached = [first];
  for (const cell of reached) {
    for (const next of cell.asked ?? []) {
      if (next === first) {
        const way = [cell];
        for (let at = from.get(cell); at; at = from.get(at)) way.push(at);
        return way.reverse();
      }
      if (!inside.has(next) || from.has(next)) continue;
      from.set(next, cell);
      reached.push(next);
    }
  }
  return [first];
}

function circular(way: readonly FormulaCell[]): Fault {
  const oneSheet = way.every((cell) => cell.sheet === way[0]!.sheet);
  const name = (cell: FormulaCell) => (oneSheet ? "" : `${quoteSheet(cell.sheet.properties.name)}!`) + cellText(cell.row, cell.column);
  const shown = way.length > 5 ? [...way.slice(0, 4).map(name), "…"] : way.map(name);
  return new Fault("#REF!", `The formula leads back to itself: ${[...shown, name(way[0]!)].join(" → ")}.`);
}

function readGrid(sheet: Sheet, area: Rect): Grid {
  const used = sheet.used();
  const bottom = area.rows === ROW_LIMIT ? Math.max(1, used ? used.row + used.rows - area.row : 1) : area.rows;
  const right = area.columns === COLUMN_LIMIT ? Math.max(1, used ? used.column + used.columns - area.column : 1) : area.columns;
  if (bottom * right > GRID_LIMIT) return [[new Fault("#NUM!", `The range has ${bottom * right} cells; ${GRID_LIMIT} is the limit.`)]];
  const grid: Scalar[][] = [];
  for (let row = 0; row < bottom; row++) {
    const line: Scalar[] = [];
    for (let column = 0; column < right; column++) {
      const value = sheet.valueAt(area.row + row, area.column + column);
      if (value === BUSY) throw ON_ITS_WAY;
      line.push(value);
    }
    grid.push(line);
  }
  return grid;
}
