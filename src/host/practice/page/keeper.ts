/**
 * Keeps the workbook on this computer: a moment after each change and when the page closes; one tab writes at a time.
 * A second tab shows the workbook, follows its changes, and may take over.
 */
import type { Book, BookFile } from "../engine";
import type { Drafts } from "./drafts";
import { RECORD_VERSION, type Storage } from "./storage";

const LOCK = "stayrate.practice";
const DELAY = 150;
/** Storing takes at most about this share of the time: a large workbook is stored less often. */
const SHARE = 0.1;
/** How long a tab that is asked to hand over may take before the lock is taken from it. */
const PATIENCE = 3_000;

export type Keeping = "kept" | "keeping" | "failed" | "nowhere";
export type Role = "writer" | "reader";

type Message = { readonly kind: "stored" } | { readonly kind: "handOver" };

export class Keeper {
  private timer: ReturnType<typeof setTimeout> | null = null;
  private dirty = false;
  private lastCost = 0;
  private role: Role = "reader";
  private release: (() => void) | null = null;
  private started = false;
  private waiting: AbortController | null = null;
  private readonly channel = new BroadcastChannel(LOCK);
  state: Keeping = "kept";
  onState: () => void = () => undefined;
  onRole: (role: Role, lost: boolean) => void = () => undefined;
  /** Before handing over, what is being typed goes into its cell. */
  beforeHandOver: () => void = () => undefined;
  /** Another tab stored a newer workbook, or this one has just become the writer. */
  onNewer: (file: BookFile) => void = () => undefined;

  constructor(private readonly book: Book, private readonly storage: Storage | null, private readonly drafts: Drafts) {
    for (const event of ["change", "sheets", "store"] as const) book.on(event, () => this.later());
    addEventListener("pagehide", () => void this.now());
    document.addEventListener("visibilitychange", () => document.visibilityState === "hidden" && void this.now());
    for (const [target, event] of [[window, "focus"], [document, "visibilitychange"]] as const) target.addEventListener(event, () => void this.inherit());
    this.channel.onmessage = (event: MessageEvent<Message>) => {
      if (event.data.kind === "stored" && this.role === "reader") void this.reload();
      else if (event.data.kind === "handOver" && this.role === "writer") void this.handOver();
    };
    if (!storage) this.state = "nowhere";
  }

  /** Becomes the writer if no other tab is. */
  async start(): Promise<Role> {
    if (!this.storage || !navigator.locks) this.take("writer");
    else await this.request({ ifAvailable: true });
    this.started = true;
    return this.role;
  }

  /** Asks the tab that writes to hand over, and takes the lock from it when it does not answer. */
  async takeOver(): Promise<void> {
    this.channel.postMessage({ kind: "handOver" } satisfies Message);
    try {
      await this.wait();
    } catch {
      if (this.role === "reader") await this.request({ steal: true });
    }
  }

  /** A tab that someone comes back to writes again where the tab that wrote has been closed. */
  private async inherit(): Promise<void> {
    if (!this.started || this.role === "writer" || document.visibilityState === "hidden") return;
    await this.wait().catch(() => undefined);
  }

  /** Waits for the lock a while, in the place of an earlier wait. */
  private async wait(): Promise<void> {
    this.waiting?.abort();
    const patience = (this.waiting = new AbortController());
    const timer = setTimeout(() => patience.abort(), PATIENCE);
    await this.request({ signal: patience.signal }).finally(() => clearTimeout(timer));
  }

  /** Resolves once the lock is held or known to be another tab's; the lock itself is held until `release`. */
  private request(options: LockOptions): Promise<void> {
    return new Promise<void>((resolve, reject) => {
      navigator.locks
        .request(LOCK, options, async (lock) => {
          if (!lock) {
            this.take("reader");
            resolve();
            return;
          }
          if (!options.ifAvailable) await this.reload();
          const held = new Promise<void>((release) => (this.release = release));
          this.take("writer");
          resolve();
          await held;
        })
        .catch((error: unknown) => {
          // Taken by another tab while held, or given up waiting.
          if (this.role === "writer") this.take("reader", true);
          reject(error instanceof Error ? error : new Error(String(error)));
        });
    });
  }

  private take(role: Role, lost = false): void {
    this.role = role;
    if (role === "reader") this.release = null;
    this.onRole(role, lost);
  }

  private async handOver(): Promise<void> {
    this.beforeHandOver();
    await this.now();
    const release = this.release;
    this.take("reader", true);
    release?.();
  }

  private async reload(): Promise<void> {
    const record = (await this.storage?.read()) as { book?: BookFile } | undefined;
    if (record?.book) this.onNewer(record.book);
  }

  private later(): void {
    if (this.role !== "writer" || !this.storage) return;
    this.dirty = true;
    this.tell("keeping");
    if (this.timer === null) this.timer = setTimeout(() => void this.now(), Math.max(DELAY, this.lastCost / SHARE));
  }

  /** Stores what has changed, at once. */
  async now(): Promise<void> {
    if (this.timer !== null) clearTimeout(this.timer);
    this.timer = null;
    if (!this.dirty || this.role !== "writer" || !this.storage) return;
    this.dirty = false;
    const begun = performance.now();
    try {
      await this.storage.write({ version: RECORD_VERSION, savedAt: new Date().toISOString(), book: this.book.toJSON() });
      this.lastCost = performance.now() - begun;
      if (this.dirty) return;
      this.drafts.stored();
      this.tell("kept");
      this.channel.postMessage({ kind: "stored" } satisfies Message);
    } catch {
      this.dirty = true;
      this.tell("failed");
    }
  }

  private tell(state: Keeping): void {
    this.state = state;
    this.onState();
  }
}
