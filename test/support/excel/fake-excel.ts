import { type Area, type Book, type CellView, type Edit } from "../../../src/host/practice/engine";
import { hostObject, type Shape } from "./proxy";
import { HostError, RequestQueue } from "./queue";

/** What a test can arrange beyond cells: things the workbook of the engine does not know. */
export interface FakeState {
  readonly protectedSheets: Set<string>;
  /** "sheet id row column" of cells that are unlocked on a protected sheet. */
  readonly unlocked: Set<string>;
  structureProtected: boolean;
  calculationMode: "Automatic" | "AutomaticExceptTables" | "Manual";
  fullCalculations: number;
  selection: readonly Area[] | "chart";
  activeSheet: string;
  readonly settings: Map<string, unknown>;
  /** "sheet id row column" of formulas whose functions are not registered, as the host holds them; gone when rewritten. */
  readonly lost: Map<string, string>;
  /** Column widths, bold rows, page layout: what was set, by "sheet what". */
  readonly looks: Map<string, unknown>;
  readonly shapes: Record<string, unknown>[];
  readonly charts: Record<string, unknown>[];
  /** Requirement set of the object model that the host claims. */
  version: number;
  /** The code that the next synchronisation fails with. */
  failNext: string | null;
  readonly synchronisations: { count: number };
  /** Cells of the largest range that was used. */
  largestAsked: number;
  /** Raises one of the host's events, such as "workbook.onSelectionChanged". */
  raise(event: string): Promise<void>;
  listening(): string[];
}

interface Bounds {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
}

/**
 * Enough of Excel's object model for the adapter: `Excel.run`, worksheets, ranges, events, settings, shapes and charts over a
 * workbook of the practice engine, which calculates. It follows the public type declarations; where these leave a choice (a spilled
 * cell's `formulas`, for one) it takes the less convenient reading.
 */
export function fakeExcel(book: Book): { Excel: unknown; Office: unknown; state: FakeState } {
  const events = new Map<string, Set<(args: unknown) => Promise<void>>>();
  const state: FakeState = {
    protectedSheets: new Set(),
    unlocked: new Set(),
    structureProtected: false,
    calculationMode: "Automatic",
    fullCalculations: 0,
    selection: [{ sheet: book.sheets()[0].id, row: 0, column: 0, rows: 1, columns: 1 }],
    activeSheet: book.sheets()[0].id,
    settings: new Map(),
    lost: new Map(),
    looks: new Map(),
    shapes: [],
    charts: [],
    version: 1.17,
    failNext: null,
    synchronisations: { count: 0 },
    largestAsked: 0,
    async raise(event) {
      for (const listener of events.get(event) ?? []) await listener({});
    },
    listening: () => [...events].filter(([, set]) => set.size > 0).map(([name]) => name).sort(),
  };

  book.on("change", () => void state.raise("worksheets.onChanged"));
  book.on("sheets", () => void state.raise("worksheets.onAdded"));

  const source = (queue: RequestQueue, context: unknown, name: string): unknown => ({
    add(listener: (args: unknown) => Promise<void>) {
      const set = events.get(name) ?? new Set();
      events.set(name, set);
      queue.add(() => set.add(listener));
      return { context, remove: () => (context as { queue: RequestQueue }).queue.add(() => set.delete(listener)) };
    },
  });

  const makeContext = (): { workbook: unknown; sync(): Promise<void>; queue: RequestQueue } => {
    const queue = new RequestQueue();
    const context = {
      queue,
      workbook: null as unknown,
      async sync() {
        state.synchronisations.count++;
        if (state.failNext) {
          const code = state.failNext;
          state.failNext = null;
          throw new HostError(code);
        }
        await queue.flush();
      },
    };
    context.workbook = workbookObject(queue, book, state, (name) => source(queue, context, name));
    return context;
  };

  return {
    state,
    Excel: {
      // Called as run(batch), run(options, batch) or run(context, batch).
      async run(first: unknown, second?: (context: unknown) => Promise<unknown>) {
        const batch = (second ?? first) as (context: unknown) => Promise<unknown>;
        const given = first as { queue?: RequestQueue; sync?: () => Promise<void> };
        const context = given.queue && given.sync ? given : makeContext();
        const result = await batch(context);
        await (context as { sync(): Promise<void> }).sync();
        return result;
      },
    },
    Office: {
      context: { requirements: { isSetSupported: (_: string, version: string) => Number(version.split(".")[1]) <= Math.round((state.version % 1) * 100) } },
    },
  };
}

