import { describe, expect, it } from "vitest";
import { arrowClaim, durationWords, plainUnit, rateWords, shortFigure } from "../../../src/cells/sentences/arrows";

describe("what an arrow claims", () => {
  it.each([
    [0.02, "day", "0.02 a day, about once in 50 days"],
    [0.12, "day", "0.12 a day, about once in 8.3 days"],
    [0.02, "h", "0.02 per h, about once in 50 h"],
    [0.00001, "h", "0.00001 per h, about once in 100 000 h (about 11 years)"],
    [1, "hour", "1 an hour, about once in 1 hour"],
    [0.00001, "hour", "0.00001 an hour, about once in 100 000 hours (about 11 years)"],
    [12, "day", "12 a day, about once in 0.083 days (about 2 hours)"],
    [0.25, "", "0.25 per time unit, about once in 4 time units"],
    [2, "1e6 h", "2 per 1e6 h, about once in 0.5 × 1e6 h"],
    [0.5, "cycle", "0.5 per cycle, about once in 2 cycles"],
  ])("%d %s", (rate, unit, sentence) => {
    expect(arrowClaim(rate, unit).replaceAll("\u202f", " ")).toBe(sentence);
  });

  it("keeps the extreme rates that a table may hold", () => {
    expect(rateWords(1e-150, "hour")).toBe("1e−150 an hour");
    expect(durationWords(1e150, "")).toBe("1e150 time units");
  });
});

describe("units", () => {
  it.each([["per day", "day"], [" h ", "h"], ["/yr", "yr"], ["1/h", "h"], ["Hours", "hour"], ["per  1e6 h", "1e6 h"], ["Schicht", "Schicht"], ["per ", ""], ["percent", "percent"], ["", ""]])(
    "%s is kept as %s",
    (typed, kept) => expect(plainUnit(typed)).toBe(kept),
  );
});

describe("short figures", () => {
  it.each([
    [0, "0"], [-0.18, "−0.18"], [0.1 + 0.2, "0.3"], [1234, "1234"], [12345, "12 345"], [1234567, "1 234 570"], [0.00012345, "0.00012345"],
    [0.0000123, "0.0000123"], [1.2e-9, "1.2e−9"], [-2.5e12, "−2.5e12"], [NaN, "–"], [Infinity, "–"], [999999.7, "1 000 000"],
  ])("%d", (value, text) => expect(shortFigure(value).replaceAll("\u202f", " ")).toBe(text));
});
