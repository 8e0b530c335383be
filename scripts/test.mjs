/**
 * `npm test`: types, lint, build, then every test; ends with "N passed, N failed" alone on a line.
 * Each of the first three counts as one test when it fails, so that a failure is never hidden in the sum.
 */
import { spawnSync } from "node:child_process";
import { mkdirSync, readFileSync, rmSync } from "node:fs";
import path from "node:path";
import { browser } from "./browser.mjs";
import { CACHE, ROOT } from "./paths.mjs";

const bin = (/** @type {string} */ name) => path.join(ROOT, "node_modules", name);
const node = (/** @type {string[]} */ args) => spawnSync(process.execPath, args, { cwd: ROOT, stdio: "inherit" }).status === 0;

let failed = 0;
const step = (/** @type {string} */ title, /** @type {() => boolean} */ run) => {
  const started = performance.now();
  console.log(`\n${title}`);
  const passed = run();
  console.log(`${title}: ${passed ? "in order" : "FAILED"} (${((performance.now() - started) / 1000).toFixed(1)} s)`);
  if (!passed) failed++;
};

step("Types", () => node([bin("typescript/bin/tsc"), "-p", "."]));
step("Lint", () => node([bin("eslint/bin/eslint.js"), ".", "--cache", "--cache-location", path.join(CACHE, "eslint/")]));
step("Build", () => node([path.join(ROOT, "scripts/build.mjs")]));
step("Browser", () => {
  try {
    console.log(browser());
    return true;
  } catch (error) {
    console.error(error instanceof Error ? error.message : error);
    return false;
  }
});

mkdirSync(CACHE, { recursive: true });
const report = path.join(CACHE, "test-report.json");
rmSync(report, { force: true });
const ended = node([bin("vitest/vitest.mjs"), "run", "--reporter=default", "--reporter=json", `--outputFile.json=${report}`]);
const { passed, failed: testsFailed } = countTests(report, ended);
failed += testsFailed;
console.log(`\n${passed} passed, ${failed} failed`);
process.exitCode = failed > 0 || passed === 0 ? 1 : 0;

/**
 * @param {string} file the runner's report
 * @param {boolean} ended whether the runner ended well; a runner that fails without a failed test is one failure
 */
function countTests(file, ended) {
  let passed = 0;
  let failed = 0;
  try {
    for (const suite of JSON.parse(readFileSync(file, "utf8")).testResults) {
      const before = failed;
      for (const test of suite.assertionResults) {
        if (test.status === "passed") passed++;
        else if (test.status === "failed") failed++;
      }
      if (suite.status === "failed" && failed === before) failed++;
    }
  } catch {
    console.error("The test runner left no report.");
  }
  if (!ended && failed === 0) failed = 1;
  return { passed, failed };
}
