import { describe, expect, test } from "vitest";
import { shareElasticity } from "../../src/chain/elasticity";
import { battery, generatorOf, maskOf, referenceValue, relativeError } from "./battery";

/**
 * Long-run elasticities against the battery's derivatives of the stationary shares, state by state.
 *
 * An elasticity of 1e-12 beside terms of order one is what is left of a cancellation in the chain itself, so the error has
 * two parts: relative for elasticities from 1e-6 up, absolute below.
 */
const SIZABLE = 1e-6;

describe("elasticity of each state's long-run share", () => {
  test("relative 1e-14 from 1e-6 up, absolute 1e-20 below", () => {
    let relative = { error: 0, at: "" };
    let absolute = { error: 0, at: "" };
    let compared = 0;
    for (const c of battery) {
      if (!c.expect.dstationary) continue;
      const chain = generatorOf(c);
      const [i, j] = c.deriv;
      const members = c.expect.closed_classes[0] as number[];
      members.forEach((state, k) => {
        const found = shareElasticity(chain, maskOf(c.n, [state]))[i * c.n + j];
        const share = referenceValue(c.expect.stationary[0][k]);
        const expected = (referenceValue(c.expect.dstationary[k]) * chain.rateOf(i, j)) / share;
        if (!Number.isFinite(expected)) return;
        compared++;
        const at = `${c.id}, state ${state}`;
        if (Math.abs(expected) >= SIZABLE) {
          const error = relativeError(found, expected);
          if (!(error <= relative.error)) relative = { error, at };
        } else {
          const error = Math.abs(found - expected);
          if (!(error <= absolute.error)) absolute = { error, at };
        }
      });
    }
    console.log(`elasticities: relative ${relative.error.toExponential(1)} (${relative.at}), absolute ${absolute.error.toExponential(1)} (${absolute.at}), ${compared} values`);
    expect(compared).toBeGreaterThan(500);
    expect(relative.error, relative.at).toBeLessThanOrEqual(1e-14);
    expect(absolute.error, absolute.at).toBeLessThanOrEqual(1e-20);
  });
});
