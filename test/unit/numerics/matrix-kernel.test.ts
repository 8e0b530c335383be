import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { kernelBytesText } from "../../../scripts/build-kernel.mjs";
import { Generator } from "../../../src/chain/generator";
import { finish } from "../../../src/chain/steps";
import { eliminateDense } from "../../../src/numerics/dense-elimination";
import { load, multiplySteps, repairRow, SMALLEST_NORMAL, unpadded, UNPAUSED, WORK_BETWEEN_PAUSES } from "../../../src/numerics/matrix-kernel";
import { kernels, repeatable } from "./kernels";

const SIZES = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 13, 16, 21, 50, 51];

function random(n: number, seed: number): Float64Array {
  const next = repeatable(seed);
  return Float64Array.from({ length: n * n }, () => next() * 10 ** (-8 * next()));
}

describe.each(kernels.map((k) => [k.name, k] as const))("kernel %s", (_, kernel) => {
  it("multiplies, in one go and by rows", () => {
    for (const n of SIZES) {
      const [a, b] = [random(n, n), random(n, n + 100)];
      const expected = Float64Array.from({ length: n * n }, (__, k) => {
        let sum = 0;
        for (let m = 0; m < n; m++) sum += a[Math.floor(k / n) * n + m] * b[m * n + (k % n)];
        return sum;
      });
      for (const rows of [n, 4]) {
        const block = kernel.open(n, 3);
        load(block, 0, a);
        load(block, 1, b);
        block.slots[2].fill(NaN);
        for (let first = 0; first < n; first += rows) block.multiply(2, 0, 1, first, Math.min(n, first + rows));
        const found = unpadded(block, 2);
        // All terms are positive; only their order of summation differs. Measured: 8e-16 at n = 51.
        found.forEach((value, k) => expect(Math.abs(value / expected[k] - 1)).toBeLessThan(n * 2 ** -53));
        expect(Array.from(block.slots[2]).every(Number.isFinite)).toBe(true);
        block.close();
      }
    }
  });

  it("combines any number of slots, the target among them, and a multiple of I", () => {
    for (const n of SIZES) {
      const block = kernel.open(n, 8);
      const parts = Array.from({ length: 8 }, (__, s) => random(n, 7 * n + s));
      for (let count = 1; count <= 8; count++) {
        parts.forEach((part, s) => load(block, s, part));
        const sources = Array.from({ length: count }, (__, s) => s);
        block.combine(0, 0.25, sources.map((s) => s + 1), sources);
        unpadded(block, 0).forEach((value, k) => {
          let expected = k % (n + 1) === 0 ? 0.25 : 0;
          for (const s of sources) expected += (s + 1) * parts[s][k];
          expect(Math.abs(value / expected - 1)).toBeLessThan(count * 2 ** -52);
        });
      }
      block.close();
    }
  });

  it("adds four rows to four others, from a column on and in no other place", () => {
    const factors = Float64Array.from({ length: 16 }, (_, k) => k + 1);
    for (const n of [8, 9, 12, 15, 50])
      for (const [row, pivot, from] of [[4, 0, 4], [n - 4, 0, 4], [4, 0, n - (n % 2 ? 1 : 2)]]) {
        const block = kernel.open(n, 1);
        const values = random(n, n + row);
        load(block, 0, values);
        block.addRows(0, row, pivot, from, factors);
        unpadded(block, 0).forEach((value, k) => {
          const [i, j] = [Math.floor(k / n), k % n];
          let expected = values[k];
          if (i >= row && i < row + 4 && j >= from)
            for (let c = 0; c < 4; c++) expected += factors[4 * (i - row) + c] * values[(pivot + c) * n + j];
          expect(Math.abs(value / expected - 1)).toBeLessThan(1e-15);
        });
        block.close();
      }
  });

  it("repairs rows as repairRow does, and leaves the padding zero", () => {
    for (const n of SIZES) {
      const block = kernel.open(n, 1);
      const values = random(n, 3 * n);
      for (let i = 0; i < n; i++) {
        const sum = values.subarray(i * n, i * n + n).reduce((a, b) => a + b, 0);
        for (let k = i * n; k < i * n + n; k++) values[k] /= sum * (1 + 1e-9);
        // Every third row is one that a state hardly leaves, every fifth has a number below the range.
        if (i % 3 === 0) for (let k = i * n; k < i * n + n; k++) values[k] = k === i * n + i ? 1 : values[k] * 1e-20;
        if (i % 5 === 0 && n > 2) values[i * n + ((i + 1) % n)] = SMALLEST_NORMAL / 2;
      }
      load(block, 0, values);
      block.repair(0);
      const found = unpadded(block, 0);
      for (let i = 0; i < n; i++) repairRow(values, i * n, n);
      found.forEach((value, k) => expect(value === values[k] || Math.abs(value / values[k] - 1) < n * 2 ** -52).toBe(true));
      block.slots[0].forEach((value, k) => {
        if (k % block.stride >= n || k >= n * block.stride) expect(value).toBe(0);
      });
      block.close();
    }
  });

  it("takes a large product in pieces, with a pause after the work of one, and a small one without", () => {
    const n = 400;
    const block = kernel.open(n, 3);
    let sincePause = 0;
    let most = 0;
    const { multiply } = block;
    block.multiply = (...args) => {
      sincePause += (args[4] - args[3]) * n * n;
      most = Math.max(most, sincePause);
      multiply.apply(block, args);
    };
    let pauses = 0;
    for (const progress of multiplySteps(block, 2, 0, 1, 0.25)) {
      expect(progress).toBe(0.25);
      sincePause = 0;
      pauses++;
    }
    expect(pauses).toBe(2);
    expect(most).toBeLessThanOrEqual(WORK_BETWEEN_PAUSES);
    delete (block as Partial<typeof block>).multiply;
    block.close();
    for (const [size, expected] of [[UNPAUSED, 0], [UNPAUSED + 1, 1]]) {
      const small = kernel.open(size, 3);
      expect([...multiplySteps(small, 2, 0, 1, 0)]).toHaveLength(expected);
      small.close();
    }
  });
});

