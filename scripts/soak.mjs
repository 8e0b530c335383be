/** `npm run soak -- [--minutes N] [--seed N]`: edits practice workbooks at random for a while (test/soak/editing.ts says what is checked). */
import { readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { pathToFileURL } from "node:url";
import { build } from "esbuild";
import { buildIfStale } from "./build.mjs";
import { CACHE, DIST, ROOT } from "./paths.mjs";

const option = (/** @type {string} */ name, /** @type {number} */ otherwise) => {
  const at = process.argv.indexOf(name);
  const value = at > 0 ? Number(process.argv[at + 1]) : otherwise;
  if (!Number.isFinite(value) || value < 0) throw new Error(`${name} wants a number of 0 or more.`);
  return value;
};

try {
  const minutes = option("--minutes", 5);
  const seed = option("--seed", Date.now() % 1_000_000);
  await buildIfStale();
  const outfile = path.join(CACHE, "soak.mjs");
  await build({ entryPoints: [path.join(ROOT, "test/soak/editing.ts")], bundle: true, format: "esm", platform: "node", target: "node20", outfile, logLevel: "error" });
  const { soak } = await import(pathToFileURL(outfile).href);
  console.log(`Seed ${seed}, ${minutes} minutes.`);
  let told = Date.now();
  const started = Date.now();
  const report = await soak({
    seed,
    milliseconds: minutes * 60_000,
    script: readFileSync(path.join(DIST, "functions.js"), "utf8"),
    metadata: JSON.parse(readFileSync(path.join(DIST, "functions.json"), "utf8")),
    onRound(/** @type {number} */ rounds, /** @type {number} */ steps) {
      if (Date.now() - told < 15_000) return;
      told = Date.now();
      console.log(`${rounds} workbooks, ${steps} steps, ${(process.memoryUsage().heapUsed / 2 ** 20).toFixed(0)} MB`);
    },
  });
  const seconds = (Date.now() - started) / 1000;
  writeFileSync(path.join(CACHE, "soak.json"), JSON.stringify({ seed, seconds, ...report }));
  console.log(`${report.rounds} workbooks, ${report.steps} steps (${report.refused} refused in words, ${report.undone} undone or redone), ${(report.steps / seconds).toFixed(0)} a second. Nothing went wrong.`);
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
}
