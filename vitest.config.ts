import { defineConfig } from "vitest/config";

// A test may be slow on a machine that does other work as well; only one that hangs is ended.
const patience = { testTimeout: 300_000, hookTimeout: 300_000, teardownTimeout: 60_000 };

export default defineConfig({
  test: {
    watch: false,
    projects: [
      {
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
