import { describe, expect, it } from "vitest";
import { Axis } from "../../../../../src/host/practice/page/axis";
import { areaOf, at, blockAround, extendTo, jumped, over, stepped, wander, type Ground } from "../../../../../src/host/practice/page/selection";

function ground(cells: readonly string[], hiddenRow?: number): Ground {
  const rows = new Axis(100_000, 27);
  if (hiddenRow !== undefined) rows.setSizes(new Map([[hiddenRow, 0]]));
  return {
    rows,
    columns: new Axis(1_000, 98),
    filled: (row, column) => (cells[row]?.[column] ?? ".") !== ".",
    mergedAt: () => null,
    used: () => ({ rows: cells.length, columns: Math.max(1, ...cells.map((r) => r.length)) }),
  };
}

describe("lines along an axis", () => {
  it("begin where the lines before them end, hidden ones taking no room", () => {
    const axis = new Axis(1_000, 98);
    axis.setSizes(new Map([[2, 40], [10, 0], [5, 200]]));
    let pixel = 0;
    for (let line = 0; line < 30; line += 1) {
      expect(axis.start(line)).toBe(pixel);
      if (axis.size(line) > 0) {
        expect(axis.at(pixel)).toBe(line);
        expect(axis.at(pixel + axis.size(line) - 1)).toBe(line);
      }
      pixel += axis.size(line);
    }
    expect(axis.length).toBe(1_000 * 98 - 58 + 102 - 98);
    expect(axis.at(1e9)).toBe(999);
    expect(axis.at(-5)).toBe(0);
    expect(axis.step(9, 1)).toBe(11);
    expect(axis.step(0, -1)).toBe(0);
  });
});

describe("moving", () => {
  const sheet = ground(["xx..x", "xx...", "..x..", "xx..."]);
  it("jumps to the edge of a block, to the next block, then to the edge of the sheet", () => {
    expect(jumped(sheet, { row: 0, column: 0 }, "right")).toEqual({ row: 0, column: 1 });
    expect(jumped(sheet, { row: 0, column: 1 }, "right")).toEqual({ row: 0, column: 4 });
    expect(jumped(sheet, { row: 0, column: 4 }, "right")).toEqual({ row: 0, column: 999 });
    expect(jumped(sheet, { row: 0, column: 999 }, "left")).toEqual({ row: 0, column: 4 });
    expect(jumped(sheet, { row: 0, column: 0 }, "down")).toEqual({ row: 1, column: 0 });
    expect(jumped(sheet, { row: 1, column: 0 }, "down")).toEqual({ row: 3, column: 0 });
    expect(jumped(sheet, { row: 3, column: 0 }, "down")).toEqual({ row: 99_999, column: 0 });
    expect(jumped(sheet, { row: 3, column: 1 }, "up")).toEqual({ row: 1, column: 1 });
    expect(jumped(sheet, { row: 0, column: 3 }, "up")).toEqual({ row: 0, column: 3 });
  });
  it("steps over hidden lines and stays on the sheet", () => {
    expect(stepped(ground(["x", "x", "x"], 1), { row: 0, column: 0 }, "down")).toEqual({ row: 2, column: 0 });
    expect(stepped(sheet, { row: 0, column: 0 }, "left")).toEqual({ row: 0, column: 0 });
  });
  it("wanders round a selected area and leaves it selected", () => {
    let selection = over({ row: 0, column: 0, rows: 2, columns: 2 });
    const seen: string[] = [];
    for (let i = 0; i < 4; i += 1) {
      selection = wander(sheet, selection, "right");
      seen.push(`${selection.active.row}${selection.active.column}`);
    }
    expect(seen).toEqual(["01", "10", "11", "00"]);
    expect(areaOf(selection)).toEqual({ row: 0, column: 0, rows: 2, columns: 2 });
    expect(wander(sheet, at(0, 0), "down").active).toEqual({ row: 1, column: 0 });
    expect(wander(sheet, at(0, 0), "down").anchor).toEqual({ row: 1, column: 0 });
  });
  it("takes a merged area as one step, and enters it at its first cell", () => {
    const area = { row: 1, column: 1, rows: 2, columns: 3 };
    const merged: Ground = { ...sheet, mergedAt: (row, column) => (row >= 1 && row <= 2 && column >= 1 && column <= 3 ? area : null) };
    expect(stepped(merged, { row: 1, column: 1 }, "right")).toEqual({ row: 1, column: 4 });
    expect(stepped(merged, { row: 1, column: 1 }, "down")).toEqual({ row: 3, column: 1 });
    expect(stepped(merged, { row: 2, column: 4 }, "left")).toEqual({ row: 1, column: 1 });
    expect(stepped(merged, { row: 1, column: 1 }, "left")).toEqual({ row: 1, column: 0 });
  });
  it("extends from the corner that stays", () => {
    const once = extendTo(at(3, 3), { row: 1, column: 5 });
    expect(areaOf(once)).toEqual({ row: 1, column: 3, rows: 3, columns: 3 });
    expect(areaOf(extendTo(once, { row: 4, column: 2 }))).toEqual({ row: 3, column: 2, rows: 2, columns: 2 });
  });
  it("finds the block around a cell, corners included", () => {
    expect(blockAround(sheet, { row: 0, column: 0 })).toEqual({ row: 0, column: 0, rows: 4, columns: 3 });
    expect(blockAround(sheet, { row: 0, column: 4 })).toEqual({ row: 0, column: 4, rows: 1, columns: 1 });
  });
  it("finds a block of 100,000 cells by reading each a few times, not once for every line of the block", () => {
    let read = 0;
    const tall: Ground = {
      ...sheet,
      filled: (row, column) => {
        read += 1;
        return row >= 0 && row < 20_000 && column >= 0 && column < 5;
      },
      used: () => ({ rows: 20_000, columns: 5 }),
    };
    expect(blockAround(tall, { row: 9_000, column: 2 })).toEqual({ row: 0, column: 0, rows: 20_000, columns: 5 });
    expect(read).toBeLessThan(200_000); // 40,072 measured; 400 million before
  });
});
