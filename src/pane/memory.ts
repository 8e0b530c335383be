import { onSheet } from "../audit/acceptance";
import { LARGEST_RATE, SMALLEST_RATE } from "../chain/generator";
import type { Workbook } from "./workbook";

/**
 * What the pane keeps with the workbook: one JSON document under one key.
 *
 * Nothing that was stored is ever lost: what cannot be read is carried along under `setAside`, fields that this version
 * does not know are kept as they are, and a document written by a newer version is left untouched.
 */
export const MEMORY_KEY = "ctmc.audit";
export const MEMORY_VERSION = 1;

/** A finding that a person has looked at and lets stand. */
export interface Accepted {
  /** Rule, sheet, state names and the values concerned: when these change, the finding comes back. */
  readonly key: string;
  readonly code: string;
  readonly sentence: string;
  readonly reason: string;
  readonly initials: string;
  /** ISO date. */
  readonly date: string;
}

export interface SignOff {
  readonly fingerprint: string;
  readonly date: string;
  readonly checker: string;
  /** The table as signed off, so that a later change can be listed arrow by arrow. */
  readonly names: readonly string[] | null;
  readonly size: number;
  readonly arrows: readonly (readonly [from: number, to: number, rate: number])[];
}

/** Kept by sheet and top-left cell (rows and columns from 0). */
export interface TableMemory {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
  /** State names when it was last written, so that the entry is found again when the table has moved. */
  readonly states?: readonly string[];
  readonly unit?: string;
  readonly answers?: Readonly<Record<string, string>>;
  readonly accepted?: readonly Accepted[];
  readonly signOff?: SignOff;
}

interface KeptDocument {
  readonly version: typeof MEMORY_VERSION;
  readonly tables: readonly TableMemory[];
  readonly setAside?: readonly unknown[];
  readonly [unknown: string]: unknown;
}

export type MemoryState = "ready" | "newer";

export interface Place {
  readonly sheet: string;
  readonly row: number;
  readonly column: number;
}

const EMPTY: KeptDocument = { version: MEMORY_VERSION, tables: [] };

export class Memory {
  private document: KeptDocument = EMPTY;
  private current: MemoryState = "ready";
  private asideCount = 0;
  private queue: Promise<unknown> = Promise.resolve();

  constructor(private readonly store: Workbook["store"]) {}

  /** "newer": the document belongs to a later version; it is neither read nor written. */
  get state(): MemoryState {
    return this.current;
  }

  /** How many stored pieces could not be read and are carried along. */
  get setAside(): number {
    return this.asideCount;
  }

  /** Reads the document afresh (another workbook may have been opened, another pane may have written). */
  load(): Promise<void> {
    return this.inTurn(async () => this.take(await this.store.get(MEMORY_KEY)));
  }

  /**
   * What is kept for the table at a place; else what is kept for a table of the same states that is no longer where it was (its
   * sheet was renamed, rows were inserted above): the entry follows, and moves for good with the next `update`.
   *
   * @param moved - whether no table stands at that place any more
   */
  table(place: Place, states: readonly string[] | null = null, moved: (from: Place) => boolean = () => false): TableMemory {
    const own = this.document.tables.find((entry) => samePlace(entry, place));
    if (own || !states) return own ?? bare(place);
    const lost = this.document.tables.filter((entry) => sameStates(entry.states, states) && moved(entry));
    return lost.length === 1 ? movedTo(lost[0], place) : bare(place);
  }

  /** Changes what is kept for one table and stores the document; `change` gets the entry as stored at that moment. */
  update(place: Place, change: (entry: TableMemory) => TableMemory, states: readonly string[] | null = null, moved: (from: Place) => boolean = () => false): Promise<void> {
    return this.inTurn(async () => {
      this.take(await this.store.get(MEMORY_KEY));
      if (this.current === "newer") return;
      const entry = change(this.table(place, states, moved));
      const others = this.document.tables.filter((other) => !samePlace(other, place) && !(sameStates(other.states, states) && moved(other)));
      const document = { ...this.document, tables: [...others, states ? { ...entry, states } : entry] };
      await this.store.set(MEMORY_KEY, document);
      this.document = document;
    });
  }

  private take(raw: unknown): void {
    const { document, state } = readDocument(raw);
    this.document = document;
    this.current = state;
    this.asideCount = document.setAside?.length ?? 0;
  }

  /** One store operation after another, so that two quick clicks do not overwrite each other. */
  private inTurn<T>(work: () => Promise<T>): Promise<T> {
    const next = this.queue.then(work, work);
    this.queue = next.catch(() => undefined);
    return next;
  }
}

