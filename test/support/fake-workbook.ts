import type { HostValue, RangeAddress, RangeFacts, RangeReading, SheetInfo, Workbook, WorkbookEvent, Write } from "../../src/pane/workbook";

/** What a test types into a cell: a formula is given with the value it is to show. */
export type Typed = HostValue | { readonly formula: string; readonly value: HostValue; readonly format?: string };

interface Cell {
  value: HostValue;
  formula: string;
  format: string;
}

type Grid = Map<string, Cell>;

const BLANK: Cell = { value: "", formula: "", format: "General" };

/** A workbook in memory for tests: no calculation, true undo steps, events on every change. */
export class FakeWorkbook implements Workbook {
  readonly host = "practice";
  readonly kept = new Map<string, unknown>();
  readonly history: { label: string; before: Map<string, Grid> }[] = [];
  readonly selected: RangeAddress[] = [];
  reads = 0;
  protectedSentence: string | null = null;
  facts: Partial<RangeFacts> = {};
  private grids = new Map<string, Grid>();
  private hiddenSheets = new Set<string>();
  private current: RangeAddress;
  private listeners: { event: WorkbookEvent; listener: () => void }[] = [];

  constructor(sheets: Record<string, readonly (readonly Typed[])[]>, hidden: readonly string[] = []) {
    for (const [name, rows] of Object.entries(sheets)) {
      const grid: Grid = new Map();
      rows.forEach((row, r) => row.forEach((typed, c) => typed !== "" && grid.set(`${r},${c}`, cellOf(typed))));
      this.grids.set(name, grid);
    }
    hidden.forEach((name) => this.hiddenSheets.add(name));
    this.current = { sheet: Object.keys(sheets)[0], row: 0, column: 0, rows: 1, columns: 1 };
  }

  async sheets(): Promise<readonly SheetInfo[]> {
    return [...this.grids].map(([name, grid]) => ({ name, hidden: this.hiddenSheets.has(name), used: usedRange(name, grid) }));
  }

  async selection(): Promise<RangeAddress> {
    return this.current;
  }

  async read(range: RangeAddress): Promise<RangeReading> {
    this.reads++;
    const at = (r: number, c: number): Cell => this.grid(range.sheet).get(`${r},${c}`) ?? BLANK;
    const map = <T>(pick: (cell: Cell) => T): T[][] =>
      Array.from({ length: range.rows }, (_, r) => Array.from({ length: range.columns }, (_, c) => pick(at(range.row + r, range.column + c))));
    const line = (count: number, cell: (k: number) => Cell): HostValue[] => Array.from({ length: count }, (_, k) => cell(k).value);
    return {
      address: range,
      values: map((cell) => cell.value),
      formulas: map((cell) => cell.formula),
      formats: map((cell) => cell.format),
      texts: map((cell) => String(cell.value)),
      facts: {
        hiddenRows: [],
        hiddenColumns: [],
        merged: [],
        neighbours: {
          above: line(range.columns, (k) => at(range.row - 1, range.column + k)),
          below: line(range.columns, (k) => at(range.row + range.rows, range.column + k)),
          left: line(range.rows, (k) => at(range.row + k, range.column - 1)),
          right: line(range.rows, (k) => at(range.row + k, range.column + range.columns)),
        },
        calculation: "automatic",
        ...this.facts,
      },
    };
  }

  async write(batch: readonly Write[], label: string): Promise<void> {
    if (this.protectedSentence) throw new Error(this.protectedSentence);
    this.remember(label);
    for (const write of batch)
      write.cells.forEach((row, r) =>
        row.forEach((entry, c) => {
          const key = `${write.row + r},${write.column + c}`;
          const grid = this.grid(write.sheet);
          const format = write.formats?.[r]?.[c] ?? grid.get(key)?.format ?? "General";
          if (entry === null) grid.delete(key);
          else if (entry !== undefined) grid.set(key, { ...cellOf(typedText(entry)), format });
          else if (grid.has(key)) grid.set(key, { ...grid.get(key)!, format });
        }),
      );
    this.emit("change");
  }

  async addSheet(name: string, cells: Write["cells"]): Promise<string> {
    let free = name;
    for (let k = 2; this.grids.has(free); k++) free = `${name} ${k}`;
    this.remember("add sheet");
    this.grids.set(free, new Map());
    cells.forEach((row, r) => row.forEach((entry, c) => entry !== null && entry !== undefined && this.grid(free).set(`${r},${c}`, cellOf(typedText(entry)))));
    this.emit("sheets");
    return free;
  }

  async select(range: RangeAddress): Promise<void> {
    this.current = range;
    this.selected.push(range);
    this.emit("selection");
  }

  async undo(): Promise<void> {
    const step = this.history.pop();
    if (!step) return;
    this.grids = step.before;
    this.emit("change");
  }

  on(event: WorkbookEvent, listener: () => void): () => void {
    const entry = { event, listener };
    this.listeners.push(entry);
    return () => {
      this.listeners = this.listeners.filter((other) => other !== entry);
    };
  }

  readonly store = {
    get: async (key: string): Promise<unknown> => structuredClone(this.kept.get(key)),
    set: async (key: string, value: unknown): Promise<void> => {
      this.kept.set(key, JSON.parse(JSON.stringify(value)));
    },
  };

  /** A person types into one cell. */
  type(sheet: string, row: number, column: number, typed: Typed): void {
    this.remember("type");
    if (typed === "") this.grid(sheet).delete(`${row},${column}`);
    else this.grid(sheet).set(`${row},${column}`, cellOf(typed));
    this.emit("change");
  }

  rename(sheet: string, name: string): void {
    this.grids = new Map([...this.grids].map(([old, grid]) => [old === sheet ? name : old, grid]));
    this.emit("sheets");
  }

  value(sheet: string, row: number, column: number): HostValue {
    return this.grid(sheet).get(`${row},${column}`)?.value ?? "";
  }

  formula(sheet: string, row: number, column: number): string {
    return this.grid(sheet).get(`${row},${column}`)?.formula ?? "";
  }

  get listenerCount(): number {
    return this.listeners.length;
  }

  private grid(sheet: string): Grid {
    const grid = this.grids.get(sheet);
    if (!grid) throw new Error(`There is no sheet named ${sheet}.`);
    return grid;
  }

  private remember(label: string): void {
    this.history.push({ label, before: new Map([...this.grids].map(([name, grid]) => [name, new Map(grid)])) });
  }

  private emit(event: WorkbookEvent): void {
    for (const entry of this.listeners) if (entry.event === event) entry.listener();
  }
}

function cellOf(typed: Typed): Cell {
  if (typeof typed === "object") return { value: typed.value, formula: typed.formula, format: typed.format ?? "General" };
  return { value: typed, formula: String(typed), format: "General" };
}

/** As when typed: "=" begins a formula (shown as 0, since nothing is calculated), one leading apostrophe says "text follows". */
function typedText(entry: HostValue): Typed {
  if (typeof entry !== "string") return entry;
  if (entry.startsWith("=")) return { formula: entry, value: 0 };
  return entry.startsWith("'") ? entry.slice(1) : entry;
}

function usedRange(sheet: string, grid: Grid): RangeAddress | null {
  if (grid.size === 0) return null;
  const places = [...grid.keys()].map((key) => key.split(",").map(Number));
  const rows = places.map(([row]) => row);
  const columns = places.map(([, column]) => column);
  const row = Math.min(...rows);
  const column = Math.min(...columns);
  return { sheet, row, column, rows: Math.max(...rows) - row + 1, columns: Math.max(...columns) - column + 1 };
}
