/** The one record in which the browser keeps the workbook, and copies of records that could not be read. */
const DATABASE = "stayrate";
const SCHEMA = 1;
const STORE = "workbooks";
const CURRENT = "practice";

/** Version of the record around the book; the book carries its own. */
export const RECORD_VERSION = 1;

export interface Stored {
  readonly version: number;
  readonly savedAt: string;
  readonly book: unknown;
}

export class Storage {
  private constructor(private readonly database: IDBDatabase) {
    // Another tab brings a newer schema: let it pass; this tab says so when it next tries to write.
    database.onversionchange = () => database.close();
  }

  static open(): Promise<Storage> {
    return new Promise((resolve, reject) => {
      const request = indexedDB.open(DATABASE, SCHEMA);
      request.onupgradeneeded = () => request.result.createObjectStore(STORE);
      request.onsuccess = () => resolve(new Storage(request.result));
      request.onerror = () => reject(request.error ?? new Error("The browser gave no database."));
      request.onblocked = () => reject(new Error("Another tab holds an older database."));
    });
  }

  read(): Promise<unknown> {
    return this.run("readonly", (store) => store.get(CURRENT));
  }

  /** Writes at once and asks for the end of the transaction at once, so that it also serves while the page closes. */
  write(record: Stored): Promise<void> {
    return this.run("readwrite", (store) => store.put(record, CURRENT)).then(() => undefined);
  }

  remove(): Promise<void> {
    return this.run("readwrite", (store) => store.delete(CURRENT)).then(() => undefined);
  }

  /** Puts an unreadable record aside under a name of its own. */
  putAside(record: unknown, name: string): Promise<void> {
    return this.run("readwrite", (store) => store.put(record, name)).then(() => undefined);
  }

  private run<T>(mode: IDBTransactionMode, ask: (store: IDBObjectStore) => IDBRequest<T>): Promise<T> {
    return new Promise((resolve, reject) => {
      const transaction = this.database.transaction(STORE, mode);
      const request = ask(transaction.objectStore(STORE));
      transaction.oncomplete = () => resolve(request.result);
      transaction.onerror = transaction.onabort = () => reject(transaction.error ?? new Error("The browser refused to store."));
      transaction.commit?.();
    });
  }
}
