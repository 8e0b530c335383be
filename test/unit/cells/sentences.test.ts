import { readdirSync, readFileSync } from "node:fs";
import path from "node:path";
import ts from "typescript";
import { describe, expect, it } from "vitest";
import { PROBLEM_SENTENCES, sentenceOf } from "../../../src/cells/sentences/problems";
import { LONGEST_SENTENCE } from "../../../src/cells/sentences/wording";
import { Problem, type Detail } from "../../../src/chain/problem";

const SOURCE = path.resolve(import.meta.dirname, "../../../src");

/** Problem codes that the sources throw: every text that can reach the first place of `new Problem(…)`. */
function codesInSources(): Map<string, string> {
  const codes = new Map<string, string>();
  for (const file of readdirSync(SOURCE, { recursive: true, encoding: "utf8" }).filter((name) => name.endsWith(".ts"))) {
    const source = ts.createSourceFile(file, readFileSync(path.join(SOURCE, file), "utf8"), ts.ScriptTarget.ES2022, true);
    const texts = (node: ts.Node): void => {
      if (ts.isStringLiteralLike(node)) codes.set(node.text, file);
      else if (ts.isConditionalExpression(node)) [node.whenTrue, node.whenFalse].forEach(texts);
    };
    const visit = (node: ts.Node): void => {
      if (ts.isNewExpression(node) && node.expression.getText() === "Problem" && node.arguments?.length) texts(node.arguments[0]);
      ts.forEachChild(node, visit);
    };
    visit(source);
  }
  return codes;
}

const LONG_NAME = "A name that somebody typed into a cell and that goes on and on and on and on and on";
/** Details that stretch every sentence: long names and texts, the last row and column of a sheet, numbers of 17 digits. */
const LONG: Record<string, Detail> = new Proxy({} as Record<string, Detail>, {
  get: (_, key: string): Detail | undefined => {
    if (key === "names") return Array.from({ length: 20_000 }, () => LONG_NAME);
    if (key === "block") return undefined;
    if (key === "quantity" || key === "what") return "count";
    if (key === "classes") return [[0, 1, 2], [3], [4], [5]];
    if (key === "side") return "column";
    if (key === "total") return 100;
    if (key === "argument") return "timeInState";
    if (/^(row|column|index|first|second|firstRow|from|to|state|named|number|size|rows|columns|cells|most|states|other|end|count|times|units|running|places|servers|up|down|longest|groups)$/.test(key)) return 16_383;
    if (/name|found|fault|unit|label|text|group$/i.test(key)) return LONG_NAME;
    if (/^(least|above|most|below)$/.test(key)) return 0.001;
    return -1.2345678901234567e-123;
  },
});
/** The same for a square table, whose places are not rows of a list. */
const LONG_SQUARE: Record<string, Detail> = new Proxy(LONG, { get: (all, key: string) => (key === "listRow" ? undefined : all[key]) });

describe("problem sentences", () => {
  const codes = codesInSources();

  it("exist for every code that is thrown, and for no other", () => {
    expect(codes.size).toBeGreaterThan(40);
    expect([...codes.keys()].filter((code) => !PROBLEM_SENTENCES[code]).map((code) => `${code} in ${codes.get(code)}`)).toEqual([]);
    expect(Object.keys(PROBLEM_SENTENCES).filter((code) => !codes.has(code))).toEqual([]);
  });

  it.each(Object.keys(PROBLEM_SENTENCES))("%s fits the host's limit and leaks no bare value", (code) => {
    for (const details of [LONG, LONG_SQUARE, { row: 2, rowName: "Degraded", column: 0, listRow: 3, state: 3 }, { argument: "times", row: 16383, column: 16383, found: "x".repeat(500), state: 1, names: ["A", "B"] }]) {
      const sentence = sentenceOf(new Problem(code, details));
      expect(sentence.length).toBeLessThanOrEqual(LONGEST_SENTENCE);
      expect(sentence).toMatch(/[.…]$/);
      expect(sentence).not.toMatch(/undefined|null|\[object/);
    }
    for (const details of code.startsWith("list") ? [LONG] : [LONG, LONG_SQUARE])
      expect(sentenceOf(new Problem(code, details))).toMatch(/^(?!.*NaN).*\.$/); // nothing but names had to give way
  });

  it("shorten names before they cut words", () => {
    const rowName = "Waiting for the delivery of a spare part from the other site of the company";
    expect(sentenceOf(new Problem("rateNegative", { row: 2, rowName, column: 0, rate: -0.2 }))).toBe(
      "Row 3 (Waiting for the delivery of a spare part from the other sit…), column 1: -0.2 is not a rate. Enter 0 or more.",
    );
  });
});