/** The stored value as a document; whatever is not understood goes to `setAside`, unchanged. */
export function readDocument(raw: unknown): { document: KeptDocument; state: MemoryState } {
  if (raw === undefined || raw === null) return { document: EMPTY, state: "ready" };
  if (!isRecord(raw) || typeof raw.version !== "number") return { document: { ...EMPTY, setAside: [raw] }, state: "ready" };
  if (raw.version > MEMORY_VERSION) return { document: EMPTY, state: "newer" };
  const setAside: unknown[] = Array.isArray(raw.setAside) ? [...raw.setAside] : [];
  if (raw.version !== MEMORY_VERSION || !Array.isArray(raw.tables)) return { document: { ...EMPTY, setAside: [...setAside, raw] }, state: "ready" };
  const tables: TableMemory[] = [];
  for (const entry of raw.tables) {
    if (!isPlace(entry)) {
      setAside.push(entry);
      continue;
    }
    const { readable, unreadable } = readEntry(entry);
    if (unreadable) setAside.push(unreadable);
    tables.push(readable);
  }
  return { document: { ...raw, version: MEMORY_VERSION, tables, setAside: setAside.length ? setAside : undefined }, state: "ready" };
}

function readEntry(entry: TableMemory & Record<string, unknown>): { readable: TableMemory; unreadable: unknown } {
  const readable: Record<string, unknown> = { ...entry };
  const lost: Record<string, unknown> = {};
  const drop = (field: string): void => {
    lost[field] = readable[field];
    delete readable[field];
  };
  if ("states" in readable && !isTexts(readable.states)) drop("states");
  if ("unit" in readable && typeof readable.unit !== "string") drop("unit");
  if ("answers" in readable && !(isRecord(readable.answers) && Object.values(readable.answers).every((value) => typeof value === "string"))) drop("answers");
  if ("signOff" in readable && !isSignOff(readable.signOff)) drop("signOff");
  if ("accepted" in readable) {
    const all: unknown = readable.accepted;
    if (!Array.isArray(all)) drop("accepted");
    else {
      const bad = all.filter((item) => !isAccepted(item));
      if (bad.length) {
        lost.accepted = bad;
        readable.accepted = all.filter(isAccepted);
      }
    }
  }
  const place = { sheet: entry.sheet, row: entry.row, column: entry.column };
  return { readable: readable as unknown as TableMemory, unreadable: Object.keys(lost).length ? { ...place, ...lost } : null };
}

/** The entry with one thing forgotten. */
export function without(entry: TableMemory, field: "unit" | "answers" | "signOff"): TableMemory {
  const rest: { -readonly [K in keyof TableMemory]: TableMemory[K] } = { ...entry };
  delete rest[field];
  return rest;
}

function bare({ sheet, row, column }: Place): TableMemory {
  return { sheet, row, column };
}

function movedTo(entry: TableMemory, { sheet, row, column }: Place): TableMemory {
  const accepted = entry.accepted?.map((one) => ({ ...one, key: onSheet(one.key, sheet) }));
  return { ...entry, sheet, row, column, ...(accepted ? { accepted } : {}) };
}

function sameStates(a: readonly string[] | undefined | null, b: readonly string[] | null): boolean {
  return !!a && !!b && a.length === b.length && a.every((name, at) => name === b[at]);
}

function samePlace(a: Place, b: Place): boolean {
  return a.sheet === b.sheet && a.row === b.row && a.column === b.column;
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}

function isPlace(value: unknown): value is TableMemory & Record<string, unknown> {
  return isRecord(value) && typeof value.sheet === "string" && Number.isInteger(value.row) && Number.isInteger(value.column);
}

function isAccepted(value: unknown): value is Accepted {
  return isRecord(value) && ["key", "code", "sentence", "reason", "initials", "date"].every((field) => typeof value[field] === "string");
}

function isTexts(value: unknown): boolean {
  return Array.isArray(value) && value.every((text) => typeof text === "string");
}

function isSignOff(value: unknown): value is SignOff {
  return (
    isRecord(value) &&
    ["fingerprint", "date", "checker"].every((field) => typeof value[field] === "string") &&
    Number.isInteger(value.size) &&
    (value.names === null || isTexts(value.names)) &&
    Array.isArray(value.arrows) &&
    value.arrows.every((arrow) => isArrow(arrow, value.size as number))
  );
}

function isArrow(value: unknown, size: number): boolean {
  if (!Array.isArray(value) || value.length !== 3) return false;
  const [from, to, rate] = value as unknown[];
  const isState = (state: unknown): boolean => Number.isInteger(state) && (state as number) >= 0 && (state as number) < size;
  return isState(from) && isState(to) && from !== to && typeof rate === "number" && rate >= SMALLEST_RATE && rate <= LARGEST_RATE;
}
