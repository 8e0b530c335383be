/**
 * What the pane needs from a host. Fixed: later work adds methods and changes none.
 * Rows and columns count from 0. Every method may take a round trip to the host, hence the promises.
 */

/** A value as a cell shows it to a program: "" is a blank cell; errors are their code, such as "#DIV/0!". */
export type HostValue = number | string | boolean;

export interface RangeAddress {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
}

/** A fact about the sheet that a host may be unable to give. */
export type Fact<T> = T | "unknown";

export interface RangeFacts {
  /** Hidden or filtered-out rows and columns inside the range, as sheet row / column numbers. */
  readonly hiddenRows: Fact<readonly number[]>;
  readonly hiddenColumns: Fact<readonly number[]>;
  /** Merged areas that touch the range. */
  readonly merged: Fact<readonly RangeAddress[]>;
  /** Values in the ring of cells just outside the range, "" where blank or off the sheet. */
  readonly neighbours: Fact<{
    readonly above: readonly HostValue[];
    readonly below: readonly HostValue[];
    readonly left: readonly HostValue[];
    readonly right: readonly HostValue[];
  }>;
  readonly calculation: Fact<"automatic" | "manual">;
}

export interface RangeReading {
  readonly address: RangeAddress;
  readonly values: readonly (readonly HostValue[])[];
  /** The cell's content as typed: "=…" for a formula, the typed text or number otherwise, "" when blank or spilled into. */
  readonly formulas: readonly (readonly string[])[];
  /** Number format codes, "General" by default. */
  readonly formats: readonly (readonly string[])[];
  /** The text each cell displays. */
  readonly texts: readonly (readonly string[])[];
  readonly facts: RangeFacts;
}

/** One rectangle to write. Each entry is what a person would type: "=…" a formula, a string kept as text, null clears, undefined leaves the cell alone. */
export interface Write {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
  readonly cells: readonly (readonly (HostValue | null | undefined)[])[];
  /** Optional number formats for the same rectangle. */
  readonly formats?: readonly (readonly (string | undefined)[])[];
}

export interface SheetInfo {
  readonly name: string;
  readonly hidden: Fact<boolean>;
  /** Smallest range that holds every filled cell; null when the sheet is empty. */
  readonly used: RangeAddress | null;
}

/** A cell of a sheet. */
export interface Place {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
}

export interface Picture {
  /** PNG in base64, without a prefix. */
  readonly png: string;
  /** Size in the sheet, in points. */
  readonly width: number;
  readonly height: number;
  readonly name: string;
  /** What it shows, for people who do not see it. */
  readonly description: string;
}

export interface ChartWish {
  readonly kind: "line" | "columns" | "stackedAreas";
  readonly title: string;
  readonly seriesIn: "rows" | "columns";
}

/** A formula of ours, spelled as people know it, and its cell. */
export interface FormulaPlace extends Place {
  readonly formula: string;
}

/** A formula whose result stands in the workbook as plain values, and the block that these fill. */
export interface FrozenFormula extends FormulaPlace {
  readonly rows: number;
  readonly columns: number;
  /** ISO date and time. */
  readonly date: string;
  /** Of the rate table that the formula read; null where it read none that could be found. */
  readonly fingerprint: string | null;
}

/** How a sheet that the pane has added looks, and prints on pages one sheet wide. */
export interface SheetLook {
  /** In characters, from the first column on. */
  readonly columnWidths: readonly number[];
  readonly boldRows: readonly number[];
  /** Text in the footer of each page. */
  readonly footer: string;
}

/** How many were done, and a sentence for each that could not be. */
export interface Outcome {
  readonly done: number;
  readonly refused: readonly string[];
}

/** Life in workbooks that travel between people with and without the add-in. */
export interface SharedWorkbook {
  /** Formulas of ours that show #NAME? or carry the prefix of functions that were not registered. */
  unlinked(): Promise<readonly FormulaPlace[]>;
  /** Rewrites each of them to itself. */
  relink(): Promise<Outcome>;
  /** What is frozen now. */
  frozen(): Promise<readonly FrozenFormula[]>;
  /** Replaces every formula of ours by the values it shows, keeps the formulas in the workbook and lists them on a sheet. */
  freeze(now: Date): Promise<Outcome & { readonly sheet: string | null }>;
  /** Puts the formulas back where the values are still as they were frozen. */
  thaw(): Promise<Outcome>;
  calculation(): Promise<"automatic" | "manual">;
  recalculate(): Promise<void>;
}

/** Most cells that the pane asks for in one `scan`: about a megabyte of values and formulas. */
export const SCAN_CELLS = 20_000;

export type WorkbookEvent = "selection" | "change" | "sheets";

export interface Workbook {
  readonly host: "practice" | "excel";
  sheets(): Promise<readonly SheetInfo[]>;
  selection(): Promise<RangeAddress>;
  read(range: RangeAddress): Promise<RangeReading>;
  /** Writes all rectangles as one undo step, named by `label`. Rejects with a sentence when the sheet is protected. */
  write(batch: readonly Write[], label: string): Promise<void>;
  /**
   * Values and formulas alone, for looking through whole sheets; at most `SCAN_CELLS` cells a call. Optional: without it
   * `read` serves.
   */
  scan?(range: RangeAddress): Promise<Pick<RangeReading, "address" | "values" | "formulas">>;
  /** Adds a sheet; never over an existing one: the name is made free by a number. Resolves to the name used. */
  addSheet(name: string, cells: Write["cells"], formats?: Write["formats"]): Promise<string>;
  /** Selects and scrolls to the range, changing sheet if need be. */
  select(range: RangeAddress): Promise<void>;
  undo(): Promise<void>;
  on(event: WorkbookEvent, listener: () => void): () => void;
  /** JSON kept with the workbook. */
  readonly store: {
    get(key: string): Promise<unknown>;
    set(key: string, value: unknown): Promise<void>;
  };

  /** The workbook's own name, "" while it has none. */
  name?(): Promise<string>;
  /** Gives a sheet its look and fits it to one page in width, for printing. */
  presentSheet?(sheet: string, look: SheetLook): Promise<void>;
  /** Puts one formula into an empty place; `size` is what its answer needs. A filled place is refused with a sentence. One undo step. */
  placeFormula?(place: Place, formula: string, size: { readonly rows: number; readonly columns: number }, label: string): Promise<void>;
  /** Puts a picture into the sheet, its upper left corner at the place. */
  addPicture?(place: Place, picture: Picture): Promise<void>;
  /** Draws the block that the formula at the place fills, as a chart of the host's own. */
  addChart?(place: Place, chart: ChartWish): Promise<void>;
  readonly shared?: SharedWorkbook;
}