function workbookObject(queue: RequestQueue, book: Book, state: FakeState, source: (name: string) => unknown): never {
  const ranges = rangeMaker(queue, book, state);
  const sheetOf = (id: string) => book.sheets().find((one) => one.id === id);
  const sheetObject = (find: () => string | undefined, orNull: boolean): never => {
    const id = (): string => {
      const found = find();
      if (found === undefined || !sheetOf(found)) throw new HostError("ItemNotFound");
      return found;
    };
    const self: never = hostObject(queue, {
      isNull: orNull ? () => find() === undefined || !sheetOf(find()!) : undefined,
      read: { id, name: () => sheetOf(id())!.name, visibility: () => (sheetOf(id())!.hidden ? "Hidden" : "Visible") },
      methods: {
        protection: hostObject(queue, { read: { protected: () => state.protectedSheets.has(sheetOf(id())!.name) } }),
        getRangeByIndexes: (row: number, column: number, rows: number, columns: number) => 
          ranges.make(() => {
            if (rows < 1 || columns < 1) throw new HostError("InvalidArgument");
            state.largestAsked = Math.max(state.largestAsked, rows * columns);
            return { sheet: id(), row, column, rows, columns };
          }, self),
        getRange: (address: string) => ranges.make(() => ({ sheet: id(), ...boundsOf(address) }), self),
        getUsedRangeOrNullObject: () =>
          ranges.make(
            () => book.used(id())!,
            self,
            () => find() === undefined || book.used(id()) === null,
          ),
        activate: () => queue.add(() => (state.activeSheet = id())),
        delete: () => queue.add(() => book.apply([{ kind: "removeSheet", sheet: id() }], "delete")),
        shapes: {
          addImage: (png: string) => drawing(queue, state.shapes, { png, sheet: find() }, ["name", "altTextDescription", "lockAspectRatio", "left", "top", "width", "height"]),
        },
        pageLayout: hostObject(queue, {
          write: { zoom: (zoom: unknown) => state.looks.set(`${sheetOf(id())!.name} zoom`, zoom) },
          methods: {
            headersFooters: {
              defaultForAllPages: hostObject(queue, { write: { centerFooter: (text: unknown) => state.looks.set(`${sheetOf(id())!.name} footer`, text) } }),
            },
          },
        }),
        charts: {
          add: (type: string, range: unknown, seriesBy: string) => drawing(queue, state.charts, { type, range, seriesBy }, ["left", "top", "width", "height"], ["title"]),
        },
      },
    });
    return self;
  };
  const byNameOrId = (key: string) => () => book.sheets().find((one) => one.id === key || one.name.toLowerCase() === key.toLowerCase())?.id;
  const sheetObjects = () => book.sheets().map((one) => sheetObject(() => one.id, false));
  const worksheets = hostObject(queue, {
    items: sheetObjects,
    methods: {
      getItem: (key: string) => sheetObject(byNameOrId(key), false),
      getItemOrNullObject: (key: string) => sheetObject(byNameOrId(key), true),
      add(name: string) {
        queue.add(() => book.apply([{ kind: "addSheet", name }], "add"));
        return sheetObject(byNameOrId(name), false);
      },
      ...Object.fromEntries(
        ["onActivated", "onChanged", "onCalculated", "onRowHiddenChanged", "onAdded", "onDeleted", "onNameChanged", "onVisibilityChanged", "onMoved"].map((name) => [name, source(`worksheets.${name}`)]),
      ),
    },
  });
  const selected = (index: number): Bounds => {
    if (state.selection === "chart") throw new HostError("InvalidSelection");
    return state.selection[index];
  };
  const sheetAt = (find: () => string) => sheetObject(find, false);
  return hostObject(queue, {
    read: { name: () => "Plans.xlsx" },
    methods: {
      worksheets,
      onSelectionChanged: source("workbook.onSelectionChanged"),
      protection: hostObject(queue, { read: { protected: () => state.structureProtected } }),
      application: hostObject(queue, {
        read: { calculationMode: () => state.calculationMode },
        methods: {
          calculate: (kind: string) =>
            queue.add(() => {
              if (kind !== "Full") throw new HostError("InvalidArgument");
              state.fullCalculations++;
              book.recalculate();
            }),
        },
      }),
      getSelectedRanges: () => ({
        areas: hostObject(queue, {
          items: () => {
            selected(0);
            return (state.selection as Area[]).map((_, i) => ranges.make(() => selected(i), sheetAt(() => selected(i).sheet)));
          },
        }),
      }),
      getActiveCell: () =>
        ranges.make(
          () => ({ sheet: state.activeSheet, row: 0, column: 0, rows: 1, columns: 1 }),
          sheetAt(() => state.activeSheet),
        ),
      settings: {
        add: (key: string, value: unknown) => queue.add(() => state.settings.set(key, value)),
        getItemOrNullObject: (key: string) => hostObject(queue, { isNull: () => !state.settings.has(key), read: { value: () => state.settings.get(key) } }),
      },
    },
  });
}

