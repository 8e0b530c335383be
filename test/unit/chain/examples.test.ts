import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";

/** Every `@example` of the chain is executed and compared with the value behind its `//`. */
const folder = new URL("../../../src/chain/", import.meta.url);
const files = readdirSync(folder).filter((name) => name.endsWith(".ts"));
const names: Record<string, unknown> = {};
for (const file of files) Object.assign(names, await import(new URL(file, folder).href));

const plain = (value: unknown): unknown => {
  if (ArrayBuffer.isView(value)) return Array.from(value as Float64Array);
  if (Array.isArray(value)) return value.map(plain);
  if (value && typeof value === "object" && Object.getPrototypeOf(value) === Object.prototype)
    return Object.fromEntries(Object.entries(value).map(([key, entry]) => [key, plain(entry)]));
  return value;
};

const alike = (found: unknown, wanted: unknown): void => {
  if (typeof wanted === "number" && Number.isFinite(wanted)) expect(Math.abs((found as number) - wanted)).toBeLessThanOrEqual(1e-9 * Math.abs(wanted));
  else if (Array.isArray(wanted)) {
    expect((found as unknown[]).length).toBe(wanted.length);
    wanted.forEach((entry, k) => alike((found as unknown[])[k], entry));
  } else if (wanted && typeof wanted === "object")
    for (const [key, entry] of Object.entries(wanted)) alike((found as Record<string, unknown>)[key], entry);
  else expect(found).toEqual(wanted);
};

const evaluate = (code: string): unknown => plain(new Function(...Object.keys(names), `return (${code})`)(...Object.values(names)));

describe("examples of the chain's docstrings", () => {
  for (const file of files) {
    const source = readFileSync(new URL(file, folder), "utf8");
    for (const [, text] of source.matchAll(/@example([\s\S]*?)(?=\n \* @|\*\/)/g)) {
      const lines = text.replace(/\n \*/g, "\n").trim();
      const [code, wanted] = lines.split(/\s*\/\/\s*/, 2);
      test(`${file}: ${code.replace(/\s+/g, " ").slice(0, 90)}`, () => {
        const found = evaluate(code);
        expect(wanted, "an example says what it gives").toBeTruthy();
        alike(found, evaluate(wanted));
      });
    }
  }
});