describe("row repair", () => {
  it("sets the largest entry to what the others leave when it is at least one half, and divides by the sum below", () => {
    const held = Float64Array.of(0.5, 0.25, 0.25 + 1e-12);
    repairRow(held, 0, 3);
    expect(Array.from(held)).toEqual([1 - (0.25 + (0.25 + 1e-12)), 0.25, 0.25 + 1e-12]);
    const below = Float64Array.of(0.4, 0.4, 0.1);
    repairRow(below, 0, 3);
    expect(below[2]).toBe(0.1 / 0.9);
  });

  it("keeps tiny entries as they are, and only a row's own part of an array", () => {
    const row = Float64Array.of(7, 1, 1e-30, 3e-200, 7);
    repairRow(row, 1, 3);
    expect(Array.from(row)).toEqual([7, 1, 1e-30, 3e-200, 7]);
  });

  it("drops what is below the smallest normal number and keeps that number", () => {
    const row = Float64Array.of(0.9, SMALLEST_NORMAL, SMALLEST_NORMAL / 2, 0.1);
    repairRow(row, 0, 4);
    expect(row[1]).toBe(SMALLEST_NORMAL);
    expect(row[2]).toBe(0);
  });
});

describe("kernels side by side", () => {
  it("eliminate alike", () => {
    for (const n of [1, 2, 3, 4, 5, 8, 11, 50, 77]) {
      const rates = random(n, n);
      const { rowStart, toState, rate } = Generator.fromDense(n, rates);
      const system = { size: n, rowStart, toState, rate, leak: Float64Array.from({ length: n }, (_, i) => (i % 3 === 0 ? 1e-6 : 0)) };
      const w = new Float64Array(n).fill(1);
      const [one, other] = kernels.map((kernel) => finish(eliminateDense(system, kernel)));
      one.solve(w).forEach((x, i) => expect(Math.abs(x / other.solve(w)[i] - 1)).toBeLessThan(3e-15)); // measured 7e-16
    }
  });

  it("a block that is open is not handed out twice", () => {
    for (const kernel of kernels) {
      const one = kernel.open(4, 1);
      const other = kernel.open(4, 1);
      one.slots[0].fill(1);
      other.slots[0].fill(2);
      expect(one.slots[0][0]).toBe(1);
      one.close();
      one.close();
      const third = kernel.open(4, 1);
      const fourth = kernel.open(4, 1);
      third.slots[0].fill(3);
      fourth.slots[0].fill(4);
      expect([third.slots[0][0], other.slots[0][0], fourth.slots[0][0]]).toEqual([3, 2, 4]);
      for (const block of [other, third, fourth]) block.close();
    }
  });

  it("the bytes in the source are what kernel.wat builds to", async () => {
    const committed = readFileSync(new URL("../../../src/numerics/kernel-bytes.ts", import.meta.url), "utf8");
    expect(await kernelBytesText()).toBe(committed);
  });
});
