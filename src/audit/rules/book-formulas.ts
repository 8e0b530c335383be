import type { Cells } from "../../table/rate-table";
import { textOf } from "../body";
import type { BookFormula, BookSheet, BookTable } from "../book";
import { cellSpan, type Finding } from "../finding";
import { referencesIn } from "../formula-calls";

/** A formula whose range leaves out a row or column of its table (mistake 20, seen from the formula). */
export function formulaShort({ short, address }: BookFormula): Finding[] {
  if (!short) return [];
  const { rows, columns, where } = short;
  return [{ code: "formulaShort", severity: "warning", span: cellSpan(address.row, address.column), details: { rows, columns, where } }];
}

/**
 * A mean time to first failure under the label MTBF: the label left of the formula or above it. From the first start to the first failure
 * is another mean than from failure to failure.
 */
export function meanTimeName(formula: BookFormula, cells: Cells, row: number, column: number): Finding[] {
  if (formula.name !== "MEANABSORPTION") return [];
  const label = [cells[row]?.[column - 1], cells[row]?.[column - 2], cells[row - 1]?.[column]].map(textOf).find((text) => /\bM\.?T\.?B\.?F\b|between failures/iu.test(text));
  if (label === undefined) return [];
  return [{ code: "firstFailureAsBetween", severity: "warning", span: cellSpan(formula.address.row, formula.address.column), details: { label } }];
}

/**
 * EXP taken over a table of rates cell by cell, elsewhere on the sheets (mistake 27): one formula over several rows and columns of it,
 * or single formulas over more than half of its cells, the diagonal among them. exp(−q·t) of one exit rate is right and left alone.
 */
export function exponentialsOver(sheet: BookSheet, tables: readonly Pick<BookTable, "address" | "reading" | "kind" | "size" | "where">[]): Finding[] {
  const hits = new Map<number, { first: readonly [number, number]; entries: Set<number> }>();
  for (let row = 0; row < sheet.formulas.length; row++)
    for (let column = 0; column < sheet.formulas[row].length; column++) {
      const formula = sheet.formulas[row][column];
      if (!formula.startsWith("=") || !/\bEXP\s*\(/iu.test(formula) || /\bCTMC[._]/iu.test(formula)) continue;
      for (const { sheet: name, row: top, column: left, rows, columns } of referencesIn(formula, sheet.name))
        tables.forEach(({ address, reading, kind }, k) => {
          const { layout } = reading;
          if (address.sheet !== name || layout?.form !== "square" || (kind !== "rates" && kind !== "columnsSum")) return;
          const [bodyRow, bodyColumn] = [address.row + layout.body.row, address.column + layout.body.column];
          for (let i = Math.max(top, bodyRow); i < Math.min(top + rows, bodyRow + layout.size); i++)
            for (let j = Math.max(left, bodyColumn); j < Math.min(left + columns, bodyColumn + layout.size); j++) {
              const hit = hits.get(k) ?? { first: [sheet.row + row, sheet.column + column] as const, entries: new Set<number>() };
              hit.entries.add((i - bodyRow) * layout.size + j - bodyColumn);
              hits.set(k, hit);
            }
        });
    }
  const findings: Finding[] = [];
  for (const [k, { first, entries }] of hits) {
    const { size, where } = tables[k];
    const onDiagonal = [...entries].some((entry) => entry % (size + 1) === 0);
    const off = [...entries].filter((entry) => entry % (size + 1) !== 0).length;
    if (onDiagonal && off >= 2 && entries.size > (size * size) / 2) {
      findings.push({ code: "exponentialsOverTable", severity: "stop", span: cellSpan(first[0], first[1]), details: { where, cells: entries.size } });
    }
  }
  return findings;
}
