import { describe, expect, it } from "vitest";
import { metadataFaults, postProcess, type Metadata } from "../../../scripts/metadata.mjs";

const one = (changes: object = {}) => ({
  id: "TRANSITION",
  name: "TRANSITION",
  description: "Where will it be?",
  parameters: [
    { name: "rates", description: "the table", type: "any", dimensionality: "matrix" },
    { name: "headings", description: "TRUE adds names", type: "any", optional: true },
  ],
  ...changes,
});
const metadata = (...functions: object[]): Metadata => ({ allowErrorForDataTypeAny: true, functions }) as Metadata;

describe("functions.json", () => {
  it("gets the switch that lets error cells in and loses the one that is reported to crash an older host", () => {
    const made = postProcess(JSON.stringify({ allowCustomDataForDataTypeAny: true, functions: [one()] }));
    expect(made.allowErrorForDataTypeAny).toBe(true);
    expect("allowCustomDataForDataTypeAny" in made).toBe(false);
    expect(metadataFaults(made)).toEqual([]);
  });

  it.each<[string, Metadata, RegExp]>([
    ["no switch", { functions: [] }, /allowErrorForDataTypeAny must be true/],
    ["the other switch", { ...metadata(), allowCustomDataForDataTypeAny: true }, /must not be there/],
    ["an id given twice", metadata(one(), one()), /given twice/],
    ["a bad id", metadata(one({ id: "2ND" })), /"2ND" is no valid id/],
    ["a short name", metadata(one({ name: "AB" })), /"AB" is no valid id or name/],
    ["a long name", metadata(one({ name: "A".repeat(65) })), /is no valid id or name/],
    ["no description", metadata(one({ description: "" })), /no description/],
    ["a long description", metadata(one({ description: "x".repeat(1025) })), /1025 characters; at most 1024/],
    ["a line break", metadata(one({ description: "a\nb" })), /line break/],
    ["a long parameter text", metadata(one({ parameters: [{ name: "a", description: "x".repeat(513) }] })), /513 characters; at most 512/],
    ["optional before required", metadata(one({ parameters: [{ name: "a", description: "a", optional: true }, { name: "b", description: "b" }] })), /required parameter follows/],
    ["too many bytes", metadata(...Array.from({ length: 1000 }, (_, i) => one({ id: `ID${i}`, description: "x".repeat(1000) }))), /less than 1000000/],
  ])("is refused with %s", (_, made, fault) => {
    expect(metadataFaults(made).join("\n")).toMatch(fault);
  });
});
