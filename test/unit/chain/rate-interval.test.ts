import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { rateInterval } from "../../../src/chain/rate-interval";
import { poissonLower, poissonMass, poissonUpper, stirlingError } from "../../../src/numerics/poisson-tail";
import { relativeError, Worst } from "../../reference/battery";

interface Row {
  readonly count: number;
  readonly confidence: number;
  readonly lower: string;
  readonly upper: string;
  readonly upperFailureTruncated: string;
}
const { rows } = JSON.parse(readFileSync(new URL("../../reference/rate-interval.json", import.meta.url), "utf8")) as { rows: Row[] };

describe("rate interval", () => {
  test("against mpmath, 1 to 30,000 events, confidence 0.5 to 0.999999", () => {
    const worst = new Worst();
    for (const { count, confidence, ...wanted } of rows) {
      const { lower, upper } = rateInterval(count, 1, confidence);
      worst.note(lower, Number(wanted.lower), `lower ${count} ${confidence}`);
      worst.note(upper, Number(wanted.upper), `upper ${count} ${confidence}`);
      worst.note(rateInterval(count, 1, confidence, true).upper, Number(wanted.upperFailureTruncated), `truncated ${count} ${confidence}`);
    }
    console.log(`rate interval: ${worst}`);
    expect(worst.error, worst.at).toBeLessThan(1e-13); // measured 1.4e-14, target 1e-12
  });

  test("no event: 0 and the one-sided upper bound; refused when the watch ends at the last event", () => {
    expect(rateInterval(0, 1000, 0.95)).toEqual({ lower: 0, estimate: 0, upper: -Math.log(1 - 0.95) / 1000 });
    expect(() => rateInterval(0, 1000, 0.95, true)).toThrow("noEventToEndAt");
  });

  test("follows the exposure, and widens with the confidence", () => {
    const [one, other] = [rateInterval(7, 1), rateInterval(7, 250)];
    expect(relativeError(other.upper * 250, one.upper)).toBeLessThan(4e-16);
    expect(rateInterval(7, 1, 0.99).lower).toBeLessThan(one.lower);
    expect(rateInterval(7, 1, 0.99).upper).toBeGreaterThan(one.upper);
    expect(rateInterval(7, 1, 0.9, true).upper).toBeLessThan(one.upper);
  });

  test("refuses what is no count, exposure or confidence", () => {
    expect(() => rateInterval(1.5, 1)).toThrow("notWholeNumber");
    expect(() => rateInterval(-1, 1)).toThrow("notWholeNumber");
    expect(() => rateInterval(1, 0)).toThrow("exposureNotPositive");
    expect(() => rateInterval(1, 1, 1)).toThrow("notBetween");
    expect(() => rateInterval(1, 1, 0)).toThrow("notBetween");
  });
});

describe("Poisson tails", () => {
  test("both tails meet: P(N ≥ k) + P(N ≤ k − 1) = 1", () => {
    for (const [k, x] of [[3, 3.5], [12, 12.3], [400, 400.7]]) expect(relativeError(poissonUpper(k, x) + poissonLower(k - 1, x), 1)).toBeLessThan(1e-14);
  });

  test("masses far from the mean", () => {
    // published check G24 (checks.json): mean 1000, counts 700 and 850
    expect(relativeError(poissonMass(700, 1000), 2.0957369143803183593e-24)).toBeLessThan(1e-13);
    expect(relativeError(poissonMass(850, 1000), 9.6805243663907106339e-8)).toBeLessThan(1e-13);
  });

  test("the table of Stirling errors runs into the series", () => {
    const logFactorial = (k: number): number => Array.from({ length: k }, (_, i) => Math.log(i + 1)).reduce((a, b) => a + b, 0);
    for (let k = 1; k <= 18; k++) {
      const direct = logFactorial(k) - (k + 0.5) * Math.log(k) + k - 0.5 * Math.log(2 * Math.PI);
      expect(Math.abs(stirlingError(k) - direct)).toBeLessThan(3e-14); // the direct form cancels
    }
  });
});
