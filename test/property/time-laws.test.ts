import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { distributions } from "../../src/chain/distribution";
import { density, reached, survival } from "../../src/chain/first-passage";
import { type Generator, type Arrow } from "../../src/chain/generator";
import { occupancies } from "../../src/chain/occupancy";
import { percentiles } from "../../src/chain/percentile";
import { stationaryShares } from "../../src/chain/stationary";
import { transitionMatrix } from "../../src/chain/transition";
import { shareElasticityAt } from "../../src/chain/transition-derivative";
import { relativeError } from "../reference/battery";
import { chainArbitrary, irreducibleArbitrary, renamed, seeded } from "../support/chains";

const FLOOR = 1e-280;

/** Up to how many jumps, Λt, a time covers. */
const jumpsArbitrary = fc.double({ min: -6, max: 9, noNaN: true }).map((e) => 10 ** e);

const timeFor = (chain: Generator, jumps: number): number => jumps / (chain.largestExit() || 1);

const unit = (n: number, at: number): Float64Array => Float64Array.from({ length: n }, (_, i) => (i === at % n ? 1 : 0));

/** Disagreement in units of 1 + |ln p|. */
function disagreement(one: ArrayLike<number>, other: ArrayLike<number>): number {
  let worst = 0;
  for (let k = 0; k < one.length; k++)
    if (one[k] >= FLOOR || other[k] >= FLOOR)
      worst = Math.max(worst, relativeError(one[k], other[k]) / (1 + Math.abs(Math.log(other[k]))));
  return worst;
}

function product(a: Float64Array, b: Float64Array, n: number): Float64Array {
  return a.map((_, k) => {
    let sum = 0;
    for (let m = 0; m < n; m++) sum += a[Math.floor(k / n) * n + m] * b[m * n + (k % n)];
    return sum;
  });
}

describe("laws of transition probabilities", () => {
  test("entries are probabilities, rows sum to 1, zeros are exactly the states that cannot be reached", () => {
    fc.assert(
      fc.property(chainArbitrary(20), jumpsArbitrary, (chain, jumps) => {
        const n = chain.size;
        const p = transitionMatrix(chain, timeFor(chain, jumps));
        const reachable = closure(chain);
        for (let i = 0; i < n; i++) {
          const row = p.subarray(i * n, i * n + n);
          expect(Math.abs(row.reduce((a, b) => a + b, 0) - 1)).toBeLessThan(1e-15 * Math.max(2, Math.sqrt(n)));
          for (let j = 0; j < n; j++) {
            expect(row[j] >= 0 && row[j] <= 1).toBe(true);
            if (!reachable[i * n + j]) expect(row[j]).toBe(0);
          }
        }
      }),
      seeded,
    );
  });

  test("P(s + t) = P(s) P(t), entry by entry", () => {
    let worst = 0;
    fc.assert(
      fc.property(chainArbitrary(16), jumpsArbitrary, fc.double({ min: 0.01, max: 0.99, noNaN: true }), (chain, jumps, share) => {
        const t = timeFor(chain, jumps);
        const s = share * t;
        const split = product(transitionMatrix(chain, s), transitionMatrix(chain, t - s), chain.size);
        worst = Math.max(worst, disagreement(split, transitionMatrix(chain, t)));
      }),
      seeded,
    );
    console.log(`P(s + t) against P(s) P(t): ${worst.toExponential(1)}`);
    expect(worst).toBeLessThan(2e-15); // measured 3.6e-16
  });

  test("new numbers for the states move the entries and nothing else; another time unit changes nothing", () => {
    let worst = 0;
    fc.assert(
      fc.property(chainArbitrary(12), jumpsArbitrary, fc.nat(11), fc.double({ min: -4, max: 4, noNaN: true }), (chain, jumps, shift, e) => {
        const n = chain.size;
        const t = timeFor(chain, jumps);
        const order = Array.from({ length: n }, (_, i) => (i + shift) % n).reverse();
        const p = transitionMatrix(chain, t);
        const q = transitionMatrix(renamed(chain, order, 10 ** e), t / 10 ** e);
        worst = Math.max(worst, disagreement(p.map((_, k) => q[order[Math.floor(k / n)] * n + order[k % n]]), p));
      }),
      seeded,
    );
    console.log(`renamed and rescaled: ${worst.toExponential(1)}`);
    expect(worst).toBeLessThan(1e-15); // measured 2.2e-16
  });

  test("the long-run shares stay as they are, and are what every start tends to", () => {
    let worst = 0;
    fc.assert(
      fc.property(irreducibleArbitrary(12), jumpsArbitrary, (chain, jumps) => {
        const shares = stationaryShares(chain);
        const [later] = distributions(chain, shares, [timeFor(chain, jumps)]);
        worst = Math.max(worst, disagreement(later, shares));
      }),
      seeded,
    );
    console.log(`long-run shares after a time: ${worst.toExponential(1)}`);
    expect(worst).toBeLessThan(2e-15); // measured 3.7e-16
  });
});

