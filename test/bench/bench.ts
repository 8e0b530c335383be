import { execSync } from "node:child_process";
import { writeFileSync } from "node:fs";
import { cpus, loadavg } from "node:os";
import path from "node:path";
import { registered } from "./host";
import "../../src/functions/entry";
import { all, create } from "mathjs";
import { Matrix } from "ml-matrix";
import { Generator, type Arrow } from "../../src/chain/generator";
import { distributions } from "../../src/chain/distribution";
import { stationaryShares } from "../../src/chain/stationary";
import { transitionMatrix } from "../../src/chain/transition";
import { wasmKernel } from "../../src/numerics/wasm-kernel";
import { padeExponential } from "./pade";
import { ScipyRival } from "./scipy-rival";
import { compete, local, ratio, shown, table, type Contestant, type Timing } from "./timing";

declare const BENCH_FOLDER: string;

const quick = process.argv.includes("--quick");
const math = create(all);
const report: string[] = [];
const say = (text: string): void => {
  console.log(text);
  report.push(text);
};

/** Park & Miller 1988 with the multiplier of 1993: the same chains in every run. */
function repeatable(seed: number): () => number {
  let state = seed;
  return () => (state = (state * 48271) % 2147483647) / 2147483647;
}

/** A full table: rates from 0.01 to 1, uniform in their exponents. */
function fullChain(n: number): Generator {
  const next = repeatable(n);
  return Generator.fromDense(n, Float64Array.from({ length: n * n }, () => 10 ** (-2 * next())));
}

/** Q · time, row-major. */
function scaled(chain: Generator, time: number): Float64Array {
  const n = chain.size;
  return chain.dense().map((rate, k) => (k % (n + 1) === 0 ? -chain.exitRate[k / (n + 1)] : rate) * time);
}

/** Measures one rival only where its first call is over within the limit, in seconds. */
function within(limit: number, name: string, work: () => unknown): Contestant | null {
  const begun = performance.now();
  work();
  return performance.now() - begun > limit * 1e3 ? null : local(name, work);
}

async function transitions(scipy: ScipyRival | null): Promise<void> {
  const sizes = quick ? [3, 10, 50, 100] : [3, 5, 10, 20, 50, 100, 200, 400];
  for (const jumps of [10, 1e6]) {
    const rows: string[][] = [];
    let slowMath = false;
    for (const n of sizes) {
      const chain = fullChain(n);
      const time = jumps / chain.largestExit();
      const a = scaled(chain, time);
      const contestants: Contestant[] = [local("ours", () => transitionMatrix(chain, time))];
      const dense = new Matrix(Array.from({ length: n }, (_, i) => Array.from(a.subarray(i * n, (i + 1) * n))));
      const pade = within(20, "Padé", () => padeExponential(dense));
      if (pade) contestants.push(pade);
      const mathMatrix = math.matrix(dense.to2DArray());
      const mathjs = slowMath ? null : within(3, "mathjs", () => math.expm(mathMatrix));
      if (mathjs) contestants.push(mathjs);
      else slowMath = true;
      if (scipy) contestants.push(scipy.dense("expm", n, a));
      const times = await compete(contestants);
      const of = (name: string): Timing | undefined => times[contestants.findIndex((c) => c.name === name)];
      const ours = times[0];
      rows.push([
        String(n), shown(ours), ...["SciPy", "Padé", "mathjs"].flatMap((name) => [shown(of(name)), ratio(of(name), ours)]),
      ]);
      console.log(rows[rows.length - 1].join("  "));
    }
    say(`\n### P(t), full table, Λt = ${jumps.toLocaleString("en")}\n`);
    say(table(["n", "Stayrate", "SciPy expm", "ratio", "Padé on ml-matrix", "ratio", "mathjs expm", "ratio"], rows));
  }
}

async function shares(scipy: ScipyRival | null): Promise<void> {
  const rows: string[][] = [];
  for (const n of quick ? [3, 50] : [3, 10, 50, 100, 400]) {
    const chain = fullChain(n);
    const contestants = [local("ours", () => stationaryShares(chain))];
    if (scipy) contestants.push(scipy.dense("solve", n, scaled(chain, 1)));
    const [ours, other] = await compete(contestants);
    rows.push([String(n), shown(ours), shown(other), ratio(other, ours)]);
  }
  say("\n### Long-run shares: elimination against NumPy solve (which has no entrywise accuracy)\n");
  say(table(["n", "Stayrate", "NumPy solve", "ratio"], rows));
}

