import type { Looked } from "./examine";
import type { MemoryState } from "./memory";
import type { ShownChange } from "./remedy-write";
import type { Scanned } from "./book-scan";
import type { Sharing } from "./sharing";
import type { Subject } from "./subject";
import type { RangeAddress, RangeReading, Write } from "./workbook";

/** The views that exist, in the order of their tabs. */
export const VIEWS = ["check", "book"] as const;
export type View = (typeof VIEWS)[number];

/** Everything that the pane shows, as one value: views are functions of it. */
export interface PaneState {
  readonly view: View;
  readonly subject: Subject | null;
  /** Stay on this table whatever is selected. */
  readonly held: boolean;
  readonly looked: Looked | null;
  readonly memory: MemoryState;
  readonly setAside: number;
  readonly busy: boolean;
  /** What went wrong with the last action, as a sentence. */
  readonly trouble: string | null;
  readonly notice: Notice | null;
  readonly opened: Opened | null;
  readonly book: Book;
  readonly sharing: Sharing | null;
  /** How many entries of each long list are drawn, by the list's name. */
  readonly drawn: Readonly<Record<string, number>>;
}

/** What was just done, with the way back and the way there. */
export interface Notice {
  readonly text: string;
  readonly undo?: Undo;
  readonly jump?: { readonly label: string; readonly range: RangeAddress };
}

export type Undo =
  | { readonly kind: "cells"; readonly write: Write; readonly after: RangeReading; readonly label: string }
  | { readonly kind: "subject"; readonly subject: Subject };

/** The one form or preview that is open. */
export type Opened =
  | { readonly kind: "accept"; readonly key: string }
  | { readonly kind: "remedy"; readonly key: string; readonly preview: Preview }
  | { readonly kind: "unit"; readonly suggestion: string }
  | { readonly kind: "signOff" }
  | { readonly kind: "freeze" };

/** Names the form or preview, and in the page (`data-opens`) the word that opens it. */
export function openedName(opened: Opened): string {
  return "key" in opened ? `${opened.kind} ${opened.key}` : opened.kind;
}

export interface Preview {
  /** The table as it was when the preview was made. */
  readonly reading: RangeReading;
  readonly changes: readonly ShownChange[];
  /** For a new table: where it goes and what it holds, as text. */
  readonly place: RangeAddress | null;
  readonly table: readonly (readonly string[])[];
  /** Why it cannot be done, as a sentence; null when it can. */
  readonly obstacle: string | null;
  readonly write: Write | null;
}

export interface Book {
  readonly status: "none" | "scanning" | "ready" | "failed";
  readonly progress: number;
  readonly scanned: Scanned | null;
  /** Cells have changed since. */
  readonly stale: boolean;
}

export const START: PaneState = {
  view: "check",
  subject: null,
  held: false,
  looked: null,
  memory: "ready",
  setAside: 0,
  busy: true,
  trouble: null,
  notice: null,
  opened: null,
  book: { status: "none", progress: 0, scanned: null, stale: false },
  sharing: null,
  drawn: {},
};
