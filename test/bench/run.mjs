// npm run bench: bundles bench.ts and runs it. Options: --quick (fewer sizes), --save (keeps the tables in results.md).
import { fileURLToPath, pathToFileURL } from "node:url";
import { build } from "esbuild";

const at = (/** @type {string} */ path) => fileURLToPath(new URL(path, import.meta.url));
const outfile = at("../../.cache/bench/bench.mjs");

await build({
  entryPoints: [at("bench.ts")],
  outfile,
  bundle: true,
  platform: "node",
  format: "esm",
  target: "node20",
  external: ["mathjs", "ml-matrix", "jstat"],
  define: { BENCH_FOLDER: JSON.stringify(at(".")) },
  logLevel: "warning",
});
await import(pathToFileURL(outfile).href);
