import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { absorptionProbability, absorptionSd, everReached, meanAbsorption, timeBefore } from "../../src/chain/absorption";
import { availability, upDown } from "../../src/chain/availability";
import { absorbingStates, communicatingClasses } from "../../src/chain/classes";
import { combine } from "../../src/chain/combine";
import { costRate, costUntil } from "../../src/chain/cost";
import { costElasticity, meanTimeElasticity, shareElasticity } from "../../src/chain/elasticity";
import type { Generator } from "../../src/chain/generator";
import { flows, jumpChain } from "../../src/chain/jumps";
import { lump } from "../../src/chain/lump";
import { quasiStationary } from "../../src/chain/quasi-stationary";
import { rateForGoal } from "../../src/chain/rate-for-goal";
import { stages } from "../../src/chain/stages";
import { stationaryShares } from "../../src/chain/stationary";
import { relativeError } from "../reference/battery";
import { chainArbitrary, changed, irreducibleArbitrary, renamed, seeded } from "../support/chains";

const maskFrom = (n: number, bits: number): Uint8Array => Uint8Array.from({ length: n }, (_, i) => (bits >> (i % 30)) & 1);
const at = (n: number, state: number): Float64Array => Float64Array.from({ length: n }, (_, i) => (i === state ? 1 : 0));
const close = (found: number, expected: number, tolerance: number): void =>
  expect(relativeError(found, expected), `${found} for ${expected}`).toBeLessThanOrEqual(tolerance);
const total = (values: Iterable<number>): number => [...values].reduce((sum, value) => sum + value, 0);
const orderOf = (n: number, seed: number): number[] =>
  Array.from({ length: n }, (_, i) => i).sort((a, b) => ((a * 7919 + seed) % 104729) - ((b * 7919 + seed) % 104729));

describe("long-run shares", () => {
  test("sum to one and balance every state: πQ = 0", () => {
    fc.assert(fc.property(irreducibleArbitrary(25), (chain) => {
      const shares = stationaryShares(chain);
      close(total(shares), 1, 1e-14);
      const flow = flows(chain);
      const n = chain.size;
      for (let i = 0; i < n; i++) {
        let [inward, outward] = [0, 0];
        for (let j = 0; j < n; j++) [inward, outward] = [inward + flow[j * n + i], outward + flow[i * n + j]];
        close(inward, outward, 1e-13);
      }
    }), seeded);
  });

  test("follow the states when they are renamed, and do not know the time unit", () => {
    fc.assert(fc.property(irreducibleArbitrary(25), fc.nat(), (chain, seed) => {
      const order = orderOf(chain.size, seed);
      const shares = stationaryShares(chain);
      const other = stationaryShares(renamed(chain, order, 1 / 3600));
      shares.forEach((share, i) => close(other[order[i]], share, 1e-13));
    }), seeded);
  });

  test("from a start: classes weighted by the probability of ending in them", () => {
    fc.assert(fc.property(chainArbitrary(12), fc.nat(), (chain, pick) => {
      const start = pick % chain.size;
      const shares = stationaryShares(chain, at(chain.size, start));
      const { classes, closed } = communicatingClasses(chain);
      close(total(shares), 1, 1e-13);
      classes.forEach((members, c) => {
        const weight = total(Array.from(members, (state) => shares[state]));
        if (!closed[c]) expect(weight).toBe(0);
        else close(weight, everReached(chain, Uint8Array.from({ length: chain.size }, (_, i) => (members.includes(i) ? 1 : 0)))[start], 1e-13);
      });
    }), seeded);
  });
});

