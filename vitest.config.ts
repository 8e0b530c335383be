import { readFileSync } from "node:fs";
import { type Plugin } from "vite";
import { defineConfig } from "vitest/config";

// A test may be slow on a machine that does other work as well; only one that hangs is ended.
const patience = { testTimeout: 300_000, hookTimeout: 300_000, teardownTimeout: 60_000 };

/** For `npm run mutate`: one file is loaded with a small change in it. */
function mutant(): Plugin[] {
  if (!process.env.STAYRATE_MUTANT) return [];
  const { file, start, end, to } = JSON.parse(readFileSync(process.env.STAYRATE_MUTANT, "utf8")) as { file: string; start: number; end: number; to: string };
  return [{ name: "mutant", enforce: "pre", transform: (code, id) => (id === file ? code.slice(0, start) + to + code.slice(end) : undefined) }];
}

export default defineConfig({
  test: {
    watch: false,
    projects: [
      {
        plugins: mutant(),
        test: {
          ...patience,
          name: "unit",
          include: ["test/*.test.ts", "test/{unit,property,conformance,reference}/**/*.test.ts"],
          environment: "node",
        },
      },
      {
        // Tests of the built site without a browser: they get a site that is up to date.
        test: {
          ...patience,
          name: "built",
          include: ["test/built/**/*.test.ts"],
          environment: "node",
          globalSetup: ["test/support/built.ts"],
        },
      },
      {
        // One browser at a time, so that the tests wait on the page and not on each other.
        test: {
          ...patience,
          name: "browser",
          include: ["test/browser/**/*.test.ts"],
          environment: "node",
          globalSetup: ["test/support/built.ts"],
          fileParallelism: false,
        },
      },
    ],
  },
});
