/** The practice workbook page: loads the functions, finds the kept workbook, puts the parts together. */
import "./tokens.css";
import "./page.css";
import "./grid.css";
import { Book, CustomFunctionHost, FileRefused, localeOf, type BookFile, type FunctionsFile } from "../engine";
import { demoFile } from "../demo/demo";
import { buildPage, type Unreadable } from "./build";
import { el } from "./dom";
import { Storage } from "./storage";

/** Longest stretch of recalculation before the page gets its turn. */
const SLICE_MS = 100;

void start();

async function start(): Promise<void> {
  const host = new CustomFunctionHost();
  host.install(window);
  const [metadata, storage] = await Promise.all([loadMetadata(), Storage.open().catch(() => null), loadScript("functions.js")]);
  host.useMetadata(metadata);
  const book = new Book({ locale: localeOf(navigator.language), functions: host, sliceMs: SLICE_MS });
  const unreadable = await openKept(book, storage);
  buildPage({ book, host, storage, demo: demoFile, unreadable });
}

async function loadMetadata(): Promise<FunctionsFile> {
  const response = await fetch("functions.json");
  return (await response.json()) as FunctionsFile;
}

function loadScript(address: string): Promise<void> {
  return new Promise((resolve, reject) => {
    const script = el("script", { src: address });
    script.onload = () => resolve();
    script.onerror = () => reject(new Error(`${address} did not load.`));
    document.head.append(script);
  });
}

/** Opens what was kept, or the example. What cannot be read is put aside, never written over. */
async function openKept(book: Book, storage: Storage | null): Promise<Unreadable | null> {
  let record: unknown;
  let unreadable: Unreadable | null = null;
  try {
    record = await storage?.read();
    if (record !== undefined) {
      const kept = typeof record === "object" && record !== null && "book" in record ? (record as { book: BookFile }).book : null;
      if (kept === null) throw new FileRefused("What was kept is no workbook.");
      book.replaceWith(kept);
      return null;
    }
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    unreadable = { reason, record };
    await storage?.putAside(record, `unreadable ${new Date().toISOString()}`).catch(() => undefined);
  }
  book.replaceWith(demoFile());
  return unreadable;
}