describe("until a target is met", () => {
  const questions = (chain: Generator, bits: number): { targets: Uint8Array; means: Float64Array; ever: Float64Array } => {
    const targets = maskFrom(chain.size, bits);
    return { targets, means: meanAbsorption(chain, targets), ever: everReached(chain, targets) };
  };

  test("the means are those of the occupancies before it, and exist exactly where it is certain", () => {
    fc.assert(fc.property(chainArbitrary(12), fc.nat(), (chain, bits) => {
      const { targets, means, ever } = questions(chain, bits);
      for (let i = 0; i < chain.size; i++) {
        const before = timeBefore(chain, at(chain.size, i), targets);
        expect(means[i] === Infinity).toBe(ever[i] !== 1 && !targets[i]);
        if (means[i] < Infinity) close(total(before), means[i], 1e-13);
        targets.forEach((t, j) => { if (t) expect(before[j]).toBe(0); });
      }
    }), seeded);
  });

  test("the first target met is one of them: rows sum to the probability of ever meeting one", () => {
    fc.assert(fc.property(chainArbitrary(12), fc.nat(), (chain, bits) => {
      const { targets, ever } = questions(chain, bits);
      const { targets: columns, probability } = absorptionProbability(chain, targets);
      for (let i = 0; i < chain.size; i++) close(total(probability.subarray(i * columns.length, (i + 1) * columns.length)), ever[i], 1e-13);
    }), seeded);
  });

  test("times change with the time unit and the names as they should", () => {
    fc.assert(fc.property(irreducibleArbitrary(12), fc.nat(), (chain, bits) => {
      const targets = maskFrom(chain.size, bits | 1);
      const order = orderOf(chain.size, bits);
      const moved = Uint8Array.from(targets);
      targets.forEach((t, i) => (moved[order[i]] = t));
      const other = renamed(chain, order, 24);
      const [means, sds] = [meanAbsorption(other, moved), absorptionSd(other, moved)];
      meanAbsorption(chain, targets).forEach((mean, i) => close(means[order[i]] * 24, mean, 1e-13));
      absorptionSd(chain, targets).forEach((sd, i) => close(sds[order[i]] * 24, sd, 1e-13));
    }), seeded);
  });

  test("a unit cost until the target is the mean time; without end at discount r it is 1/r", () => {
    fc.assert(fc.property(irreducibleArbitrary(12), fc.nat(), fc.double({ min: 1e-6, max: 1e3, noNaN: true }), (chain, bits, r) => {
      const targets = maskFrom(chain.size, bits | 1);
      const ones = new Float64Array(chain.size).fill(1);
      const last = at(chain.size, chain.size - 1);
      close(costUntil(chain, last, ones, targets, null, 0), meanAbsorption(chain, targets)[chain.size - 1], 1e-13);
      close(costUntil(chain, last, ones, new Uint8Array(chain.size), null, r), 1 / r, 1e-13);
    }), seeded);
  });
});

describe("sensitivities", () => {
  test("sum to what the time unit does: 0 for a share, −1 for a mean time, 1 for a cost per time unit of jumps", () => {
    fc.assert(fc.property(irreducibleArbitrary(12), fc.nat(), (chain, bits) => {
      const n = chain.size;
      const up = maskFrom(n, bits | 1);
      const share = shareElasticity(chain, up);
      expect(Math.abs(total(share))).toBeLessThanOrEqual(1e-13 * (1 + total(share.map(Math.abs))));
      const mean = meanTimeElasticity(chain, at(n, n - 1), up.map((u, i) => (i === n - 1 ? 0 : u)));
      expect(Math.abs(total(mean) + 1)).toBeLessThanOrEqual(1e-12 * (1 + total(mean.map(Math.abs))));
      const cost = costElasticity(chain, new Float64Array(n), new Float64Array(n * n).fill(5));
      expect(Math.abs(total(cost) - 1)).toBeLessThanOrEqual(1e-12 * (1 + total(cost.map(Math.abs))));
    }), seeded);
  });

  test("agree with finite differences of the same question", () => {
    const h = 1e-4; // central difference of the logarithm: error h²
    fc.assert(fc.property(chainArbitrary(8), fc.nat(), (chain, bits) => {
      const n = chain.size;
      const up = maskFrom(n, bits | 1);
      const start = at(n, bits % n);
      const costs = Float64Array.from({ length: n }, (_, i) => 1 + i);
      const jumpCosts = Float64Array.from({ length: n * n }, (_, k) => k % 5);
      const questions: [value: (g: Generator) => number, elasticity: (g: Generator) => Float64Array][] = [
        [(g) => availability(g, up, start), (g) => shareElasticity(g, up, start)],
        [(g) => costRate(g, costs, jumpCosts, start), (g) => costElasticity(g, costs, jumpCosts, start)],
      ];
      const targets = absorbingStates(chain).some((a) => a === 1) ? absorbingStates(chain) : maskFrom(n, 1);
      if (!targets[bits % n] && everReached(chain, targets)[bits % n] === 1)
        questions.push([(g) => meanAbsorption(g, targets)[bits % n], (g) => meanTimeElasticity(g, start, targets)]);
      for (const [value, elasticity] of questions) {
        if (value(chain) === 0) continue;
        const found = elasticity(chain);
        for (const [i, j] of chain.arrows()) {
          const slope = (Math.log(value(changed(chain, i, j, Math.exp(h)))) - Math.log(value(changed(chain, i, j, Math.exp(-h))))) / (2 * h);
          expect(Math.abs(found[i * n + j] - slope)).toBeLessThanOrEqual(2e-8);
        }
      }
    }), seeded);
  });

  test("the rate found for a goal brings the share to it", () => {
    fc.assert(fc.property(irreducibleArbitrary(8), fc.nat(), fc.double({ min: 0.01, max: 0.99, noNaN: true }), (chain, bits, between) => {
      const up = maskFrom(chain.size, bits | 1).map((u, i) => (i === chain.size - 1 ? 0 : u));
      const [from, to] = [...chain.arrows()][bits % chain.arrowCount];
      const scale = chain.rateOf(from, to);
      const low = availability(changed(chain, from, to, 0.1), up);
      const high = availability(changed(chain, from, to, 10), up);
      const goal = low + between * (high - low);
      if (Math.abs(high - low) < 1e-6 * Math.max(goal, 1 - goal) || chain.rateOf(from, to) < 1e-9 * chain.largestExit()) return;
      const rate = rateForGoal(chain, from, to, up, goal);
      close(availability(changed(chain, from, to, rate / scale), up), goal, 1e-12);
    }), seeded);
  });
});