describe("laws of first passages and occupancies", () => {
  const passages = fc.record({ chain: chainArbitrary(12), from: fc.nat(11), to: fc.nat(11), jumps: fc.array(jumpsArbitrary, { minLength: 3, maxLength: 6 }) });

  test("survival never rises, reaching never falls, together they make 1, the density is their slope", () => {
    fc.assert(
      fc.property(passages, ({ chain, from, to, jumps }) => {
        const n = chain.size;
        const target = Uint8Array.from(unit(n, to));
        const times = jumps.map((x) => timeFor(chain, x)).sort((a, b) => a - b);
        const s = survival(chain, unit(n, from), target, times);
        const f = reached(chain, unit(n, from), target, times);
        const d = density(chain, unit(n, from), target, times);
        times.forEach((_, m) => {
          expect(Math.abs(s[m] + f[m] - 1)).toBeLessThan(1e-14);
          expect(d[m]).toBeGreaterThanOrEqual(0);
          if (m === 0) return;
          expect(s[m]).toBeLessThanOrEqual(s[m - 1] * (1 + 1e-13));
          expect(f[m]).toBeGreaterThanOrEqual(f[m - 1] * (1 - 1e-13));
        });
      }),
      seeded,
    );
  });

  test("a percentile is where that fraction has been met", () => {
    fc.assert(
      fc.property(irreducibleArbitrary(10), fc.nat(9), fc.nat(9), fc.double({ min: 0.001, max: 0.999, noNaN: true }), (chain, from, to, fraction) => {
        const n = chain.size;
        if (from % n === to % n) return;
        const [start, target] = [unit(n, from), Uint8Array.from(unit(n, to))];
        const { times, everReached } = percentiles(chain, start, target, [fraction]);
        expect(everReached).toBe(1);
        // Long passages need Λt beyond what a time may be asked for; the percentile is computed all the same.
        if (times[0] * chain.largestExit() > 1e18) return;
        expect(Math.abs(reached(chain, start, target, times)[0] / fraction - 1)).toBeLessThan(1e-11);
      }),
      seeded,
    );
  });

  test("occupancies sum to the horizon and grow by what is spent later", () => {
    fc.assert(
      fc.property(chainArbitrary(12), fc.nat(11), jumpsArbitrary, fc.double({ min: 0.01, max: 0.99, noNaN: true }), (chain, from, jumps, share) => {
        const n = chain.size;
        const t = timeFor(chain, jumps);
        const start = unit(n, from);
        const [whole, first] = occupancies(chain, start, [t, share * t]);
        expect(Math.abs(whole.reduce((a, b) => a + b, 0) / t - 1)).toBeLessThan(1e-13);
        const [then] = occupancies(chain, distributions(chain, start, [share * t])[0], [t - share * t]);
        whole.forEach((spent, j) => {
          if (spent < FLOOR) return;
          expect(Math.abs((first[j] + then[j]) / spent - 1)).toBeLessThan(1e-13 * (1 + Math.abs(Math.log(spent / t))));
        });
      }),
      seeded,
    );
  });

  test("all elasticities at a time together are the elasticity with respect to time", () => {
    let worst = 0;
    fc.assert(
      fc.property(chainArbitrary(7), fc.nat(6), fc.nat(6), fc.double({ min: -3, max: 2, noNaN: true }), (chain, from, to, e) => {
        const n = chain.size;
        const t = timeFor(chain, 10 ** e);
        const [row] = distributions(chain, unit(n, from), [t]);
        if (row[to % n] < FLOOR) return;
        const elasticities = shareElasticityAt(chain, Uint8Array.from(unit(n, to)), unit(n, from), t);
        let slope = -row[to % n] * chain.exitRate[to % n];
        for (const [i, j, rate] of chain.arrows()) if (j === to % n) slope += row[i] * rate;
        const size = elasticities.reduce((sum, x) => sum + Math.abs(x), 1);
        const flows = (t * chain.exitRate[to % n]) + Math.abs((t * slope) / row[to % n]);
        worst = Math.max(worst, Math.abs(elasticities.reduce((a, b) => a + b, 0) - (t * slope) / row[to % n]) / (size + flows) / (1 + Math.abs(Math.log(row[to % n]))));
      }),
      seeded,
    );
    console.log(`sum of elasticities: ${worst.toExponential(1)}`);
    expect(worst).toBeLessThan(5e-16); // measured 7.2e-17
  });
});

/** For each pair, whether the second can be reached from the first. */
function closure(chain: Generator): Uint8Array {
  const n = chain.size;
  const reachable = new Uint8Array(n * n);
  const arrows: Arrow[] = [...chain.arrows()];
  for (let i = 0; i < n; i++) reachable[i * n + i] = 1;
  for (let round = 0; round < n; round++)
    for (let i = 0; i < n; i++) for (const [from, to] of arrows) if (reachable[i * n + from]) reachable[i * n + to] = 1;
  return reachable;
}
