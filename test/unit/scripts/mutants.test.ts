import { describe, expect, it } from "vitest";
import { mutants } from "../../../scripts/mutants.mjs";

const changed = (text: string): string[] => mutants(text).map(({ start, end, to }) => text.slice(0, start) + to + text.slice(end));

describe("the changes of a mutation check", () => {
  it("turn operators, numbers, truth values and negations round, one at a time", () => {
    expect(changed("f(a < b && !c, x * 2 - y, true);")).toEqual([
      "f(a < b || !c, x * 2 - y, true);",
      "f(a <= b && !c, x * 2 - y, true);",
      "f(a < b && c, x * 2 - y, true);",
      "f(a < b && !c, x * 2 + y, true);",
      "f(a < b && !c, x / 2 - y, true);",
      "f(a < b && !c, x * 3 - y, true);",
      "f(a < b && !c, x * 2 - y, false);",
    ]);
  });

  it("leave types, imports and joined text alone", () => {
    expect(changed('import { x } from "y"; type T = 1 | 2; interface I { a: true } const s = "a" + b;')).toEqual([]);
  });

  it("say where they are", () => {
    expect(mutants("\n\nx += 0.5;")).toEqual([{ line: 3, start: 4, end: 6, from: "+=", to: "-=" }]);
  });
});
