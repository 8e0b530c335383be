import { askedOf, othersOf, roleOf } from "../audit/book";
import type { AuditOptions } from "../audit/audit";
import { overlap, placeText } from "./address";
import { scanWorkbook, UNASKED_CELLS } from "./book-scan";
import type { Book } from "./state";
import type { RangeAddress, Workbook } from "./workbook";

const QUIET = 1200;

/**
 * Keeps the picture of the whole workbook: in the background for workbooks of modest size (rules that compare tables and
 * formulas need it), of any size once the Book view asks for it.
 */
export class BookWatch {
  private book: Book = { status: "none", progress: 0, scanned: null, stale: false };
  private shown = false;
  private running: AbortController | null = null;
  private timer: ReturnType<typeof setTimeout> | undefined;

  constructor(
    private readonly workbook: Workbook,
    private readonly report: (book: Book) => void,
  ) {}

  /** The Book view is shown, or no longer. */
  wanted(shown: boolean): void {
    this.shown = shown;
    if (shown && (this.book.stale || this.book.status !== "ready") && !this.running) void this.scan();
  }

  /** Cells have changed. */
  changed(): void {
    this.set({ stale: this.book.scanned !== null });
    clearTimeout(this.timer);
    this.timer = setTimeout(() => void this.scan(), this.book.scanned ? QUIET : 0);
  }

  refresh(): void {
    clearTimeout(this.timer);
    void this.scan();
  }

  /** What the audit of one table may know of the rest of the workbook. */
  contextOf(range: RangeAddress): Pick<AuditOptions, "asked" | "others" | "role"> {
    const scan = this.book.scanned?.scan;
    const at = this.tableAt(range);
    if (!scan || at < 0) return {};
    return { asked: askedOf(scan, at), others: othersOf(scan, at), role: roleOf(scan, at) };
  }

  /** The formulas that read a table, with where they stand. */
  readersOf(range: RangeAddress): { place: string; formula: string }[] {
    const at = this.tableAt(range);
    const formulas = this.book.scanned?.scan.formulas ?? [];
    return at < 0 ? [] : formulas.filter(({ reads }) => reads === at).map(({ address, formula }) => ({ place: placeText(address), formula }));
  }

  /** Whether no table stands at a place any more; false as long as the workbook has not been looked through afresh. */
  readonly gone = ({ sheet, row, column }: { sheet: string; row: number; column: number }): boolean => {
    const { scanned, stale } = this.book;
    return scanned !== null && !stale && !scanned.scan.tables.some(({ address }) => address.sheet === sheet && address.row === row && address.column === column);
  };

  dispose(): void {
    clearTimeout(this.timer);
    this.running?.abort();
  }

  private tableAt(range: RangeAddress): number {
    return this.book.scanned?.scan.tables.findIndex((table) => overlap(table.address, range) !== null) ?? -1;
  }

  private async scan(): Promise<void> {
    this.running?.abort();
    const run = new AbortController();
    this.running = run;
    this.set({ status: "scanning", progress: 0 });
    try {
      const scanned = await scanWorkbook(this.workbook, {
        signal: run.signal,
        limit: this.shown ? Infinity : UNASKED_CELLS,
        onProgress: (progress) => this.running === run && this.set({ progress }),
      });
      if (this.running !== run) return;
      this.running = null;
      this.set(scanned ? { status: "ready", scanned, stale: false, progress: 1 } : { status: "none" });
    } catch {
      if (this.running !== run) return;
      this.running = null;
      this.set({ status: "failed" });
    }
  }

  private set(change: Partial<Book>): void {
    this.book = { ...this.book, ...change };
    this.report(this.book);
  }
}
