import { describe, expect, it } from "vitest";
import { formatOf, NUMBER_STYLES, styleOf, withDecimals } from "../../../../../src/host/practice/page/formats";

describe("number formats by name", () => {
  it("are recognised again, also as other programs write them", () => {
    for (const style of NUMBER_STYLES) expect(styleOf(formatOf(style))).toBe(style);
    expect(styleOf("0%")).toBe("percent");
    expect(styleOf("#,##0.00")).toBe("fixed");
    expect(styleOf("d/m/yyyy")).toBe("date");
    expect(styleOf('0.0 "days"')).toBeNull();
  });
  it("gain and lose decimals, starting from what a general number shows", () => {
    expect(withDecimals("General", 1, 0.25)).toBe("0.000");
    expect(withDecimals("General", -1, 12)).toBe("0");
    expect(withDecimals("0.0%", 1, 1)).toBe("0.00%");
    expect(withDecimals("0.0%", -1, 1)).toBe("0%");
    expect(withDecimals("0.00E+00", -1, 1)).toBe("0.0E+00");
    expect(withDecimals("#,##0", 1, 1)).toBe("#,##0.0");
    expect(withDecimals("yyyy-mm-dd", 1, 1)).toBe("yyyy-mm-dd");
  });
});
