import { readFileSync } from "node:fs";
import path from "node:path";
import { describe, expect, it } from "vitest";
import { originOf, rehost } from "../../../scripts/package.mjs";
import { ROOT } from "../../../scripts/paths.mjs";

describe("packaging for a host", () => {
  it("rewrites every address and keeps the schema's names", () => {
    const manifest = rehost(readFileSync(path.join(ROOT, "manifest.xml"), "utf8"), "https://example.org/a/b/");
    expect(manifest).not.toContain("localhost");
    expect(manifest).toContain('DefaultValue="https://example.org/a/b/pane.html"');
    expect(manifest).toContain('DefaultValue="https://example.org/a/b/icons/stayrate-80.png"');
    expect(manifest).toContain("http://schemas.microsoft.com/office/appforoffice/1.1");
    expect(manifest.startsWith("<?xml")).toBe(true);
  });

  it("takes an https folder, with or without its closing slash", () => {
    expect(originOf("https://example.org/path")).toBe("https://example.org/path/");
    expect(originOf("https://example.org")).toBe("https://example.org/");
    expect(rehost('x="https://localhost:5880/a"', "https://example.org/$&/")).toBe('x="https://example.org/$&amp;/a"');
  });

  it.each([
    [undefined, /--origin is missing/],
    ["example", /is no address/],
    ["http://example.org/", /over https only/],
    ["https://example.org/?a=1", /address alone/],
  ])("refuses %s", (origin, sentence) => {
    expect(() => originOf(origin)).toThrow(sentence);
  });
});
