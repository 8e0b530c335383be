import { OfficeMockObject } from "office-addin-mock";
import { type RequestQueue } from "./queue";

/** How one object of the host is made: its readable properties, its settable ones, its methods. */
export interface Shape {
  /** Computed when its load is carried out, that is, in the order of the batch. */
  readonly read?: Readonly<Record<string, () => unknown>>;
  readonly write?: Readonly<Record<string, (value: never) => void>>;
  readonly methods?: Readonly<Record<string, unknown>>;
  /** For objects got by an …OrNullObject method. */
  readonly isNull?: () => boolean;
  /** For collections: what `load("items/…")` yields. */
  readonly items?: () => readonly unknown[];
}

const UNREAD = /^Error, (property was not loaded|context\.sync\(\) was not called)$/;

/**
 * One object of the host as a batch sees it: on the mock's bookkeeping of what was loaded and synchronised, made strict (reading
 * too early throws), and live (what is read, written and called acts on a workbook, in the order of the batch).
 */
export function hostObject(queue: RequestQueue, shape: Shape): never {
  const { read = {}, write = {}, methods = {}, isNull, items } = shape;
  const mock = new OfficeMockObject({ ...Object.fromEntries(Object.keys(read).map((name) => [name, "not read"])) } as never);
  let known = false;
  let nothing = false;
  let loadedItems: readonly unknown[] | null = null;
  queue.add(() => {
    nothing = isNull?.() ?? false;
    known = true;
  });

  const load = (names: string | readonly string[]): unknown => {
    const wanted = (typeof names === "string" ? names.split(",") : [...names]).map((name) => name.trim());
    const own = wanted.filter((name) => !name.startsWith("items") && name !== "isNullObject");
    const ofItems = wanted.filter((name) => name.startsWith("items/")).map((name) => name.slice("items/".length));
    if (own.length > 0) mock.load(own.join(","));
    queue.add(async () => {
      if (nothing) return;
      if (items && wanted.some((name) => name.startsWith("items"))) {
        loadedItems = items();
        if (ofItems.length > 0) for (const item of loadedItems as { load(names: string[]): void }[]) item.load(ofItems);
      }
      for (const name of own) {
        (mock as unknown as { setValue(name: string, value: unknown): void }).setValue(name, read[name]());
        mock.load(name);
      }
      await mock.sync();
    });
    return self;
  };

  const self: never = new Proxy(mock as object, {
    get(_, name) {
      if (typeof name !== "string" || name === "then") return undefined;
      if (name === "load") return load;
      if (name === "isNullObject") {
        if (!known) throw new Error("isNullObject was read before a synchronisation.");
        return nothing;
      }
      if (name === "items" && items) {
        if (!loadedItems) throw new Error("items was read before it was loaded.");
        return loadedItems;
      }
      if (name in methods) return methods[name];
      if (name in read) {
        if (nothing) throw new Error(`${name} was read from an object that does not exist.`);
        const value = mock[name] as unknown;
        if (typeof value === "string" && UNREAD.test(value)) throw new Error(`${name} was read before it was loaded and synchronised.`);
        return value;
      }
      throw new Error(`The stand-in for the host has no ${name}.`);
    },
    set(_, name, value) {
      const setter = write[String(name)];
      if (!setter) throw new Error(`${String(name)} cannot be set in the stand-in for the host.`);
      queue.add(() => setter(value as never));
      return true;
    },
  }) as never;
  return self;
}
