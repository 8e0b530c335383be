import { cpSync, mkdtempSync, readFileSync, readdirSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { runInNewContext } from "node:vm";
import { gzipSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { manifestFaults } from "../../scripts/manifest-rules.mjs";
import { metadataFaults, type Metadata } from "../../scripts/metadata.mjs";
import { pack } from "../../scripts/package.mjs";
import { DIST } from "../../scripts/paths.mjs";
import { contentPolicy, HOST_SCRIPT, loadsHostScript } from "../../scripts/policy.mjs";

const read = (name: string): string => readFileSync(path.join(DIST, name), "utf8");
const gzipped = (name: string): number => gzipSync(read(name), { level: 9 }).length;
const files = (): string[] => readdirSync(DIST, { recursive: true, encoding: "utf8" }).map((name) => name.split(path.sep).join("/"));
const pages = (): string[] => files().filter((name) => name.endsWith(".html"));
const metadata = (): Metadata => JSON.parse(read("functions.json")) as Metadata;

/** What a page loads before anything happens: the scripts of its own that its markup names. */
const scriptsOf = (page: string): string[] => [...read(page).matchAll(/<script[^>]* src="([^"]+)"/g)].map((match) => match[1]).filter((name) => !name.startsWith("https:"));

describe("functions.js", () => {
  it("stays within 80 kB compressed", () => {
    const bytes = gzipped("functions.js");
    expect(bytes).toBeLessThanOrEqual(80_000);
    console.log(`functions.js: ${(bytes / 1000).toFixed(1)} kB gzipped`);
  });

  it("loads in a runtime that offers only CustomFunctions, and registers at once what functions.json describes", () => {
    const registered: string[] = [];
    class HostError extends Error {}
    const CustomFunctions = { associate: (id: string, body: unknown) => typeof body === "function" && registered.push(id), Error: HostError, ErrorCode: {} };
    runInNewContext(read("functions.js"), { CustomFunctions });
    expect([...registered].sort()).toEqual(metadata().functions.map((one) => one.id).sort());
    expect(registered.length).toBeGreaterThan(10);
  });

  it("loads without harm where there is no host either", () => {
    expect(() => void runInNewContext(read("functions.js"), {})).not.toThrow();
  });
});

describe("functions.json", () => {
  it("is in order", () => {
    expect(metadataFaults(metadata())).toEqual([]);
  });

  it("describes ranges as matrices of any, and headings as the last argument", () => {
    for (const { id, parameters } of metadata().functions) {
      for (const one of parameters) if (one.dimensionality === "matrix") expect(`${id} ${one.name} ${one.type}`).toBe(`${id} ${one.name} any`);
      const headings = parameters.findIndex((one) => one.name === "headings");
      if (headings >= 0) expect(`${id} ${headings}`).toBe(`${id} ${parameters.length - 1}`);
    }
  });
});

describe("the pages", () => {
  it("carry the policy, and no script, style or handler inside the markup", () => {
    expect(pages()).toEqual(expect.arrayContaining(["pane.html", "practice.html", "privacy.html", "support.html"]));
    for (const page of pages()) {
      const html = read(page);
      expect(html).toContain(`<meta http-equiv="Content-Security-Policy" content="${contentPolicy({ hostScript: loadsHostScript(page) })}" />`);
      expect(html.replace(/<script[^>]* src="[^"]+"[^>]*><\/script>/g, "")).not.toMatch(/<script/);
      expect(html).not.toMatch(/<style|\sstyle=|\son[a-z]+=/);
      const foreign = [...html.matchAll(/(?:src|href)="(https?:[^"]+)"/g)].map((match) => match[1]);
      expect(foreign).toEqual(page === "pane.html" ? [`${HOST_SCRIPT}/lib/1/hosted/office.js`] : []);
    }
  });

  it("lead only to files of the site", () => {
    const known = new Set(files());
    for (const page of pages()) {
      const targets = [...read(page).matchAll(/(?:src|href)="([^"#]+)"/g)].map((match) => match[1]).filter((target) => !/^https?:/.test(target));
      for (const target of targets) expect(known, `${page} leads to ${target}`).toContain(target);
    }
  });

  it("let the browser keep every file but those with fixed names: a digest is in each other name", () => {
    const fixed = /^(functions\.js|functions\.json|manifest\.xml|licences\.txt|[a-z]+\.html|icons(\/.*)?)$/;
    expect(files().filter((name) => !fixed.test(name) && !/^[\w-]+\.[0-9a-f]{10}\.(js|css)$/.test(name))).toEqual([]);
  });

  it("load the pane's code after the formulas are registered, and file exchange only when used", () => {
    expect(scriptsOf("pane.html")[0]).toBe("functions.js");
    const start = scriptsOf("pane.html").filter((name) => name !== "functions.js");
    const bytes = start.reduce((sum, name) => sum + gzipped(name), 0);
    // What decides what to show, without the pane itself: measured 3 kB.
    expect(bytes).toBeLessThanOrEqual(6 * 1024);
    for (const name of [...scriptsOf("practice.html"), ...start]) expect(read(name).includes("xl/workbook.xml"), `${name} holds the file exchange`).toBe(false);
    const total = scriptsOf("practice.html").reduce((sum, name) => sum + gzipped(name), 0);
    console.log(`at the start: pane.html ${(bytes / 1024).toFixed(1)} kB, practice.html ${(total / 1024).toFixed(1)} kB gzipped, functions.js aside`);
  });
});

describe("the manifest in the site", () => {
  it("agrees with it", () => {
    expect(manifestFaults(read("manifest.xml"), DIST)).toEqual([]);
  });

  it("is rewritten for a host, with nothing left of the local address", () => {
    const out = mkdtempSync(path.join(tmpdir(), "stayrate-package-"));
    try {
      expect(pack({ origin: "https://example.org/path/", out })).toEqual([]);
      for (const name of ["manifest.xml", "HOSTING.txt", "functions.json"]) expect(readFileSync(path.join(out, name), "utf8")).not.toContain("localhost");
      expect(readdirSync(out, { recursive: true })).toEqual(expect.arrayContaining(["pane.html", "functions.js", path.join("icons", "stayrate-80.png")]));
    } finally {
      rmSync(out, { recursive: true, force: true });
    }
  });

  it("is refused by the package step when the site lacks a file", () => {
    const [site, out] = ["site", "out"].map((name) => mkdtempSync(path.join(tmpdir(), `stayrate-${name}-`)));
    try {
      cpSync(DIST, site, { recursive: true });
      rmSync(path.join(site, "support.html"));
      expect(pack({ origin: "https://example.org/", site, out }).join("\n")).toMatch(/leads to support.html, which the built site does not have/);
    } finally {
      for (const folder of [site, out]) rmSync(folder, { recursive: true, force: true });
    }
  });
});
