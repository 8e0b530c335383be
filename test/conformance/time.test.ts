import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { Generator } from "../../src/chain/generator";
import { passage } from "../../src/chain/passage";
import { finish } from "../../src/chain/steps";
import { denseTransition } from "../../src/numerics/dense-transition";
import { jsKernel } from "../../src/numerics/js-kernel";
import type { MatrixKernel } from "../../src/numerics/matrix-kernel";
import type { Method } from "../../src/numerics/method-choice";
import { passageQuantiles, type Goal } from "../../src/numerics/passage-quantile";
import { denseOf, occupanciesAt, rowsAt, valuesAt } from "../../src/numerics/rows";
import { TransitionDerivative } from "../../src/numerics/transition-derivative";
import { battery, generatorOf, maskOf, startOf, Worst } from "../reference/battery";
import { seeded } from "../support/chains";
import { kernels } from "../unit/numerics/kernels";

/**
 * One suite for every way of answering the same question about time: jump by jump or through matrices, with the plain or
 * the WebAssembly kernel, from arrows in compressed rows (the walks) or from a full table (the matrices).
 */
interface Way {
  readonly name: string;
  readonly method: Method;
  readonly kernel: MatrixKernel;
}

const ways: readonly Way[] = [
  { name: "row", method: "row", kernel: jsKernel },
  ...kernels.map((kernel) => ({ name: `matrix, ${kernel.name}`, method: "matrix" as const, kernel })),
];

/** Beyond this many jumps a walk adds up too many roundings to be a measure for the others. */
const MOST_JUMPS = 400;
const FLOOR = 1e-280;

interface Question {
  readonly chain: Generator;
  readonly start: Float64Array;
  readonly times: readonly number[];
}

/** Chains of any structure (also reducible, with absorbing states), rates from 1e-6 to 1e3, and times in any order. */
const questions: fc.Arbitrary<Question> = fc
  .integer({ min: 1, max: 24 })
  .chain((n) =>
    fc.record({
      n: fc.constant(n),
      arrows: fc.uniqueArray(
        fc.tuple(fc.nat(n - 1), fc.nat(n - 1), fc.double({ min: -6, max: 3, noNaN: true }).map((e) => 10 ** e)),
        { selector: ([i, j]) => i * n + j, maxLength: 4 * n },
      ),
      weights: fc.array(fc.nat(3), { minLength: n, maxLength: n }),
      jumps: fc.array(fc.double({ min: -6, max: Math.log10(MOST_JUMPS), noNaN: true }).map((e) => 10 ** e), { minLength: 1, maxLength: 4 }),
    }),
  )
  .map(({ n, arrows, weights, jumps }) => {
    const chain = Generator.fromArrows(n, arrows.filter(([i, j]) => i !== j));
    const total = weights.reduce((a, b) => a + b, 0);
    const start = Float64Array.from(weights, (w, i) => (total > 0 ? w / total : i === 0 ? 1 : 0));
    const largest = chain.largestExit() || 1;
    return { chain, start, times: [...jumps.map((x) => x / largest), 0] };
  });

/** Notes the disagreement of two answers in units of 1 + |ln p|; both below the floor count as equal. */
function compare(worst: Worst, one: ArrayLike<number>, other: ArrayLike<number>, at: string): void {
  expect(one.length).toBe(other.length);
  for (let k = 0; k < one.length; k++) {
    if (one[k] < FLOOR && other[k] < FLOOR) continue;
    worst.note(one[k], other[k], at, 1 + Math.abs(Math.log(other[k])));
  }
}

function onEach(bound: number, measured: string, ask: (question: Question, way: Way) => Float64Array[]): void {
  const worst = new Worst();
  const check = (question: Question, at: string): void => {
    const [first, ...others] = ways.map((way) => ask(question, way));
    others.forEach((answers, w) => answers.forEach((answer, k) => compare(worst, answer, first[k], `${at}, ${ways[w + 1].name}`)));
  };
  fc.assert(fc.property(questions, (question) => check(question, "random")), seeded);
  for (const c of battery) {
    const chain = generatorOf(c);
    if (chain.largestExit() * c.t > MOST_JUMPS) continue;
    check({ chain, start: startOf(c), times: [c.t, c.t / 3, c.t / 1000] }, c.id);
  }
  console.log(`${measured}: ${worst}`);
  expect(worst.compared).toBeGreaterThan(2000);
  expect(worst.error).toBeLessThan(bound);
}