/** A picture or chart: what is set on it is kept for the test to look at. */
function drawing(queue: RequestQueue, kept: Record<string, unknown>[], made: Record<string, unknown>, settable: readonly string[], parts: readonly string[] = []): never {
  queue.add(() => kept.push(made));
  return hostObject(queue, {
    write: Object.fromEntries(settable.map((name) => [name, (value: unknown) => (made[name] = value)])),
    methods: Object.fromEntries(parts.map((part) => [part, hostObject(queue, { write: { text: (value: unknown) => (made[part] = value) } })])),
  });
}

function boundsOf(address: string): Omit<Bounds, "sheet"> {
  const cell = (text: string): [number, number] => {
    const [, letters, digits] = /^([A-Z]+)(\d+)$/.exec(text)!;
    return [Number(digits) - 1, [...letters].reduce((sum, letter) => sum * 26 + letter.charCodeAt(0) - 64, 0) - 1];
  };
  const [first, last = first] = address.split(":");
  const [row, column] = cell(first);
  const [lastRow, lastColumn] = cell(last);
  return { row, column, rows: lastRow - row + 1, columns: lastColumn - column + 1 };
}

type FindBounds = () => Bounds;

function rangeMaker(queue: RequestQueue, book: Book, state: FakeState): { make(find: FindBounds, sheet: never, isNull?: () => boolean): never } {
  const key = (at: Bounds, i: number, j: number): string => `${at.sheet} ${at.row + i} ${at.column + j}`;
  const grid = <T>(at: Bounds, cell: (view: CellView, i: number, j: number) => T): T[][] =>
    Array.from({ length: at.rows }, (_, i) => Array.from({ length: at.columns }, (_, j) => cell(book.view(at.sheet, at.row + i, at.column + j), i, j)));
  const nameOf = (at: Bounds): string => book.sheets().find((one) => one.id === at.sheet)!.name;
  const isSpilled = (view: CellView): boolean => view.anchor !== null || view.extent !== null;

  const make = (find: FindBounds, sheet: never, isNull?: () => boolean): never => {
    const readings: Shape["read"] = {
      rowIndex: () => find().row,
      columnIndex: () => find().column,
      rowCount: () => find().rows,
      columnCount: () => find().columns,
      values: () => grid(find(), (view, i, j) => (state.lost.has(key(find(), i, j)) ? "#NAME?" : view.value)),
      text: () => grid(find(), (view) => view.text),
      numberFormat: () => grid(find(), (view) => view.format),
      formulas: () => grid(find(), (view, i, j) => state.lost.get(key(find(), i, j)) ?? (view.anchor === null && view.input.startsWith("=") ? view.input : view.value)),
      hasSpill: () => {
        const spilled = grid(find(), isSpilled).flat();
        return spilled.every(Boolean) ? true : spilled.some(Boolean) ? null : false;
      },
      left: () => find().column * 64,
      top: () => find().row * 15,
      height: () => find().rows * 15,
    };
    const parentOf = (): Bounds | null => {
      const at = find();
      const view = book.view(at.sheet, at.row, at.column);
      if (view.extent) return { ...at, rows: 1, columns: 1 };
      return view.anchor ? { ...at, ...view.anchor, rows: 1, columns: 1 } : null;
    };
    const extentOf = (): Bounds | null => {
      const at = find();
      const { extent } = book.view(at.sheet, at.row, at.column);
      return extent ? { ...at, ...extent } : null;
    };
    return hostObject(queue, {
      isNull,
      read: readings,
      write: {
        formulas: (cells: unknown[][]) => setContents(book, state, find(), cells),
        values: (cells: unknown[][]) => setContents(book, state, find(), cells),
        numberFormat: (formats: (string | null)[][]) => {
          const at = find();
          const edits = formats.flatMap((row, i) =>
            row.flatMap((format, j): Edit[] => (format === null ? [] : [{ kind: "format", area: { sheet: at.sheet, row: at.row + i, column: at.column + j, rows: 1, columns: 1 }, format }])),
          );
          if (edits.length > 0) book.apply(edits, "format");
        },
      },
      methods: {
        worksheet: sheet,
        format: hostObject(queue, {
          write: { columnWidth: (width: unknown) => state.looks.set(`${nameOf(find())} column ${find().column}`, width) },
          methods: {
          font: hostObject(queue, { write: { bold: (bold: unknown) => state.looks.set(`${nameOf(find())} row ${find().row}, ${find().columns} columns`, bold) } }),
          protection: hostObject(queue, {
            read: {
              locked: () => {
                const locked = grid(find(), (_, i, j) => !state.unlocked.has(key(find(), i, j))).flat();
                return locked.every(Boolean) ? true : locked.some(Boolean) ? null : false;
              },
            },
          }),
          },
        }),
        getCell: (i: number, j: number) => make(() => ({ ...find(), row: find().row + i, column: find().column + j, rows: 1, columns: 1 }), sheet),
        getSpillParentOrNullObject: () => make(() => parentOf()!, sheet, () => parentOf() === null),
        getSpillingToRangeOrNullObject: () => make(() => extentOf()!, sheet, () => isNull?.() === true || extentOf() === null),
        getMergedAreasOrNullObject: () => {
          const areas = () => book.merged(find().sheet).filter((one) => touches(one, find()));
          return hostObject(queue, {
            isNull: () => areas().length === 0,
            methods: { areas: hostObject(queue, { items: () => areas().map((one) => make(() => one, sheet)) }) },
          });
        },
        getRowProperties: () => later(queue, () => Array.from({ length: find().rows }, (_, i) => ({ rowHidden: book.hiddenRow(find().sheet, find().row + i) }))),
        getColumnProperties: () => later(queue, () => Array.from({ length: find().columns }, (_, j) => ({ columnHidden: book.hiddenColumn(find().sheet, find().column + j) }))),
        clear: () => queue.add(() => book.apply([{ kind: "clear", area: find() }], "clear")),
        select: () =>
          queue.add(() => {
            state.selection = [find()];
            return state.raise("workbook.onSelectionChanged");
          }),
      },
    });
  };
  return { make };
}