describe("other questions", () => {
  test("quasi-stationary shares are a left eigenvector for the decay rate", () => {
    fc.assert(fc.property(irreducibleArbitrary(12), fc.nat(), (chain, pick) => {
      const n = chain.size;
      const targets = Uint8Array.from({ length: n }, (_, i) => (i === pick % n ? 1 : 0));
      let found;
      try {
        found = quasiStationary(chain, targets);
      } catch (problem) {
        expect((problem as { code: string }).code).toBe("limitDependsOnStart");
        return;
      }
      const { shares, decayRate } = found;
      close(total(shares), 1, 1e-13);
      for (let j = 0; j < n; j++) {
        if (targets[j]) continue;
        let inflow = 0;
        for (let i = 0; i < n; i++) if (i !== j) inflow += shares[i] * chain.rateOf(i, j);
        // inflow + α x_j = exit_j x_j
        close(inflow + decayRate * shares[j], chain.exitRate[j] * shares[j], 1e-12);
      }
    }), seeded);
  });

  test("up and down times make up the time between failures", () => {
    fc.assert(fc.property(irreducibleArbitrary(12), fc.nat(), (chain, bits) => {
      const up = maskFrom(chain.size, bits | 1).map((u, i) => (i === chain.size - 1 ? 0 : u));
      const figures = upDown(chain, up);
      close(figures.meanUpTime + figures.meanDownTime, figures.meanTimeBetweenFailures, 1e-13);
      close(figures.availability + figures.unavailability, 1, 1e-13);
      const down = upDown(chain, up.map((u) => 1 - u));
      close(down.failureRate, figures.failureRate, 1e-12); // as often down as up again
    }), seeded);
  });

  test("rows of the next-state probabilities sum to one", () => {
    fc.assert(fc.property(chainArbitrary(12), (chain) => {
      const p = jumpChain(chain);
      for (let i = 0; i < chain.size; i++) close(total(p.subarray(i * chain.size, (i + 1) * chain.size)), 1, 1e-14);
    }), seeded);
  });

  test("two chains combined have the product of their shares, and merge back into either", () => {
    fc.assert(fc.property(irreducibleArbitrary(5), irreducibleArbitrary(5), (a, b) => {
      const both = combine({ generator: a, names: null }, { generator: b, names: null });
      const [x, y, z] = [stationaryShares(a), stationaryShares(b), stationaryShares(both.generator)];
      z.forEach((share, s) => close(share, x[Math.floor(s / b.size)] * y[s % b.size], 1e-12));
      const back = lump(both, both.names.map((name) => name.split(" + ")[0]));
      for (const [i, j, rate] of a.arrows()) close(back.generator.rateOf(i, j), rate, 1e-15);
    }), seeded);
  });

  test("stages keep the mean stay and the long-run shares", () => {
    fc.assert(fc.property(irreducibleArbitrary(6), fc.integer({ min: 1, max: 5 }), fc.nat(), (chain, count, pick) => {
      const state = pick % chain.size;
      const staged = stages({ generator: chain, names: null }, state, count);
      const shares = stationaryShares(staged.generator);
      const own = total(shares.subarray(state, state + count));
      close(own, stationaryShares(chain)[state], 1e-12);
    }), seeded);
  });
});
