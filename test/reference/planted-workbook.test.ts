import { expect, it } from "vitest";
import { auditReading } from "../../src/audit/audit";
import { askedOf, othersOf, scanBook, type BookSheet } from "../../src/audit/book";
import { cellsFrom, type SheetFacts } from "../../src/audit/facts";
import type { Finding } from "../../src/audit/finding";
import { finish } from "../../src/chain/steps";
import { findingTexts } from "../../src/cells/sentences/findings";
import { read } from "../../src/table/read";
import { plantedWorkbook, type PlantedSheet, type Typed } from "./planted-workbook";

type Value = string | number | boolean;

const grid = <T>(sheet: PlantedSheet, take: (cell: Typed) => T): T[][] => {
  const width = Math.max(...sheet.lines.map((line) => line.length));
  return sheet.lines.map((line) => Array.from({ length: width }, (_, k) => take(line[k] ?? null)));
};
const valueOf = (cell: Typed): Value => (cell === null ? "" : typeof cell === "object" ? cell[1] : cell);
const formulaOf = (cell: Typed): string => (cell === null ? "" : typeof cell === "object" ? cell[0] : String(cell));

const book: BookSheet[] = plantedWorkbook.map((sheet) => ({ name: sheet.name, hidden: false, row: 0, column: 0, values: grid(sheet, valueOf), formulas: grid(sheet, formulaOf) }));

it("finds the faults planted in a workbook, and nothing else", () => {
  const scan = finish(scanBook(book));
  let found = 0;
  const missed: string[] = [];
  const alarms: string[] = [];
  const perMistake = new Map<string, { planted: number; found: number }>();
  const layouts = new Set<string>();

  plantedWorkbook.forEach((sheet, k) => {
    layouts.add(sheet.layout);
    const findings = [...(sheet.layout === "formulas" ? [] : auditOf(sheet, k)), ...bookFindings(sheet.name)];
    const explained = new Set<Finding>();
    for (const fault of sheet.faults) {
      const hit = findings.find((finding) => fault.codes.includes(finding.code) && !explained.has(finding) && pointsAt(finding, fault.at));
      const tally = perMistake.get(String(fault.mistake)) ?? { planted: 0, found: 0 };
      tally.planted++;
      if (hit) {
        tally.found++;
        found++;
        explained.add(hit);
      } else missed.push(`${sheet.name}: mistake ${fault.mistake} (${fault.codes.join(" or ")}); found ${findings.map((finding) => `${finding.code}@${finding.span?.row},${finding.span?.column}`).join(", ")}`);
      perMistake.set(String(fault.mistake), tally);
    }
    for (const finding of findings) {
      findingTexts(finding);
      if (finding.severity !== "note" && !explained.has(finding) && !sheet.refusals?.includes(finding.code)) alarms.push(`${sheet.name}: ${finding.code}`);
    }
  });

  const planted = found + missed.length;
  const kinds = [...perMistake].sort((a, b) => (Number(a[0]) || 99) - (Number(b[0]) || 99));
  console.log(
    `Planted workbook: ${plantedWorkbook.length} sheets, ${layouts.size} layouts, ${planted} faults of ${kinds.length} kinds: ${found} found, ${missed.length} missed, ${alarms.length} false alarms.\n` +
      kinds.map(([mistake, tally]) => `  mistake ${mistake.padStart(4)}: ${tally.found} of ${tally.planted}`).join("\n") +
      [...missed.map((text) => `\n  missed ${text}`), ...alarms.map((text) => `\n  false alarm ${text}`)].join(""),
  );
  expect(planted).toBeGreaterThanOrEqual(40);
  expect(layouts.size).toBeGreaterThanOrEqual(8);
  expect(kinds.length).toBe(31); // all thirty, and the "also" line
  expect(missed).toEqual([]);
  expect(alarms).toEqual([]);

  function auditOf(sheet: PlantedSheet, k: number): Finding[] {
    const { values, formulas } = book[k];
    const [row, column, rows, columns] = sheet.range ?? [0, 0, values.length, values[0].length];
    const cut = <T>(lines: readonly (readonly T[])[]): T[][] => lines.slice(row, row + rows).map((line) => line.slice(column, column + columns));
    const cells = cellsFrom(cut(values));
    const line = (length: number, at: (i: number) => Value | undefined): Value[] => Array.from({ length }, (_, i) => at(i) ?? "");
    const around = {
      above: line(columns, (i) => values[row - 1]?.[column + i]),
      below: line(columns, (i) => values[row + rows]?.[column + i]),
      left: line(rows, (i) => values[row + i]?.[column - 1]),
      right: line(rows, (i) => values[row + i]?.[column + columns]),
    };
    const facts: SheetFacts = {
      formulas: cut(formulas),
      formats: cut(values.map((cells_, r) => cells_.map((_, c) => sheet.formats?.[`${r},${c}`] ?? "General"))),
      hiddenRows: [],
      hiddenColumns: [],
      merged: [],
      neighbours: Object.fromEntries(Object.entries(around).map(([side, cells_]) => [side, cellsFrom([cells_])[0]])) as unknown as NonNullable<SheetFacts["neighbours"]>,
      calculation: "automatic",
      ...sheet.facts,
    };
    const table = scan.tables.findIndex(({ address }) => address.sheet === sheet.name);
    return auditReading(cells, read(cells), { facts, answers: {}, ...(table >= 0 ? { asked: askedOf(scan, table), others: othersOf(scan, table) } : {}) });
  }

  function bookFindings(name: string): Finding[] {
    return scan.findings.filter((one) => one.sheet === name).map((one) => one.finding);
  }
});

function pointsAt(finding: Finding, at: readonly [number, number] | undefined): boolean {
  if (!at) return true;
  return [finding.span, ...(finding.also ?? [])].some((span) => span !== null && span.row <= at[0] && at[0] < span.row + span.rows && span.column <= at[1] && at[1] < span.column + span.columns);
}
