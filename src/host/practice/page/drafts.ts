/**
 * The edit that is not in its cell yet. It is written down with every key, at once and not later (the browser's local
 * storage), and is forgotten only when it was given up, or when the workbook that holds it has been stored.
 */
export interface Draft {
  readonly sheet: string;
  readonly sheetName: string;
  readonly row: number;
  readonly column: number;
  readonly text: string;
}

const KEY = "stayrate.draft";

export class Drafts {
  private settled = false;

  /** Null until this tab may write; a tab that only reads keeps no drafts. */
  constructor(private readonly storage: Pick<Storage, "getItem" | "setItem" | "removeItem"> | null) {}

  keep(draft: Draft): void {
    this.settled = false;
    this.run((storage) => storage.setItem(KEY, JSON.stringify(draft)));
  }

  drop(): void {
    this.settled = false;
    this.run((storage) => storage.removeItem(KEY));
  }

  /** The draft is in its cell now; it stays written down until the workbook is stored. */
  settle(): void {
    this.settled = true;
  }

  /** The workbook was stored. */
  stored(): void {
    if (this.settled) this.drop();
  }

  read(): Draft | null {
    let found: unknown = null;
    this.run((storage) => {
      found = JSON.parse(storage.getItem(KEY) ?? "null");
    });
    if (typeof found !== "object" || found === null) return null;
    const { sheet, sheetName, row, column, text } = found as Record<string, unknown>;
    const whole = (n: unknown): n is number => Number.isSafeInteger(n) && (n as number) >= 0;
    return typeof sheet === "string" && typeof sheetName === "string" && whole(row) && whole(column) && typeof text === "string"
      ? { sheet, sheetName, row, column, text }
      : null;
  }

  private run(act: (storage: Pick<Storage, "getItem" | "setItem" | "removeItem">) => void): void {
    try {
      if (this.storage) act(this.storage);
    } catch {
      // Full or forbidden storage: the edit stays in the field, only its copy is missing.
    }
  }
}
