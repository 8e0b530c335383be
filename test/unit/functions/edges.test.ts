import { describe, expect, it } from "vitest";
import { BARE, call, ONE_WAY, PUMP, refusal } from "./tables";

/** Two states that never meet again and one that leads to both. */
const FORK = [[0, 1, 2], [0, 0, 0], [0, 0, 0]];

describe("input at the edges of what a sheet sends", () => {
  it("reads a log in whole columns", () => {
    const rows = [["unit", "time", "state"], ["P", 0, "Up"], ["P", 5, "Down"]];
    const columns = Array.from({ length: 1_048_576 }, (_, i) => rows[i] ?? ["", "", ""]);
    expect(call("FROMLOG", columns, 9)).toEqual([[-0.2, 0.2], [0, 0]]);
    expect(refusal(call("FROMLOG", [["", "", ""]], 9))).toBe("#VALUE! log: it has no rows. Give rows of unit, time, state entered.");
  });

  it("takes two columns for no list", () => {
    const pairs = [["A", "B"], ["B", "C"], ["C", "A"]];
    expect(refusal(call("FROMLIST", pairs))).toBe("#VALUE! The range has too few columns, 2. A list has three: from, to, rate.");
    expect(refusal(call("STATIONARY", pairs))).toMatch(/^#VALUE! /);
    expect(call("FROMLIST", BARE)).toEqual(call("GENERATOR", BARE));
  });

  it("refuses headings that would not be read back", () => {
    const first = [["", "A", "A + B"], ["A", 0, 1], ["A + B", 1, 0]];
    const second = [["", "B + C", "C"], ["B + C", 0, 1], ["C", 1, 0]];
    expect(refusal(call("COMBINE", first, second, true))).toBe('#VALUE! States 1 and 4 are both named "A + B + C". Give each state its own name.');
    expect(call("COMBINE", first, second)).toHaveLength(4);
    const staged = [["", "A", "a (1 of 2)"], ["A", 0, 1], ["a (1 of 2)", 1, 0]];
    expect(refusal(call("STAGES", staged, "A", 2, true))).toMatch(/^#VALUE! States 1 and 3 are both named/);
  });

  it("answers for at most 1e12 events, instead of summing for seconds", () => {
    expect(call("RATEINTERVAL", 1e12, 1)[0]).toHaveLength(3);
    expect(refusal(call("RATEINTERVAL", 1e308, 1))).toBe("#VALUE! count: 1e+308 cannot be used. Enter a number from 0 to 1000000000000.");
  });

  it("refuses a period that would make a rate vanish", () => {
    expect(refusal(call("FROMPROBABILITY", [[0.9, 0.1], [0, 1]], 1e308))).toMatch(/^#VALUE! Row 1, column 2: .* Change the time unit\.$/);
  });
});

describe("one value that leaves the number range", () => {
  it("has a sentence, too", () => {
    const lost = "#N/A This value cannot be computed within the number range.";
    expect(refusal(call("COSTUNTIL", ONE_WAY, 1, [[1e308, -1e308, 0]], 3))).toBe(lost);
    expect(refusal(call("COSTUNTIL", ONE_WAY, 1, [[1e308, 1e308, 0]], 3))).toBe(lost);
    expect(refusal(call("COSTRATE", PUMP, [[1.7e308, 1.7e308, 1.7e308]], [[0, 1e308, 1e308], [0, 0, 1e308], [1e308, 0, 0]]))).toBe(lost);
  });
});

describe("sentences of answers that do not exist", () => {
  it("says that the share is 0 at a time as in the long run", () => {
    const sentence = "#N/A The share in these states is 0, so no rate changes it by a percentage.";
    expect(refusal(call("ELASTICITY", PUMP, "Failed", 1, 0))).toBe(sentence);
    expect(refusal(call("ELASTICITY", ONE_WAY, "Running"))).toBe(sentence);
  });

  it("does not ask for a start where the function has none", () => {
    const sentence = "#N/A The long run depends on the start: {State 2}, {State 3} are never left. Only one may be.";
    expect(refusal(call("INSPECTION", FORK, [["", "", ""], ["", "", ""], ["", "", ""]], 1))).toBe(sentence);
    expect(refusal(call("LUMP", FORK, [["a", "b", "c"]], true))).toBe(sentence);
  });

  it("names the states of a table without names alike everywhere", () => {
    const sentence = "#N/A The long run depends on the start: {State 2}, {State 3} are never left. Give a start.";
    expect(refusal(call("UPDOWN", FORK, 1)[0][1])).toBe(sentence);
    expect(refusal(call("STATIONARY", FORK))).toBe(sentence);
  });
});

describe("elasticities that nearly cancel", () => {
  it("keeps each digit on a ring, where the closed form is a single product", () => {
    // pi_i is proportional to 1/r_i: the elasticity of the share in `up` for r_i is pi_i for a state outside and
    // -pi_i (share outside) / (share in `up`) for one inside
    let seed = 7;
    const draw = (): number => (seed = (seed * 48271) % 2147483647) / 2147483647;
    let worst = 0;
    for (let round = 0; round < 40; round++) {
      const n = 3 + (round % 12);
      const rates = Array.from({ length: n }, () => 10 ** (10 * draw() - 5));
      const up = rates.map((_, i) => i === 0 || (i < n - 1 && draw() < 0.5));
      const sum = rates.reduce((total, rate) => total + 1 / rate, 0);
      const part = (inside: boolean): number => rates.reduce((total, rate, i) => total + (up[i] === inside ? 1 / rate : 0), 0) / sum;
      const table = rates.map((rate, i) => rates.map((_, j) => (j === (i + 1) % n ? rate : 0)));
      const found = call("ELASTICITY", table, [up]) as number[][];
      rates.forEach((rate, i) => {
        const expected = (1 / rate / sum) * (up[i] ? -part(false) / part(true) : 1);
        worst = Math.max(worst, Math.abs(found[i][(i + 1) % n] / expected - 1));
      });
    }
    console.log(`ring elasticities: ${worst.toExponential(1)}`);
    expect(worst).toBeLessThan(1e-14); // 1.2e-15 measured; 3.3e-13 in plain doubles
  });

  it("is exactly 0 where closed classes serve alike", () => {
    // both ends are always up, so that no rate towards them changes the share
    const table = [[0, 1, 0.3, 0.7], [0, 0, 3, 0], [0, 7, 0, 0], [0, 0, 0, 0]];
    const found = call("ELASTICITY", table, [[2, 3, 4]], 1) as number[][];
    expect(found.flat().every((entry) => entry === 0)).toBe(true);
  });
});

describe("rates at the ends of the range", () => {
  it("keeps elasticities whose derivative leaves the number range", () => {
    // π₁ = b/(a + b): its elasticity is −(1 − π₁) for a, 1 − π₁ for b
    expect(call("ELASTICITY", [[0, 1e150], [1e-150, 0]], 1)).toEqual([[0, -1], [1, 0]]);
    expect(call("COSTELASTICITY", [[0, 1e150], [1e-150, 0]], [[0, 1]])).toEqual([[0, 1e-300], [-1e-300, 0]]);
  });

  it("seeks a rate at a time only among rates that a table may have", () => {
    expect(refusal(call("RATEFORGOAL", [[0, 1e-150], [1e-150, 0]], 1, 2, 1, 0.5, 1, 1))).toMatch(/^#N\/A No rate of this arrow gives 0\.5/);
  });
});
