import { Problem } from "../chain/problem";
import { isVoid, nameKey, widthOf } from "./cell";
import type { Cells, RateTable } from "./rate-table";
import { readSquare } from "./square";

/**
 * m square tables of the same states, stacked: one a phase. Rows ÷ m is the height of each; headings in all or in none.
 * @throws stackHeight, stackDiffers, and the problems of `readSquare` with the row counted in the range
 */
export function readStack(cells: Cells, phases: number): RateTable[] {
  const height = cells.length / phases;
  if (!Number.isInteger(height)) throw new Problem("stackHeight", { rows: cells.length, phases });
  let width = widthOf(cells);
  while (width > Math.max(1, height) && cells.every((row) => isVoid(row[width - 1] ?? ""))) width--;
  const tables: RateTable[] = [];
  for (let block = 0; block < phases; block++) {
    const first = block * height;
    const { table, problems } = readSquare(cells.slice(first, first + height).map((row) => row.slice(0, width)), { exact: true });
    if (!table) throw inStack(problems[0], block, first);
    const model = tables[0];
    if (model && !(model.headings === table.headings && sameNames(model.names, table.names))) throw new Problem("stackDiffers", { index: block });
    tables.push(table);
  }
  return tables;
}

function inStack(problem: Problem, block: number, first: number): Problem {
  const [row, ...rest] = (problem.details.span as number[] | undefined) ?? [0, 0, 1, 1];
  const at: Record<string, number> = typeof problem.details.row === "number" ? { row: first + row } : { block };
  return new Problem(problem.code, { ...problem.details, ...at, span: [first + row, ...rest] }, problem.kind);
}

function sameNames(left: readonly string[] | null, right: readonly string[] | null): boolean {
  if (left === null || right === null) return left === right;
  return left.length === right.length && left.every((name, i) => nameKey(name) === nameKey(right[i]));
}
