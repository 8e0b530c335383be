import { vi } from "vitest";
import { ERROR_CODES, HostError, type HostFunction } from "../../support/functions";

/**
 * The functions, registered from the sources in this very runtime (the built script in a bare one is `test/built`'s). The
 * clock stands still, so that no answer runs out of its budget on a busy machine.
 */
export const functions: Record<string, HostFunction> = {};
vi.spyOn(Date, "now").mockReturnValue(0);
vi.stubGlobal("CustomFunctions", { associate: (id: string, body: HostFunction) => void (functions[id] = body), Error: HostError, ErrorCode: ERROR_CODES });
await import("../../../src/functions/entry");

/** Calls a function; a refusal of the whole is returned as the error. */
// eslint-disable-next-line @typescript-eslint/no-explicit-any -- as the host sees it
export function call(name: string, ...args: unknown[]): any {
  try {
    return functions[name](...args);
  } catch (error) {
    if (error instanceof HostError) return error;
    throw new Error(`${name} threw something else: ${String(error)}`);
  }
}

/** "#VALUE! sentence" or "#N/A sentence" of a refused call or cell. */
export function refusal(found: unknown): string {
  return found instanceof HostError ? `${found.code} ${found.message}` : `answered ${JSON.stringify(found)}`;
}

/** A pump: running, worn, failed; repaired as good as new. */
export const PUMP = [
  ["", "Running", "Worn", "Failed"],
  ["Running", "", 0.1, 0.02],
  ["Worn", "", "", 0.5],
  ["Failed", 2, "", ""],
];
/** The same without repair. */
export const ONE_WAY = PUMP.map((row, i) => (i === 3 ? ["Failed", "", "", ""] : row));
/** Without headings. */
export const BARE = PUMP.slice(1).map((row) => row.slice(1));
/** As a list with the states in the same order. */
export const LIST = [
  ["Running", "Worn", 0.1],
  ["Running", "Failed", 0.02],
  ["Worn", "Failed", 0.5],
  ["Failed", "Running", 2],
];
