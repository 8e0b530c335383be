import path from "node:path";
import { buildSync } from "esbuild";
import { type OpenOptions } from "../browser";
import { type TestSheet } from "../../conformance/workbook";
import { type PageHost } from "./page-host";

const OFFICE = "https://appsforoffice.microsoft.com/lib/1/hosted/office.js";
let script: string | null = null;

/** The stand-in for office.js, bundled once. Of the manifest package the mock needs only the names of the programs. */
function standIn(): string {
  script ??= buildSync({
    entryPoints: [path.resolve(import.meta.dirname, "page-host.ts")],
    bundle: true,
    format: "iife",
    target: "es2022",
    write: false,
    alias: { "office-addin-manifest": path.resolve(import.meta.dirname, "office-apps.ts") },
  }).outputFiles[0].text;
  return script;
}

/** How to open the Excel page with these sheets in the workbook. */
export const inExcel = (sheets: readonly TestSheet[]): OpenOptions => ({
  path: "pane.html",
  viewport: { width: 350, height: 900 },
  async before(page) {
    await page.addInitScript((given) => Object.assign(window, { sheets: given }), sheets as TestSheet[]);
    await page.route(OFFICE, (route) => route.fulfill({ contentType: "text/javascript", body: standIn() }));
  },
});

/** For use inside the page. */
export type HostWindow = Window & { readonly host: PageHost };
