/**
 * `npm run package -- --origin https://example.org/path/ [--out FOLDER]`: a folder to put on a host, with a manifest whose
 * addresses lead to that host, and a note of the headers that the host should send.
 */
import { cpSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import path from "node:path";
import { pathToFileURL } from "node:url";
import { buildIfStale } from "./build.mjs";
import { manifestFaults } from "./manifest-rules.mjs";
import { DIST, ROOT } from "./paths.mjs";
import { contentPolicy } from "./policy.mjs";

/** The address under which the manifest in the project finds the site. */
export const DEVELOPMENT_ORIGIN = "https://localhost:5880/";

/**
 * The address a site is to be put at, with its closing slash.
 * @param {string | undefined} text
 * @throws when it is none, with a sentence
 */
export function originOf(text) {
  if (!text) throw new Error("--origin is missing. Give the https address of the folder, such as --origin https://example.org/path/.");
  if (!URL.canParse(text)) throw new Error(`--origin ${text} is no address. Give one such as https://example.org/path/.`);
  const url = new URL(text);
  if (url.protocol !== "https:") throw new Error(`--origin ${text}: Excel loads add-ins over https only.`);
  if (url.search || url.hash || url.username) throw new Error(`--origin ${text}: give the folder's address alone, without query, fragment or name.`);
  return url.href.endsWith("/") ? url.href : `${url.href}/`;
}

/** @param {string} manifest @param {string} origin */
export function rehost(manifest, origin) {
  const escaped = origin.replace(/&/g, "&amp;").replace(/"/g, "&quot;");
  // The opening comment speaks of the local server; a packaged manifest has none.
  return manifest.replace(/<!--.*?-->\s*/s, "").replaceAll(DEVELOPMENT_ORIGIN, () => escaped);
}

/** What a host should send with the pages. The pages carry the policy themselves; headers add what a page cannot say. @param {string} origin */
function headersNote(origin) {
  return [
    `Put these files at ${origin} and install manifest.xml from there (README, "In Excel").`,
    "",
    "The host should send, over https:",
    "  *.html           Cache-Control: no-cache",
    "  functions.js, functions.json, manifest.xml   Cache-Control: no-cache",
    "  everything else  Cache-Control: public, max-age=31536000, immutable   (icons: a day)",
    "  all              X-Content-Type-Options: nosniff",
    `  pane.html        Content-Security-Policy: ${contentPolicy({ hostScript: true })}`,
    `  other pages      Content-Security-Policy: ${contentPolicy({ hostScript: false })}; frame-ancestors 'none'`,
    "Send no X-Frame-Options with pane.html: Excel on the web shows it in a frame.",
    "",
  ].join("\n");
}

/**
 * @param {{ origin: string, site?: string, out: string }} options
 * @returns {string[]} what is wrong with the packaged manifest; empty when it is in order
 */
export function pack({ origin, site = DIST, out }) {
  rmSync(out, { recursive: true, force: true });
  cpSync(site, out, { recursive: true });
  const manifest = rehost(readFileSync(path.join(site, "manifest.xml"), "utf8"), origin);
  writeFileSync(path.join(out, "manifest.xml"), manifest);
  writeFileSync(path.join(out, "HOSTING.txt"), headersNote(origin));
  const faults = manifestFaults(manifest, out);
  if (manifest.includes("localhost") && !origin.includes("localhost")) faults.push("manifest.xml still names localhost.");
  return faults;
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  const option = (/** @type {string} */ name) => {
    const at = process.argv.indexOf(name);
    return at > 0 ? process.argv[at + 1] : undefined;
  };
  try {
    const origin = originOf(option("--origin"));
    const out = path.resolve(option("--out") ?? path.join(ROOT, "package"));
    if (out === ROOT || ROOT.startsWith(out + path.sep)) throw new Error(`--out ${out} would be emptied first and holds this project. Name a folder of its own.`);
    await buildIfStale();
    const faults = pack({ origin, out });
    if (faults.length > 0) throw new Error(faults.join("\n"));
    console.log(`${path.relative(process.cwd(), out) || out} is ready for ${origin}`);
  } catch (error) {
    console.error(error instanceof Error ? error.message : error);
    process.exitCode = 1;
  }
}
