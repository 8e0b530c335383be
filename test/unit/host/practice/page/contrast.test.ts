import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";

/**
 * Contrast of every pair of text and ground the page uses, computed from the tokens by the formulas of WCAG 2.2
 * (relative luminance and contrast ratio, https://www.w3.org/TR/WCAG22/#dfn-contrast-ratio).
 */
const css = readFileSync(new URL("../../../../../src/host/practice/page/tokens.css", import.meta.url), "utf8");
const themes = css.split("@media");
const tokens = (part: string): Record<string, string> => Object.fromEntries([...part.matchAll(/--([a-z]+):\s*(#[0-9a-f]{6})/g)].map((m) => [m[1]!, m[2]!]));

function luminance(hex: string): number {
  const [r, g, b] = [1, 3, 5].map((at) => {
    const c = parseInt(hex.slice(at, at + 2), 16) / 255;
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * r! + 0.7152 * g! + 0.0722 * b!;
}

function contrast(a: string, b: string): number {
  const [high, low] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (high! + 0.05) / (low! + 0.05);
}

/** A tint laid over a ground, as `color-mix` lays it. */
function over(tint: string, share: number, ground: string): string {
  const mix = (at: number): string => Math.round(parseInt(tint.slice(at, at + 2), 16) * share + parseInt(ground.slice(at, at + 2), 16) * (1 - share)).toString(16).padStart(2, "0");
  return `#${mix(1)}${mix(3)}${mix(5)}`;
}

describe.each([
  ["light", tokens(themes[0]!)],
  ["dark", tokens(themes[1]!)],
])("contrast of the %s tokens", (_, t) => {
  it("knows the formula: black on white is 21", () => {
    expect(contrast("#000000", "#ffffff")).toBeCloseTo(21, 10);
  });
  it.each(["ink", "soft", "river", "stop", "warning", "note", "ok"])("%s as text reaches 4.5 on every ground", (text) => {
    for (const ground of ["paper", "card"]) expect(contrast(t[text]!, t[ground]!), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
  });
  it.each(["ink", "soft", "stop"])("%s reaches 4.5 on the tints that cells and lists have, selected cells too", (text) => {
    for (const ground of ["spill", "wash"]) expect(contrast(t[text]!, t[ground]!), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
    for (const ground of ["paper", "spill"]) expect(contrast(t[text]!, over(t.river!, 0.09, t[ground]!)), `${text} on selected ${ground}`).toBeGreaterThanOrEqual(4.5);
  });
  it("paper on river, the heading of a selected line, reaches 4.5", () => {
    expect(contrast(t.paper!, t.river!)).toBeGreaterThanOrEqual(4.5);
  });
  it("lines that carry meaning reach 3: selection, spill, ranges, the sentence's edge", () => {
    for (const line of ["river", "ok", "stop", "warning", "note", "ink"]) expect(contrast(t[line]!, t.paper!), line).toBeGreaterThanOrEqual(3);
  });
});
