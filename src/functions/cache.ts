import type { Argument } from "../cells/argument";
import { sameArguments } from "./digest";

interface Entry {
  readonly args: readonly Argument[];
  readonly value: unknown;
  readonly bytes: number;
}

/**
 * Keeps what was worked out from arguments, up to a number of bytes; what was not used for longest goes first.
 * An entry is found by digest and trusted only when its arguments are the same cell by cell.
 */
export class Cache {
  private readonly entries = new Map<string, Entry>();
  private held = 0;
  hits = 0;
  misses = 0;

  constructor(readonly mostBytes: number) {}

  get bytes(): number {
    return this.held;
  }

  get size(): number {
    return this.entries.size;
  }

  find(key: string, args: readonly Argument[]): unknown {
    const entry = this.entries.get(key);
    if (!entry || !sameArguments(entry.args, args)) {
      this.misses++;
      return undefined;
    }
    this.hits++;
    this.entries.delete(key);
    this.entries.set(key, entry);
    return entry.value;
  }

  /** Keeps a value unless it alone would fill a good part of the store. */
  keep(key: string, args: readonly Argument[], value: unknown, bytes: number): void {
    this.drop(key);
    if (bytes > this.mostBytes / 4) return;
    this.entries.set(key, { args, value, bytes });
    this.held += bytes;
    for (const oldest of this.entries.keys()) {
      if (this.held <= this.mostBytes) break;
      this.drop(oldest);
    }
  }

  private drop(key: string): void {
    this.held -= this.entries.get(key)?.bytes ?? 0;
    this.entries.delete(key);
  }
}
