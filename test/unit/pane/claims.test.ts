import { describe, expect, it } from "vitest";
import { claimsOf } from "../../../src/pane/claims";
import { read } from "../../../src/table/read";
import type { Cells } from "../../../src/table/rate-table";

const claimed = (cells: Cells) => claimsOf(cells, read(cells)).map(({ from, to, rate, row, column }) => `${from} → ${to} ${rate} @${row},${column}`);

describe("what the arrows claim", () => {
  it("lists the arrows of a sound table with their cells", () => {
    expect(claimed([["", "Up", "Down"], ["Up", null, 0.1], ["Down", 2, null]])).toEqual(["Up → Down 0.1 @1,2", "Down → Up 2 @2,1"]);
  });

  it("still lists what can be read when a row does not add to zero or a cell is wrong", () => {
    expect(claimed([["", "Up", "Down"], ["Up", -3, 0.1], ["Down", 2, null]])).toEqual(["Up → Down 0.1 @1,2", "Down → Up 2 @2,1"]);
    expect(claimed([["", "Up", "Down"], ["Up", null, -0.1], ["Down", 2, null]])).toEqual(["Down → Up 2 @2,1"]);
  });

  it("reads lists, broken rows left out", () => {
    expect(claimed([["from", "to", "rate"], ["Up", "Down", 0.1], ["Down", "Up", 2]])).toEqual(["Up → Down 0.1 @1,2", "Down → Up 2 @2,2"]);
    expect(claimed([["Up", "Down", 0.1], ["Down", "Up", -2], ["Down", "Off", 3]])).toEqual(["Up → Down 0.1 @0,2", "Down → Off 3 @2,2"]);
  });

  it("numbers states without names", () => {
    expect(claimed([[null, 0.5], [1, null]])).toEqual(["State 1 → State 2 0.5 @0,1", "State 2 → State 1 1 @1,0"]);
  });
});
