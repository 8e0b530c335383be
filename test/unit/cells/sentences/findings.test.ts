import { readdirSync, readFileSync } from "node:fs";
import path from "node:path";
import { describe, expect, it } from "vitest";
import { audit } from "../../../../src/audit/audit";
import { findingTexts } from "../../../../src/cells/sentences/findings";
import { remedyTexts } from "../../../../src/cells/sentences/remedies";
import { PROBLEM_SENTENCES, sentenceOf } from "../../../../src/cells/sentences/problems";
import { Problem } from "../../../../src/chain/problem";
import { read } from "../../../../src/table/read";
import type { Cells } from "../../../../src/table/rate-table";
import { headed } from "../../audit/table";

/** Ranges that between them are refused for every reason that the reader of rate tables knows. */
const REFUSED: Readonly<Record<string, Cells>> = {
  rangeEmpty: [[null, null], [null, null]],
  notSquare: [["", "A", "B"], ["A", 0, 1]],
  cornerBlank: [["", 1, 2], [1, 0, 3], [2, 4, 0]],
  headingMissing: [["", "A", ""], ["A", 0, 1], ["", 2, 0]],
  headingNotName: [["", "A", { fault: "#REF!" }], ["A", 0, 1], ["B", 2, 0]],
  headingsDiffer: [["", "A", "B"], ["A", 0, 1], ["C", 2, 0]],
  nameRepeated: [["", "A", "a"], ["A", 0, 1], ["a", 2, 0]],
  cellFault: [["", "A", "B"], ["A", 0, { fault: "#DIV/0!" }], ["B", 2, 0]],
  rateNotNumber: [["", "A", "B"], ["A", 0, "unknown"], ["B", 2, 0]],
  rateIsText: [["", "A", "B"], ["A", 0, "0,2"], ["B", 2, 0]],
  rateNegative: [["", "A", "B"], ["A", 0, -1], ["B", 2, 0]],
  rateNotFinite: [["", "A", "B"], ["A", 0, Infinity], ["B", 2, 0]],
  rateOutOfRange: [["", "A", "B"], ["A", 0, 1e200], ["B", 2, 0]],
  diagonalPositive: [["", "A", "B"], ["A", 1, 1], ["B", 2, 0]],
  diagonalWithoutExits: [["", "A", "B"], ["A", 0, 1], ["B", 0, -2]],
  rowSum: [["", "A", "B"], ["A", -3, 1], ["B", 2, -2]],
  rowSumRounded: [["", "A", "B", "C"], ["A", -0.33, 0.17, 0.17], ["B", 2, -2, 0], ["C", 1, 0, -1]],
  listNameMissing: [["A", "B", 1], ["B", "A", 2], ["C", 7, 2], ["C", "A", 1], ["A", "C", 1]],
  arrowToItself: [["A", "B", 1], ["B", "B", 2]],
  arrowRepeated: [["A", "B", 1], ["A", "B", 2]],
};

describe("a refusal and the first stop", () => {
  it.each(Object.keys(REFUSED))("carry the same sentence: %s", (code) => {
    const reading = read(REFUSED[code]);
    expect(reading.problems[0].code).toBe(code);
    const first = findingTexts(audit(REFUSED[code])[0]);
    expect(first.severity).toBe("stop");
    expect(first.finding).toBe(sentenceOf(reading.problems[0]));
    expect(first.remedy.length).toBeGreaterThan(10);
  });

  it("hold for every problem code there is, also where the start is refused", () => {
    const clean = headed("", ["A", "B"], [[null, 1], [2, null]]);
    for (const code of Object.keys(PROBLEM_SENTENCES)) {
      const problem = new Problem(code, { row: 0, column: 1, index: 0, found: "x", given: -1, exits: 2, rate: -1, name: "A", classes: [[0], [1]] });
      const [first] = audit(clean, { start: problem });
      expect(findingTexts(first).finding, code).toBe(sentenceOf(problem));
    }
  });
});

describe("sentences", () => {
  it("are one line and short, stops at most 120 characters", () => {
    const ranges: Cells[] = [
      ...Object.values(REFUSED),
      headed("", ["Well", "Ill", "Dead"], [[0.9, 0.08, 0.03], [0.2, 0.7, 0.1], [0, 0, 1]]),
      headed("", ["Well", "Ill", "Dead"], [[91, 8, 1], [20, 70, 10], [0, 0, 100]]),
      headed("MTBF (h)", ["A", "B", "Total"], [[0, 2, 2], [1, 0, 1], [1, 2, 3]]),
      headed("probability", ["A", "B", "C"], [[0, 0.5, 0], [0, 0, 0], [0.5, 0.2, 0]]),
      headed("", ["Pump 1 working", "Pump 1 down", "Pump 2 working", "Pump 2 down"], [[null, 1, 0, 0], [2, null, 0, 0], [0, 0, null, 1], [0, 0, 2, null]]),
    ];
    for (const cells of ranges)
      for (const finding of audit(cells, { answers: {} })) {
        const texts = findingTexts(finding);
        for (const text of [texts.where, texts.finding, texts.remedy]) {
          expect(text).not.toMatch(/\n|undefined|NaN|null|\[object/u);
          expect(text.length, text).toBeLessThanOrEqual(170);
        }
        if (finding.severity === "stop") expect(texts.finding.length, texts.finding).toBeLessThanOrEqual(120);
      }
  });

  it("say where in states, or in lines of the range", () => {
    const cells = headed("", ["Running", "Failed"], [[null, -1], [2, null]]);
    expect(findingTexts(audit(cells)[0]).where).toBe("row 1 (Running), column 2 (Failed)");
    const differ: Cells = [["", "A", "B"], ["A", 0, 1], ["C", 2, 0]];
    expect(findingTexts(audit(differ)[0]).where).toBe("heading of row 2");
    const list: Cells = [["A", "B", 1], ["A", "B", 2]];
    expect(findingTexts(audit(list)[0]).where).toBe("row 2 of the range");
  });
});

it("every code and remedy that a rule names has its words", () => {
  const folder = path.resolve(import.meta.dirname, "../../../../src/audit");
  const sources = readdirSync(folder, { recursive: true, encoding: "utf8" }).filter((name) => name.endsWith(".ts")).map((name) => readFileSync(path.join(folder, name), "utf8")).join("\n");
  const codes = new Set([...sources.matchAll(/\b(?:code: |report\(|stop\()"(\w+)"/gu)].map((match) => match[1]));
  const remedies = new Set([...sources.matchAll(/\bremedy: (?:\w+ \? )?"(\w+)"/gu)].map((match) => match[1]));
  expect(codes.size).toBeGreaterThan(35);
  expect(remedies.size).toBeGreaterThan(5);
  for (const code of codes) {
    if (remedies.has(code) || ["fillDiagonal", "clearDiagonal", "convertText"].includes(code)) continue;
    const texts = findingTexts({ code, severity: "note", span: null, details: {} });
    expect(texts.remedy.length, code).toBeGreaterThan(5);
  }
  for (const code of remedies) expect(remedyTexts({ code, kind: "cells", changes: [] }).label, code).not.toBe("");
});
