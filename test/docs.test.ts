import { existsSync, readFileSync } from "node:fs";
import path from "node:path";
import { beforeAll, describe, expect, it } from "vitest";
import { functionsMetadata } from "../scripts/metadata.mjs";
import { Book, CustomFunctionHost, type FunctionsFile } from "../src/host/practice/engine";
import { bundled } from "./support/functions";

/**
 * The README's examples, typed into the practice workbook as a reader would: the sheet of its section "Formulas", then every
 * formula of the table below it. A result reads `a, b; c, d` (rows by semicolons), numbers to four digits, "…" where
 * more follows.
 */
const ROOT = path.resolve(import.meta.dirname, "..");
const read = (file: string): string => readFileSync(path.join(ROOT, file), "utf8");
const section = read("README.md").split("\n## Formulas\n")[1].split("\n## ")[0];
const sheet = [...section.matchAll(/^\| (\d+) \|(.*)\|$/gm)].map(([, row, cells]) => ({ row: Number(row) - 1, cells: cells.split("|").map((cell) => cell.trim()) }));
const examples = [...section.matchAll(/^\| `=(CTMC\.(\w+)\(.*?\))` \| (.+) \| `(.+)` \|$/gm)].map(([, formula, name, question, result]) => ({ formula, name, question, result }));

let book: Book;
let ids: string[];
beforeAll(async () => {
  const functions = new CustomFunctionHost();
  const metadata = (await functionsMetadata()) as FunctionsFile;
  ids = metadata.functions.map((one) => one.id);
  functions.load(bundled(), metadata);
  book = new Book({ functions });
  book.apply(
    [
      { kind: "addSheet", id: "results", name: "Results" },
      ...sheet.flatMap(({ row, cells }) => cells.map((text, column) => ({ kind: "type" as const, sheet: "s1", row, column, text })).filter(({ text }) => text !== "")),
    ],
    "the README's sheet",
  );
});

const shown = (value: unknown): string => (typeof value === "number" ? String(Number(value.toPrecision(4))) : String(value));

/** Calculates a formula on a sheet of its own and writes its spill as the README does. */
async function resultOf(formula: string): Promise<string> {
  const onSheet = formula.replace(/\b([A-H]\d+:[A-H]\d+)\b/g, "Sheet1!$1");
  book.apply([{ kind: "clear", area: { sheet: "results", row: 0, column: 0, rows: 200, columns: 40 } }], "clear");
  book.apply([{ kind: "type", sheet: "results", row: 0, column: 0, text: `=${onSheet}` }], "ask");
  await book.whenIdle();
  const { rows, columns } = book.view("results", 0, 0).extent ?? { rows: 1, columns: 1 };
  return Array.from({ length: rows }, (_, row) => Array.from({ length: columns }, (_, column) => shown(book.view("results", row, column).value)).join(", ")).join("; ");
}

describe("README", () => {
  it("shows every function once, in the order of the catalogue", () => {
    expect(examples.map((one) => one.name)).toEqual(ids);
    expect(sheet.length).toBeGreaterThan(10);
  });

  it.each(examples)("=$formula", async ({ formula, result }) => {
    const found = await resultOf(formula);
    if (result.endsWith("…")) expect(found.slice(0, result.length - 1)).toBe(result.slice(0, -1));
    else expect(found).toBe(result);
  });
});

describe("links in the documents", () => {
  const anchors = (text: string): string[] => [...text.matchAll(/^#+ (.+)$/gm)].map(([, heading]) => heading.toLowerCase().replace(/[^\w\- ]/g, "").replace(/ /g, "-"));
  it.each(["README.md", "DEVELOPERS.md"])("%s", (file) => {
    const text = read(file);
    const links = [...text.matchAll(/\]\(([^)\s]+)\)/g)].map(([, target]) => target).filter((target) => !/^https?:/.test(target));
    for (const link of links) {
      const [target, anchor] = link.split("#");
      if (target) expect(existsSync(path.join(ROOT, target)), `${file}: ${link}`).toBe(true);
      if (anchor) expect(anchors(target ? read(target) : text), `${file}: ${link}`).toContain(anchor);
    }
    for (const [, script] of text.matchAll(/`npm run ([\w:]+)/g)) expect(Object.keys(JSON.parse(read("package.json")).scripts), `${file}: npm run ${script}`).toContain(script);
  });
});
