import officeAddins from "eslint-plugin-office-addins";
import tseslint from "typescript-eslint";

export default tseslint.config(
  { ignores: ["dist/", "package/", ".cache/", "coverage/", "node_modules/"] },
  ...tseslint.configs.recommended,
  {
    rules: {
      eqeqeq: ["error", "always", { null: "ignore" }],
      "prefer-const": "error",
      "no-var": "error",
      "no-console": "error",
      "no-restricted-globals": ["error", { name: "globalThis", message: "No state on globalThis." }, "alert", "confirm", "prompt"],
      "@typescript-eslint/no-unused-vars": ["error", { argsIgnorePattern: "^_" }],
      "@typescript-eslint/consistent-type-imports": ["error", { fixStyle: "inline-type-imports" }],
    },
  },
  {
    // Rules of the host's object model: what is read must have been loaded and synchronised.
    files: ["src/host/excel/**/*.ts"],
    plugins: { "office-addins": officeAddins },
    rules: {
      "office-addins/call-sync-after-load": "error",
      "office-addins/call-sync-before-read": "error",
      "office-addins/load-object-before-read": "error",
      "office-addins/no-context-sync-in-loop": "error",
      "office-addins/no-empty-load": "error",
      "office-addins/no-navigational-load": "error",
      "office-addins/no-office-initialize": "error",
    },
  },
  {
    // Here the host's arguments arrive without a type of their own.
    files: ["src/functions/**/*.ts"],
    rules: { "@typescript-eslint/no-explicit-any": "off" },
  },
  {
    files: ["scripts/**/*.mjs", "test/**/*.ts", "*.config.*"],
    rules: { "no-console": "off", "no-restricted-globals": "off" },
  },
);
