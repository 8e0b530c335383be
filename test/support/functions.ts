import { readFileSync } from "node:fs";
import path from "node:path";
import { runInNewContext } from "node:vm";
import { buildSync } from "esbuild";
import { BOUND_AFTER, BOUND_BEFORE } from "../../scripts/bound-names.mjs";

/** The host's error value, as the functions script sees it. */
export class HostError extends Error {
  constructor(
    readonly code: string,
    message?: string,
  ) {
    super(message ?? "");
  }
}

export const ERROR_CODES = {
  divisionByZero: "#DIV/0!",
  invalidName: "#NAME?",
  invalidNumber: "#NUM!",
  invalidReference: "#REF!",
  invalidValue: "#VALUE!",
  notAvailable: "#N/A",
  nullReference: "#NULL!",
} as const;

// eslint-disable-next-line @typescript-eslint/no-explicit-any -- what the host passes and gets is untyped
export type HostFunction = (...args: any[]) => any;

/**
 * Runs the functions script in a bare runtime that offers only `CustomFunctions` (and `more`) and returns what it registers.
 * The script is bundled from the sources as the build does it, or is the built file itself.
 */
export function loadFunctions(options: { script?: string; more?: object } = {}): Record<string, HostFunction> {
  const registered: Record<string, HostFunction> = {};
  const CustomFunctions = { associate: (id: string, body: HostFunction) => void (registered[id] = body), Error: HostError, ErrorCode: ERROR_CODES };
  runInNewContext(options.script ?? bundled(), { CustomFunctions, ...options.more });
  return registered;
}

let script: string | null = null;

/** The functions script bundled in memory, once. */
export function bundled(): string {
  script ??= buildSync({
    entryPoints: [path.resolve(import.meta.dirname, "../../src/functions/entry.ts")],
    bundle: true,
    format: "iife",
    target: "es2022",
    write: false,
    minify: true,
    banner: { js: BOUND_BEFORE },
    footer: { js: BOUND_AFTER },
  }).outputFiles[0].text;
  return script;
}

/** dist/functions.js, as the build wrote it. */
export const built = (): string => readFileSync(path.resolve(import.meta.dirname, "../../dist/functions.js"), "utf8");
