/** Builds the site into dist/. `--if-stale` builds only when a source is newer than the last build. */
import { createHash } from "node:crypto";
import { mkdirSync, readFileSync, readdirSync, rmSync, rmdirSync, statSync, writeFileSync } from "node:fs";
import path from "node:path";
import { setTimeout as pause } from "node:timers/promises";
import { pathToFileURL } from "node:url";
import webpack from "webpack";
import config from "../webpack.config.mjs";
import { licences } from "./licences.mjs";
import { CACHE, DIST, ROOT } from "./paths.mjs";

const SOURCES = ["src", "assets", "manifest.xml", "webpack.config.mjs", "package-lock.json", "scripts"];
const STAMP = path.join(CACHE, "build-stamp");
const LOCK = path.join(CACHE, "build-lock");

/** A digest of the names, sizes and times of everything the build reads. */
function sourceStamp() {
  const hash = createHash("sha256");
  const visit = (/** @type {string} */ file) => {
    const info = statSync(file, { throwIfNoEntry: false });
    if (!info) return;
    if (info.isDirectory()) for (const name of readdirSync(file).sort()) visit(path.join(file, name));
    else hash.update(`${file} ${info.size} ${info.mtimeMs}\n`);
  };
  for (const name of SOURCES) visit(path.join(ROOT, name));
  return hash.digest("hex");
}

function isFresh(/** @type {string} */ stamp) {
  try {
    return readFileSync(STAMP, "utf8") === stamp && statSync(DIST).isDirectory();
  } catch {
    return false;
  }
}

/** @returns {Promise<void>} */
export async function build() {
  const stamp = sourceStamp();
  rmSync(STAMP, { force: true });
  rmSync(DIST, { recursive: true, force: true });
  const compiler = webpack(/** @type {import("webpack").Configuration[]} */ (config));
  /** @type {import("webpack").MultiStats} */
  const stats = await new Promise((resolve, reject) => compiler.run((error, result) => (error || !result ? reject(error) : resolve(result))));
  await new Promise((resolve) => compiler.close(resolve));
  // A warning too: a module that is missing inside a try is only that.
  if (stats.hasErrors() || stats.hasWarnings()) throw new Error(stats.toString({ preset: "errors-warnings", colors: false }));
  writeFileSync(path.join(DIST, "licences.txt"), licences());
  mkdirSync(CACHE, { recursive: true });
  writeFileSync(STAMP, stamp);
}

/**
 * Builds unless the site is up to date. Several processes may ask at once: the first builds, the others wait.
 * @returns {Promise<boolean>} whether this call built
 */
export async function buildIfStale() {
  mkdirSync(CACHE, { recursive: true });
  for (;;) {
    if (isFresh(sourceStamp())) return false;
    try {
      mkdirSync(LOCK);
      break;
    } catch {
      // A lock older than any build is left over from a process that was ended.
      const made = statSync(LOCK, { throwIfNoEntry: false })?.mtimeMs ?? 0;
      if (made && Date.now() - made > 180_000) rmdirSync(LOCK);
      await pause(200);
    }
  }
  try {
    if (isFresh(sourceStamp())) return false;
    await build();
    return true;
  } finally {
    rmdirSync(LOCK);
  }
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  const started = performance.now();
  try {
    if (process.argv.includes("--if-stale")) await buildIfStale();
    else await build();
    console.log(`Built dist/ in ${((performance.now() - started) / 1000).toFixed(1)} s.`);
  } catch (error) {
    console.error(error instanceof Error ? error.message : error);
    process.exitCode = 1;
  }
}
