import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";

const css = readFileSync(new URL("../../../src/pane/pane.css", import.meta.url), "utf8");

/** Relative luminance and contrast ratio of WCAG 2.2 (definitions of "relative luminance" and "contrast ratio"). */
function luminance(hex: string): number {
  const [r, g, b] = [1, 3, 5].map((at) => parseInt(hex.slice(at, at + 2), 16) / 255).map((part) => (part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4));
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

function contrast(a: string, b: string): number {
  const [light, dark] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (light + 0.05) / (dark + 0.05);
}

function tokens(selector: string): Record<string, string> {
  const block = css.slice(css.indexOf(selector)).split("}")[0];
  return Object.fromEntries([...block.matchAll(/--(\w+): (#[0-9a-f]{6});/g)].map(([, name, value]) => [name, value]));
}

describe("contrast of the pane's colours", () => {
  it("measures as the standard does: black on white is 21, #777777 on white 4.48", () => {
    expect(contrast("#000000", "#ffffff")).toBeCloseTo(21, 10);
    expect(contrast("#777777", "#ffffff")).toBeCloseTo(4.48, 2);
  });

  const themes = { light: tokens(".sr-pane {"), dark: tokens('.sr-pane[data-theme="dark"] {') };
  for (const [theme, token] of Object.entries(themes))
    for (const text of ["ink", "soft", "river", "stop", "warning", "note", "ok"])
      for (const ground of ["paper", "card", "spill"])
        it(`${theme}: ${text} on ${ground} is at least 4.5`, () => {
          expect(contrast(token[text], token[ground])).toBeGreaterThanOrEqual(4.5);
        });

  it("has the same dark colours by preference and by the host's theme", () => {
    expect(tokens(".sr-pane:not([data-theme]) {")).toEqual(themes.dark);
    expect(Object.keys(themes.dark)).toEqual(Object.keys(themes.light));
  });
});
