import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { costRate } from "../../src/chain/cost";
import { costElasticity, meanTimeElasticity } from "../../src/chain/elasticity";
import { flows } from "../../src/chain/jumps";
import { quasiStationary } from "../../src/chain/quasi-stationary";
import { battery, generatorOf, maskOf, startOf, Worst, type BatteryCase } from "./battery";

/** Values by mpmath at 80 digits: `sensitivity.py` beside this file. */
interface Row {
  readonly id: string;
  readonly meanTime?: readonly [number, number, string][];
  readonly cost?: readonly [number, number, string][];
  readonly quasi?: { readonly shares: readonly string[]; readonly decayRate: string };
}
const { rows } = JSON.parse(readFileSync(new URL("./sensitivity.json", import.meta.url), "utf8")) as { rows: Row[] };
const caseOf = (id: string): BatteryCase => battery.find((c) => c.id === id)!;

/** Elasticities from here up are compared relatively; below it they are what a cancellation in the chain leaves, and compared absolutely. */
const SIZABLE = 1e-6;

function compare(found: Float64Array, wanted: readonly [number, number, string][], n: number, id: string, relative: Worst, absolute: Worst): void {
  for (const [i, j, text] of wanted) {
    const expected = Number(text);
    if (Math.abs(expected) >= SIZABLE) relative.note(found[i * n + j], expected, `${id} ${i}→${j}`);
    else absolute.note(1 + found[i * n + j] - expected, 1, `${id} ${i}→${j}`);
  }
}

describe("sensitivities against mpmath", () => {
  test("mean time to the targets, every arrow of 67 chains", () => {
    const [relative, absolute] = [new Worst(), new Worst()];
    for (const { id, meanTime } of rows) {
      if (!meanTime) continue;
      const c = caseOf(id);
      compare(meanTimeElasticity(generatorOf(c), startOf(c), maskOf(c.n, c.target)), meanTime, c.n, id, relative, absolute);
    }
    console.log(`mean time elasticity: relative ${relative}, absolute ${absolute}`);
    expect(relative.error, relative.at).toBeLessThanOrEqual(1e-12);
    expect(absolute.error, absolute.at).toBeLessThanOrEqual(1e-15);
  });

  test("long-run cost, every arrow of 49 chains", () => {
    // the cost of the arrow itself and the change of what follows may cancel: the error is relative to the larger of
    // the elasticity and the arrow's own part of the cost
    let worst = { error: 0, at: "" };
    for (const { id, cost } of rows) {
      if (!cost) continue;
      const c = caseOf(id);
      const [chain, costs, jumpCosts] = [generatorOf(c), Float64Array.from({ length: c.n }, (_, i) => i + 1), new Float64Array(c.n * c.n).fill(10)];
      const found = costElasticity(chain, costs, jumpCosts);
      const [flow, rate] = [flows(chain), costRate(chain, costs, jumpCosts)];
      for (const [i, j, text] of cost) {
        const k = i * c.n + j;
        const error = Math.abs(found[k] - Number(text)) / Math.max(Math.abs(Number(text)), (10 * flow[k]) / rate);
        if (!(error <= worst.error)) worst = { error, at: `${id} ${i}→${j}` };
      }
    }
    console.log(`cost elasticity: ${worst.error.toExponential(1)} (${worst.at})`);
    expect(worst.error, worst.at).toBeLessThanOrEqual(1e-12);
  });

  test("quasi-stationary shares and decay rates of 50 chains", () => {
    const [shares, decay] = [new Worst(), new Worst()];
    for (const { id, quasi } of rows) {
      if (!quasi) continue;
      const c = caseOf(id);
      const found = quasiStationary(generatorOf(c), maskOf(c.n, c.target));
      decay.note(found.decayRate, Number(quasi.decayRate), id);
      quasi.shares.forEach((text, i) => shares.note(found.shares[i], Number(text), `${id} ${i}`));
    }
    console.log(`quasi-stationary: shares ${shares}, decay rates ${decay}`);
    expect(shares.error, shares.at).toBeLessThanOrEqual(1e-12);
    expect(decay.error, decay.at).toBeLessThanOrEqual(1e-12);
  });
});
