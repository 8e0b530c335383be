/**
 * `npm run mutate -- [--in FOLDER] [--count N] [--seed N] [--least SHARE]`: changes one operator or constant at a time and asks
 * whether a test notices. Nothing on disk is changed: the test runner swaps the file's text as it loads it (vitest.config.ts).
 * Survivors are listed; each is a gap in the tests or a change that makes no difference, and a person has to say which.
 */
import { spawn } from "node:child_process";
import { mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from "node:fs";
import path from "node:path";
import { mutants } from "./mutants.mjs";
import { CACHE, ROOT } from "./paths.mjs";

/** @typedef {import("./mutants.mjs").Mutant & { file: string }} Change */

/** A change that keeps the tests busy for so long has been noticed: a loop that does not end. */
const LONGEST_MS = 300_000;

const option = (/** @type {string} */ name, /** @type {string} */ otherwise) => {
  const at = process.argv.indexOf(name);
  return at > 0 ? (process.argv[at + 1] ?? otherwise) : otherwise;
};
const folder = option("--in", "src/numerics");
const count = Number(option("--count", "20"));
const seed = Number(option("--seed", "1"));
const least = Number(option("--least", "0"));

const full = path.join(ROOT, folder);
const files = (statSync(full).isFile() ? [folder] : readdirSync(full, { recursive: true, encoding: "utf8" }).map((name) => path.join(folder, name)))
  .filter((name) => name.endsWith(".ts") && !name.endsWith("-bytes.ts"))
  .sort();
/** @type {Change[]} */
const all = files.flatMap((file) => mutants(readFileSync(path.join(ROOT, file), "utf8")).map((one) => ({ file, ...one })));

// The same seed takes the same sample: a linear congruential order (Knuth, The Art of Computer Programming, vol. 2, 3.3.4, line 26).
let state = BigInt(seed);
const random = () => Number((state = (state * 6364136223846793005n + 1442695040888963407n) % 2n ** 64n) >> 11n) / 2 ** 53;
const sample = all.map((one) => ({ one, at: random() })).sort((a, b) => a.at - b.at).slice(0, count).map(({ one }) => one);

console.log(`${all.length} changes are possible in ${files.length} files of ${folder}; trying ${sample.length}.`);
mkdirSync(CACHE, { recursive: true });
const survivors = [];
for (const [i, one] of sample.entries()) {
  const words = `${one.file}:${one.line}  ${one.from || "·"} → ${one.to || "(nothing)"}`;
  const outcome = await tryOne(one);
  console.log(`${i + 1}/${sample.length}  ${outcome.padEnd(9)} ${words}`);
  if (outcome === "SURVIVED") survivors.push(words);
}
const share = sample.length === 0 ? 1 : 1 - survivors.length / sample.length;
console.log(`\n${sample.length - survivors.length} of ${sample.length} noticed (${(100 * share).toFixed(0)} %).`);
for (const words of survivors) console.log(`  survived: ${words}`);
process.exitCode = share < least ? 1 : 0;

/**
 * Runs the tests that reach the changed file.
 * @param {Change} change
 * @returns {Promise<"noticed" | "no end" | "SURVIVED">}
 */
function tryOne({ file, start, end, to }) {
  const note = path.join(CACHE, `mutant-${process.pid}.json`);
  writeFileSync(note, JSON.stringify({ file: path.join(ROOT, file), start, end, to }));
  const args = [path.join(ROOT, "node_modules/vitest/vitest.mjs"), "related", "--run", "--project", "unit", "--bail", "1", "--silent", "--reporter=dot", path.join(ROOT, file)];
  const child = spawn(process.execPath, args, { cwd: ROOT, stdio: "ignore", env: { ...process.env, STAYRATE_MUTANT: note } });
  return new Promise((resolve) => {
    const timer = setTimeout(() => {
      child.kill("SIGKILL");
      resolve("no end");
    }, LONGEST_MS);
    child.on("exit", (code) => {
      clearTimeout(timer);
      resolve(code === 0 ? "SURVIVED" : "noticed");
    });
  });
}
