import { describe, expect, it } from "vitest";
import { references } from "../../../scripts/references.mjs";
import { battery } from "../../reference/battery";

/** Small cases of every kind: stiff, rare, reducible, absorbing, not diagonalisable, at time 0. */
const CASES = ["two-zero", "two-repair", "two-slow", "stiff-3-1000", "koutofn-3short", "absorbing-rare", "upper-erlang4early", "dense-3", "reducible-empty"];

describe("the generator of references", () => {
  it.each(CASES)("gives the values of the battery for %s, digit by digit", (id) => {
    const c = battery.find((candidate) => candidate.id === id)!;
    const found = references({ n: c.n, rates: c.rates as [number, number, number][], t: c.t, start: [...c.start], target: [...c.target], levels: [...c.levels] });
    let compared = 0;
    const compare = (one: unknown, other: unknown): void => {
      if (Array.isArray(one)) one.forEach((part, k) => compare(part, (other as unknown[])[k]));
      else {
        compared++;
        if (one === "inf" || other === "inf" || Number(other) === 0) expect(Number(String(one).replace("inf", "Infinity"))).toBe(Number(String(other).replace("inf", "Infinity")));
        else expect(mantissa(String(one))).toBe(mantissa(String(other)));
      }
    };
    for (const key of ["P", "dist_t", "occupancy_t", "hit_cdf_t", "hit_sf_t", "hit_pdf_t", "hit_quantiles"]) if (c.expect[key]) compare(found[key], c.expect[key]);
    expect(compared).toBeGreaterThan(8);
  });

  it("refuses what two passes do not agree on", () => {
    const c = battery.find((candidate) => candidate.id === "stiff-3-1000")!;
    expect(() => references({ n: c.n, rates: c.rates as [number, number, number][], t: c.t, start: [...c.start] }, 12)).toThrow("more digits");
  });
});

/** The first 18 digits and the size: the last two digits may differ by rounding. */
function mantissa(text: string): string {
  const digits = text.replace(/e.*/, "").replace(/[-.]/g, "").replace(/^0+/, "");
  return `${digits.padEnd(20, "0").slice(0, 18)} ${Number(text).toExponential(3)}`;
}
