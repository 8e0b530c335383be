import fc from "fast-check";
import { Generator, type Arrow } from "../../src/chain/generator";

/** Property tests are repeatable: one seed, printed with any counterexample. */
export const seeded = { seed: 20261201, numRuns: 150 } as const;

/** A rate between 1e-6 and 1e6, uniform in its exponent. */
export const rateArbitrary = fc.double({ min: -6, max: 6, noNaN: true }).map((exponent) => 10 ** exponent);

/** Any chain of 1 to `largest` states, reducible or not. */
export const chainArbitrary = (largest: number): fc.Arbitrary<Generator> =>
  fc.integer({ min: 1, max: largest }).chain((n) => arrowsArbitrary(n).map((arrows) => chainOf(n, arrows)));

/** A chain of 2 to `largest` states in which every state can be reached from every other: a ring and more. */
export const irreducibleArbitrary = (largest: number): fc.Arbitrary<Generator> =>
  fc.integer({ min: 2, max: largest }).chain((n) =>
    fc.tuple(arrowsArbitrary(n), fc.array(rateArbitrary, { minLength: n, maxLength: n })).map(([arrows, ring]) =>
      chainOf(n, [...arrows, ...ring.map((rate, i): Arrow => [i, (i + 1) % n, rate])])));

function arrowsArbitrary(n: number): fc.Arbitrary<Arrow[]> {
  const state = fc.integer({ min: 0, max: n - 1 });
  return fc.array(fc.tuple(state, state, rateArbitrary), { maxLength: 4 * n });
}

function chainOf(n: number, arrows: readonly Arrow[]): Generator {
  const kept = new Map<number, Arrow>();
  for (const arrow of arrows) if (arrow[0] !== arrow[1]) kept.set(arrow[0] * n + arrow[1], arrow);
  return Generator.fromArrows(n, kept.values());
}

/** The same chain with state i called order[i] and every rate times `factor`. */
export function renamed(chain: Generator, order: readonly number[], factor = 1): Generator {
  return Generator.fromArrows(chain.size, [...chain.arrows()].map(([i, j, rate]): Arrow => [order[i], order[j], rate * factor]));
}

/** The same chain with one rate times `factor`. */
export function changed(chain: Generator, from: number, to: number, factor: number): Generator {
  return Generator.fromArrows(chain.size, [...chain.arrows()].map(([i, j, rate]): Arrow => [i, j, i === from && j === to ? rate * factor : rate]));
}

/** Two independent queues of `side` levels each, (i, j) at i · side + j. */
export function gridOfQueues(side: number, up: readonly [number, number], down: readonly [number, number]): Generator {
  const arrows: Arrow[] = [];
  for (let i = 0; i < side; i++)
    for (let j = 0; j < side; j++) {
      const here = i * side + j;
      if (i + 1 < side) arrows.push([here, here + side, up[0]], [here + side, here, down[0]]);
      if (j + 1 < side) arrows.push([here, here + 1, up[1]], [here + 1, here, down[1]]);
    }
  return Generator.fromArrows(side * side, arrows);
}

/** Customers circulating between three desks in a row: a closed tandem of `customers`, Jackson's product form. */
export function closedTandem(customers: number, rates: readonly [number, number, number]): { chain: Generator; at: (i: number, j: number) => number } {
  const number = new Map<string, number>();
  const states: [number, number][] = [];
  for (let i = 0; i <= customers; i++) for (let j = 0; i + j <= customers; j++) number.set(`${i} ${j}`, states.push([i, j]) - 1);
  const at = (i: number, j: number): number => number.get(`${i} ${j}`)!;
  const arrows: Arrow[] = [];
  for (const [i, j] of states) {
    if (i > 0) arrows.push([at(i, j), at(i - 1, j + 1), rates[0]]);
    if (j > 0) arrows.push([at(i, j), at(i, j - 1), rates[1]]);
    if (i + j < customers) arrows.push([at(i, j), at(i + 1, j), rates[2]]);
  }
  return { chain: Generator.fromArrows(states.length, arrows), at };
}