describe("every method gives the same answer", () => {
  test("distributions at several times", () => {
    onEach(3e-15, "distributions", ({ chain, start, times }, { method, kernel }) => // measured 8e-16
      finish(rowsAt(chain, start, times, { method, kernel })));
  });

  test("linear values at several times", () => {
    onEach(5e-15, "values", ({ chain, start, times }, { method, kernel }) => // measured 1.3e-15
      finish(valuesAt(chain, start, times, [new Float64Array(chain.size).fill(1), Float64Array.from(start.keys())], { method, kernel })));
  });

  test("occupancies over several horizons", () => {
    onEach(5e-15, "occupancies", ({ chain, start, times }, { method, kernel }) => // measured 1.1e-15
      finish(occupanciesAt(chain, start, times, { method, kernel })));
  });

  test("the whole matrix and its rows one by one", () => {
    onEach(3e-15, "matrix against rows", ({ chain, times }, { method, kernel }) => { // measured 9e-16
      const n = chain.size;
      if (method === "matrix") return [finish(denseTransition(denseOf(chain), times[0], kernel))];
      const matrix = new Float64Array(n * n);
      for (let i = 0; i < n; i++) {
        const unit = new Float64Array(n);
        unit[i] = 1;
        matrix.set(finish(rowsAt(chain, unit, [times[0]], { method }))[0], i * n);
      }
      return [matrix];
    });
  });

  test("times of first passages", () => {
    const worst = new Worst();
    for (const c of battery) {
      const targets = maskOf(c.n, c.target);
      const { generator, start, met, rateIn } = passage(generatorOf(c), startOf(c), targets);
      if (c.expect.hit_prob.some((p: string) => Number(p) !== 1)) continue;
      const values = { met: new Float64Array(met + 1), yet: new Float64Array(met + 1).fill(1), flow: rateIn };
      values.met[met] = 1;
      values.yet[met] = 0;
      const largest = generator.largestExit();
      const goals: Goal[] = [{ value: "met", level: 1e-6 }, { value: "met", level: 0.5 }, { value: "yet", level: 1e-3 }];
      const wanted = goals.filter((_, g) => Number(c.expect.hit_quantiles[Math.min(g, 2)]) * largest < 1000);
      if (start[met] > 0 || wanted.length === 0) continue;
      const [first, ...others] = ways.map(({ method, kernel }) => finish(passageQuantiles(generator, start, values, wanted, { method, kernel }))!);
      others.forEach((times, w) => times.forEach((time, g) => worst.note(time, first[g], `${c.id}, ${ways[w + 1].name}`)));
    }
    console.log(`passage times: ${worst}`);
    expect(worst.compared).toBeGreaterThan(100);
    expect(worst.error).toBeLessThan(5e-14); // measured 2e-14
  });

  test("derivatives of the matrix, with either kernel", () => {
    const worst = new Worst();
    for (const c of battery) {
      const [from, to] = c.deriv;
      if (from === to || c.t === 0) continue;
      const chain = generatorOf(c);
      const [first, other] = kernels.map((kernel) => {
        const derivative = finish(TransitionDerivative.open(denseOf(chain), c.t, kernel));
        const d = finish(derivative.along(from, to)).slice();
        const p = derivative.transition;
        derivative.close();
        return { d, p };
      });
      first.d.forEach((d, k) => {
        const p = first.p[k];
        if (p < FLOOR) return;
        const e = (chain.rateOf(from, to) * d) / p;
        const f = (chain.rateOf(from, to) * other.d[k]) / other.p[k];
        worst.absolute(f, e, c.id, (1 + Math.abs(Math.log(p))) * (1 + Math.abs(e)));
      });
    }
    console.log(`derivatives: ${worst}`);
    expect(worst.error).toBeLessThan(1e-15); // measured 1.4e-16
  });
});
