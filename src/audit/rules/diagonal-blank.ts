import { cellSpan } from "../finding";
import type { Rule } from "../context";

/**
 * A blank or zero diagonal in rows that have exits (mistake 2): it is worked out as minus the exits, and the note says so.
 */
export const diagonalBlank: Rule = ({ body, layout, kind, reading }) => {
  if (body.form === "list" || kind !== "rates" || !reading.table) return [];
  const places = [];
  for (let i = 0; i < body.size; i++)
    if (body.exits[i] > 0 && body.values[i * body.size + i] === 0) places.push(cellSpan(layout.body.row + i, layout.body.column + i));
  if (places.length === 0) return [];
  const [span, ...also] = places;
  const withExits = body.exits.filter((exit) => exit > 0).length;
  return [{ code: "diagonalBlank", severity: "note", span, also, remedy: "fillDiagonal", details: { rows: places.length, all: places.length === withExits } }];
};