async function sparse(scipy: ScipyRival | null): Promise<void> {
  const rows: string[][] = [];
  for (const n of quick ? [10_000] : [10_000, 100_000]) {
    for (const [where, jumps] of [["in the middle", 10], ["in the middle", 1000]] as const) {
      const arrows: Arrow[] = [];
      for (let i = 0; i + 1 < n; i++) arrows.push([i, i + 1, 1], [i + 1, i, 1.2]);
      const chain = Generator.fromArrows(n, arrows);
      const time = jumps / chain.largestExit();
      const start = new Float64Array(n);
      const at = n / 2;
      start[at] = 1;
      const contestants = [local("ours", () => distributions(chain, start, [time]))];
      if (scipy) {
        const all: Arrow[] = [...arrows, ...Array.from(chain.exitRate, (exit, i): Arrow => [i, i, -exit])];
        contestants.push(scipy.multiply(n, Int32Array.from(all, (x) => x[0]), Int32Array.from(all, (x) => x[1]), Float64Array.from(all, (x) => x[2]), at, time));
      }
      const [ours, other] = await compete(contestants, 9);
      rows.push([n.toLocaleString("en"), where, String(jumps), shown(ours), shown(other), ratio(other, ours)]);
    }
    const spread = Generator.fromArrows(n, queueNet(n));
    const start = new Float64Array(n).fill(1 / n);
    const time = 10 / spread.largestExit();
    const contestants = [local("ours", () => distributions(spread, start, [time]))];
    const [ours] = await compete(contestants, 9);
    rows.push([n.toLocaleString("en"), "everywhere", "10", shown(ours), "–", "–"]);
  }
  say("\n### Sparse: the distribution after a time, a line of queues, from one state\n");
  say(table(["states", "start", "Λt", "Stayrate", "SciPy expm_multiply", "ratio"], rows));
}

function queueNet(n: number): Arrow[] {
  const arrows: Arrow[] = [];
  for (let i = 0; i + 1 < n; i++) arrows.push([i, i + 1, 1], [i + 1, i, 1.2]);
  return arrows;
}

async function cells(): Promise<void> {
  const n = 20;
  const chain = fullChain(n);
  const time = 10 / chain.largestExit();
  const transition = registered.get("TRANSITION")!;
  const survivalOf = registered.get("SURVIVAL")!;
  let call = 0;
  // Each call sees a table of its own, as a recalculation after a change does: nothing is answered from the cache.
  const fresh = (): number[][] => {
    const rates = Array.from({ length: n }, (_, i) => Array.from({ length: n }, (__, j) => (i === j ? 0 : chain.rateOf(i, j))));
    rates[0][1] *= 1 + 1e-9 * ++call;
    return rates;
  };
  const [kernel, whole, given] = await compete([
    local("kernel", () => transitionMatrix(chain, time)),
    local("cell", () => transition(fresh(), time, null, {})),
    local("range", fresh),
  ]);
  const through: Timing = { median: whole.median - given.median, best: whole.best - given.best };
  say("\n### Through a cell\n");
  say(table(["20 × 20 table", "time", "of the kernel"], [
    ["the kernel alone", shown(kernel), "1×"],
    ["TRANSITION from a range never seen before: digest, read, compute, seal", shown(through), ratio(through, kernel)],
  ]));

  const rates = fresh();
  const formulas = 2000;
  const runs: number[] = [];
  for (let round = 0; round < 5; round++) {
    rates[0][1] *= 1.001;
    const copies = Array.from({ length: formulas }, () => rates.map((row) => [...row]));
    const begun = performance.now();
    for (let k = 0; k < formulas; k++) survivalOf(copies[k], 1, [[n]], 0.001 * (k + 1), {});
    runs.push(performance.now() - begun);
  }
  const sorted = [...runs].sort((a, b) => a - b);
  const memory = process.memoryUsage();
  say(`\n2,000 formulas (SURVIVAL at different times) on one 20 × 20 table, each handed its own copy of the range: ${(sorted[2] / 1e3).toFixed(3)} s (median of 5 recalculations after a change).`);
  say(`Memory at the end: ${Math.round(memory.heapUsed / 2 ** 20)} MB of JavaScript heap, ${Math.round(memory.arrayBuffers / 2 ** 20)} MB of numbers beside it.`);
}

const scipy = await ScipyRival.start();
const commit = execSync("git rev-parse --short HEAD", { cwd: BENCH_FOLDER }).toString().trim();
say(`# Benchmark results\n`);
say(`\`npm run bench -- --save\` writes this file. Times are medians of rounds in which the rivals take turns; ratios are of the best rounds, above 1 means that Stayrate is faster.\n`);
say(`- ${new Date().toISOString().slice(0, 10)}, commit ${commit}, Node ${process.versions.node}, ${cpus()[0].model.trim()}, ${cpus().length} processors`);
say(`- load average at the start ${loadavg()[0].toFixed(1)}: above the number of processors the machine did other work too, and times are longer than they need be`);
say(`- WebAssembly SIMD kernel: ${wasmKernel() ? "in use" : "not available here"}`);
say(`- ${scipy ? `${scipy.versions}, one thread` : "SciPy is not installed here (Debian: apt-get install python3-scipy); its columns are empty"}`);
await transitions(scipy);
await shares(scipy);
await sparse(scipy);
await cells();
scipy?.stop();
if (process.argv.includes("--save")) writeFileSync(path.join(BENCH_FOLDER, "results.md"), `${report.join("\n")}\n`);
