import { expect, it } from "vitest";
import { audit } from "../../src/audit/audit";
import { findTables } from "../../src/audit/tables-in-sheet";
import type { Cells, CellValue } from "../../src/table/rate-table";
import { read } from "../../src/table/read";
import { battery } from "../reference/battery";
import { cleanTables, seeded } from "./clean-tables";

const TABLES = 1000;

it(`${TABLES} clean tables raise no stop and no warning`, () => {
  const alarms: string[] = [];
  const notes = new Map<string, number>();
  const kinds = new Map<string, number>();
  for (const table of cleanTables(TABLES, 20311)) {
    expect(read(table.cells).problems.map((problem) => problem.code), `${table.kind}, ${table.layout}: ${JSON.stringify(table.cells)}`).toEqual([]);
    kinds.set(table.kind, (kinds.get(table.kind) ?? 0) + 1);
    for (const options of [{}, { answers: {}, facts: { calculation: "automatic" as const, neighbours: { above: [], below: [], left: [], right: [] } } }])
      for (const finding of audit(table.cells, options)) {
        if (finding.severity === "note") notes.set(finding.code, (notes.get(finding.code) ?? 0) + 1);
        else alarms.push(`${table.kind}, ${table.layout}: ${finding.code} ${JSON.stringify(table.cells)}`);
      }
  }
  console.log(
    `False alarms on ${TABLES} clean tables, each audited without and with the sheet: ${alarms.length} (${((100 * alarms.length) / TABLES).toFixed(2)} %).\n` +
      `Kinds: ${[...kinds].map(([kind, count]) => `${kind} ${count}`).join(", ")}.\nNotes, not counted: ${[...notes].map(([code, count]) => `${code} ${count}`).join(", ")}.`,
  );
  expect(alarms).toEqual([]);
}, 60_000);

it("the same tables are found in a sheet, with a title above, a blank line around and figures below", () => {
  let missed = 0;
  let tables = 0;
  for (const table of cleanTables(400, 77)) {
    if (table.layout === "top" || table.layout === "left") continue; // names on one side only: no surer than a budget
    tables++;
    const width = Math.max(...table.cells.map((row) => row.length));
    const sheet: CellValue[][] = [
      ["Rates of the line", null],
      [],
      ...table.cells.map((row) => [null, ...row]),
      [],
      [null, "Availability", 0.97],
      [null, "Mean time to failure", 412],
    ];
    const filled = table.cells.filter((row) => row.some((value) => value !== null && value !== "")).length;
    const found = findTables(sheet);
    const exact = found.length === 1 && found[0].span.row === 2 && found[0].span.column === 1 && found[0].span.rows <= table.cells.length && found[0].span.rows >= filled - 1 && found[0].span.columns <= width;
    if (!exact) missed++;
  }
  console.log(`Tables found in a sheet: ${tables - missed} of ${tables}.`);
  expect(missed / tables).toBeLessThanOrEqual(0.01);
}, 60_000);

it("chains made by others raise no stop and no warning but for several closed groups, or none at all", () => {
  // the 87 chains of the reference battery, as square tables without names; closed groups counted here by plain reachability
  const alarms: string[] = [];
  for (const { id, n, rates } of battery) {
    const rows = Array.from({ length: n }, () => new Array<number>(n).fill(0));
    for (const [from, to, rate] of rates) rows[from][to] = rate;
    const reach = rows.map((row, i) => row.map((rate, j) => i === j || rate > 0));
    for (let k = 0; k < n; k++) for (let i = 0; i < n; i++) if (reach[i][k]) for (let j = 0; j < n; j++) if (reach[k][j]) reach[i][j] = true;
    const closed = new Set(rows.flatMap((_, i) => (reach[i].every((there, j) => !there || reach[j][i]) ? [reach[i].indexOf(true)] : [])));
    const expected = rates.length === 0 ? ["noArrows"] : closed.size > 1 ? ["closedClasses"] : [];
    const found = audit(rows).filter(({ severity }) => severity !== "note").map(({ code }) => code);
    if (found.join() !== expected.join()) alarms.push(`${id}: ${found.join()} for ${expected.join() || "nothing"}`);
  }
  console.log(`${battery.length} chains of the reference battery: ${alarms.length} alarms without cause.`);
  expect(alarms).toEqual([]);
});

it("tables with totals, notes, units or titles around them raise nothing but the layout's own stop", () => {
  const random = seeded(9);
  const own = new Set(["totalsSelected", "linesAside", "listWithMore"]);
  const alarms: string[] = [];
  const missed: string[] = [];
  let tables = 0;
  const noted = (rows: Cells): Cells => rows.map((row, i) => [...row, i === 0 ? "Source" : `log ${2030 + i}`]);
  const dressings: Readonly<Record<string, (rows: Cells, size: number) => Cells>> = {
    "total column": (rows, size) => rows.map((row, i) => [...row, i === 0 ? "Total" : i <= size ? sum(row.slice(1)) : null]),
    "total row and column": (rows, size) => {
      const wide = dressings["total column"](rows, size);
      const body = wide.slice(1, size + 1);
      return [...wide.slice(0, size + 1), ["Total", ...wide[0].slice(1).map((_, j) => sum(body.map((row) => row[j + 1])))]];
    },
    "note column": (rows) => noted(rows),
    "title": (rows) => [["Rates of the year, as agreed", ...rows[0].slice(1).map(() => null)], ...rows],
    "heading over the headings": (rows) => [[null, "to state", ...rows[0].slice(2).map(() => null)], ...rows],
    "unit row": (rows) => [["", ...rows[0].slice(1)], [null, ...rows[0].slice(1).map(() => "1/h")], ...rows.slice(1)],
  };
  for (const { kind, layout, cells } of cleanTables(1000, 4711)) {
    if (layout !== "both" && layout !== "list with headings") continue;
    tables++;
    const names = Object.keys(dressings);
    const name = layout === "both" ? names[Math.floor(random() * names.length)] : "note column";
    const filled = cells.filter((row) => row.some((value) => value !== null));
    const dressed = (dressings[name] ?? noted)(filled, filled.length - 1);
    const refused = read(dressed).problems.map(({ code }) => code);
    const found = audit(dressed).filter(({ severity }) => severity !== "note").map(({ code }) => code);
    if (!found.some((code) => own.has(code))) missed.push(`${kind}, ${name}: ${found.join()} ${JSON.stringify(dressed)}`);
    const other = found.filter((code, k) => !own.has(code) && !(k === 0 && code === refused[0]));
    if (other.length > 0) alarms.push(`${kind}, ${name}: ${found.join()} ${JSON.stringify(dressed)}`);
  }
  console.log(`${tables} dressed tables: layout recognised in ${tables - missed.length}, ${alarms.length} false alarms.${[...missed, ...alarms].slice(0, 5).map((text) => `\n${text.slice(0, 400)}`).join("")}`);
  expect(missed).toEqual([]);
  expect(alarms).toEqual([]);
});

function sum(row: readonly CellValue[]): number {
  return row.reduce<number>((total, value) => (typeof value === "number" ? total + value : total), 0);
}