const touches = (a: Omit<Bounds, "sheet">, b: Omit<Bounds, "sheet">): boolean => a.row < b.row + b.rows && b.row < a.row + a.rows && a.column < b.column + b.columns && b.column < a.column + a.columns;

/** A result that has its value after the synchronisation. */
function later<T>(queue: RequestQueue, compute: () => T): { readonly value: T } {
  let result: T | undefined;
  queue.add(() => (result = compute()));
  return {
    get value() {
      if (result === undefined) throw new Error("A result was read before a synchronisation.");
      return result;
    },
  };
}

/** As a person's typing into the cells: null leaves alone, "" clears, an apostrophe marks text. All or none. */
function setContents(book: Book, state: FakeState, at: Bounds, cells: unknown[][]): void {
  if (cells.length !== at.rows || cells.some((row) => row.length !== at.columns)) throw new HostError("InvalidArgument", "The number of rows or columns does not match the range.");
  const edits: Edit[] = [];
  for (const [i, row] of cells.entries()) {
    for (const [j, value] of row.entries()) {
      if (value === null) continue;
      const place = { sheet: at.sheet, row: at.row + i, column: at.column + j };
      if (state.protectedSheets.has(book.sheets().find((one) => one.id === at.sheet)!.name) && !state.unlocked.has(`${at.sheet} ${place.row} ${place.column}`)) throw new HostError("AccessDenied");
      state.lost.delete(`${at.sheet} ${place.row} ${place.column}`);
      if (value === "") edits.push({ kind: "clear", area: { ...place, rows: 1, columns: 1 } });
      else if (typeof value === "string") edits.push({ kind: "type", ...place, text: value });
      else edits.push({ kind: "put", ...place, value: value as number | boolean });
    }
  }
  if (edits.length > 0) book.apply(edits, "write");
}
