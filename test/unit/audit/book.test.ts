import { describe, expect, it } from "vitest";
import { audit } from "../../../src/audit/audit";
import { askedOf, othersOf, roleOf, scanBook, type BookScan, type BookSheet } from "../../../src/audit/book";
import { callsIn, numbersIn, referencesIn } from "../../../src/audit/formula-calls";
import { finish } from "../../../src/chain/steps";
import { findingTexts } from "../../../src/cells/sentences/findings";
import { shortText } from "../../../src/cells/sentences/book";

describe("calls in a formula", () => {
  it("are found outer before inner, with their arguments, in either spelling", () => {
    expect(callsIn('=IF(A1>0, CTMC.AVAILABILITY(CTMC.GENERATOR(B3:F7),{"Up","Slow"},,A2*2), "CTMC.X(1)")')).toEqual([
      { name: "AVAILABILITY", parameters: ["CTMC.GENERATOR(B3:F7)", '{"Up","Slow"}', "", "A2*2"], unregistered: false },
      { name: "GENERATOR", parameters: ["B3:F7"], unregistered: false },
    ]);
    expect(callsIn("=_xldudf_CTMC_TRANSITION(B3:F7;12)")).toEqual([{ name: "TRANSITION", parameters: ["B3:F7", "12"], unregistered: true }]);
    expect(callsIn("=MYCTMC.TRANSITION(1)+'CTMC.X('!A1")).toEqual([]);
  });
  it("read cells of this and other sheets, spills, and no names that look like cells", () => {
    expect(referencesIn("=SUM($B$3:F7)+'It''s Q3'!A1+Plan!C2#+LOG10(B2)+Rate2031x", "Here")).toEqual([
      { sheet: "Here", row: 2, column: 1, rows: 5, columns: 5, spill: false },
      { sheet: "It's Q3", row: 0, column: 0, rows: 1, columns: 1, spill: false },
      { sheet: "Plan", row: 1, column: 2, rows: 1, columns: 1, spill: true },
      { sheet: "Here", row: 1, column: 1, rows: 1, columns: 1, spill: false },
    ]);
    expect(numbersIn("{1, 2;3e2}")).toEqual([1, 2, 300]);
    expect(numbersIn("A1")).toBeNull();
  });
});

type Line = (string | number | boolean)[];

/** A sheet from what is typed: a formula is [formula, value]. */
function sheet(name: string, lines: (string | number | [string, string | number])[][], at = { row: 0, column: 0 }): BookSheet {
  const width = Math.max(...lines.map((line) => line.length));
  const each = (take: (cell: string | number | [string, string | number]) => string | number): Line[] => lines.map((line) => Array.from({ length: width }, (_, k) => take(line[k] ?? "")));
  return {
    name,
    hidden: name.startsWith("Old"),
    ...at,
    values: each((cell) => (Array.isArray(cell) ? cell[1] : cell)),
    formulas: each((cell) => (Array.isArray(cell) ? cell[0] : cell === "" ? "" : String(cell))) as string[][],
  };
}

const rates = (slow: number): (string | number)[][] => [["from/to", "Running", "Slow", "Failed"], ["Running", "", slow, 0.01], ["Slow", 0.5, "", 0.1], ["Failed", 1, 0, ""]];

function scanned(): BookScan {
  return finish(
    scanBook([
      sheet("Old Q1", rates(0.02), { row: 2, column: 1 }),
      sheet("Now", [...rates(0.03), [], ["Availability", ["=CTMC.AVAILABILITY(A1:D4,\"Running\")", 0.9]], ["MTBF", ["=CTMC.MEANABSORPTION(A1:D4,\"Failed\")", 40]]]),
      sheet("Plan", [
        ["Date", 12, 24],
        ["P", ["=CTMC.TRANSITION(Now!A1:D4,B1,TRUE)", ""], "Running", "Slow", "Failed"],
        ["", "Running", 0.9, 0.06, 0.04],
        ["", "Slow", 0.5, 0.3, 0.2],
        ["", "Failed", 0.6, 0.2, 0.2],
        ["Shares", ["=CTMC.DISTRIBUTION(Now!A1:C3,1,B1:C1)", "#VALUE!"]],
        ["Long run", ["=_xldudf_CTMC_STATIONARY(Now!B2:D4)", "#NAME?"]],
        ["To fail", ["=CTMC.MEANABSORPTION('Old Q1'!B3:E6)", "#VALUE!"]],
      ]),
    ]),
  );
}

describe("the whole workbook", () => {
  const scan = scanned();
  it("lists the tables of every sheet, hidden ones too, and no answers", () => {
    expect(scan.tables.map(({ where, hidden, size, arrows }) => [where, hidden, size, arrows])).toEqual([
      ["'Old Q1'!B3:E6", true, 3, 5],
      ["Now!A1:D4", false, 3, 5],
    ]);
  });
  it("lists every formula with its state and the table it reads", () => {
    expect(scan.formulas.map(({ name, state, reads, readsText }) => [name, state, reads, readsText])).toEqual([
      ["AVAILABILITY", "fine", 1, "A1:D4"],
      ["MEANABSORPTION", "fine", 1, "A1:D4"],
      ["TRANSITION", "fine", 1, "Now!A1:D4"],
      ["DISTRIBUTION", "error", 1, "Now!A1:C3"],
      ["STATIONARY", "unregistered", 1, "Now!B2:D4"],
      ["MEANABSORPTION", "error", 0, "'Old Q1'!B3:E6"],
    ]);
  });
  it("tells ranges that are short, and not those without headings", () => {
    const short = scan.formulas.filter((formula) => formula.short);
    expect(short.map(({ name }) => name)).toEqual(["DISTRIBUTION"]);
    expect(shortText(short[0])).toBe("The range leaves out 1 row and 1 column of the table at A1:D4.");
  });
  it("pairs last quarter's table with this one's", () => {
    expect(scan.pairs).toMatchObject([{ a: 0, b: 1, rows: [{ kind: "arrow", from: "Running", to: "Slow", before: 0.02, after: 0.03 }] }]);
  });
  it("knows what is asked of a table, times in cells included", () => {
    expect(askedOf(scan, 1)).toEqual([
      { name: "AVAILABILITY", hasTargets: false, hasStart: false, hasTimes: false, times: [], where: "Now!B6" },
      { name: "MEANABSORPTION", hasTargets: true, hasStart: false, hasTimes: false, times: [], where: "Now!B7" },
      { name: "TRANSITION", hasTargets: false, hasStart: false, hasTimes: true, times: [12], where: "Plan!B2" },
      { name: "DISTRIBUTION", hasTargets: false, hasStart: true, hasTimes: true, times: [12, 24], where: "Plan!B6" },
      { name: "STATIONARY", hasTargets: false, hasStart: false, hasTimes: false, times: [], where: "Plan!B7" },
    ]);
    expect(askedOf(scan, 0)).toMatchObject([{ name: "MEANABSORPTION", hasTargets: false }]);
    expect(othersOf(scan, 1)).toMatchObject([{ where: "'Old Q1'!B3:E6" }]);
  });
  it("warns of a first failure called MTBF", () => {
    const [found] = scan.findings.filter(({ finding }) => finding.code === "firstFailureAsBetween");
    expect(found).toMatchObject({ sheet: "Now", finding: { span: { row: 6, column: 1 } } });
    expect(findingTexts(found.finding).finding).toContain('"MTBF"');
    expect(scan.findings.map(({ finding }) => finding.code)).toEqual(["firstFailureAsBetween", "formulaShort"]);
  });
});

describe("tables that are alike but differ", () => {
  const table = (factor: number, names = ["Up", "Slow", "Down"]): (string | number)[][] => [["", ...names], [names[0], "", 0.1 * factor, 0.2], [names[1], 1, "", 0.3 * factor], [names[2], 2 * factor, 0, ""]];
  const pairsOf = (...sheets: (string | number | [string, string | number])[][][]): number[][] =>
    finish(scanBook(sheets.map((lines, k) => sheet(`S${k}`, lines)))).pairs.map(({ a, b }) => [a, b]);
  it("are paired with the nearest before, one state more or less allowed", () => {
    expect(pairsOf(table(1), table(1.1), table(0.9))).toEqual([[0, 1], [1, 2]]);
    const wider = [["", "Up", "Slow", "Down", "Parked"], ["Up", "", 0.1, 0.2, 1], ["Slow", 1, "", 0.3, 0], ["Down", 2.5, 0, "", 0], ["Parked", 1, 0, 0, ""]];
    expect(pairsOf(table(1), wider)).toEqual([[0, 1]]);
  });
  it("are not paired when equal, of another size, of other states, or built one from the other", () => {
    expect(pairsOf(table(1), table(1))).toEqual([]);
    expect(pairsOf(table(1), table(1).map((row) => row.map((value) => (typeof value === "number" ? value * 50 : value))))).toEqual([]);
    expect(pairsOf(table(1), table(1.1, ["Open", "Ajar", "Shut"]))).toEqual([]);
    const built = table(1.1).map((row, i) => (i === 0 ? [["=CTMC.GENERATOR(S0!A1:D4,TRUE)", ""] as [string, string], ...row.slice(1)] : row));
    expect(pairsOf(table(1), built)).toEqual([]);
  });
});

describe("what formulas take a table for", () => {
  const names = ["Sound", "Corroded", "Closed"];
  const square = (rows: (string | number)[][]): (string | number)[][] => [["", ...names], ...rows.map((row, i) => [names[i], ...row])];
  const costs = square([["", 0, 20], [35, "", 25], [80, 0, ""]]);
  const yearly = square([[0.9, 0.1, 0], [0, 0.8, 0.2], [0, 0, 1]]);
  const scan = finish(
    scanBook([
      sheet("Rates", square([["", 0.15, 0.01], [0.4, "", 0.1], [1.5, 0, ""]])),
      sheet("Costs", costs),
      sheet("Yearly", yearly),
      sheet("Plan", [
        [["=CTMC.COST(Rates!A1:D4,1,10,{1,2,3},Costs!A1:D4)", 12], ["=CTMC.AVAILABILITY(CTMC.FROMPROBABILITY(Yearly!A1:D4,1,TRUE),1)", 0.5]],
        [["=CTMC.STATIONARY(Rates!A1:D4)", ""]],
      ]),
    ]),
  );
  it("costs and probabilities are no faulty rates, and are paired with none", () => {
    expect(scan.tables.map(({ where, role, stop }) => [where, role, stop])).toEqual([["Rates!A1:D4", "rates", null], ["Costs!A1:D4", "costs", null], ["Yearly!A1:D4", "probabilities", null]]);
    expect(scan.pairs).toEqual([]);
    expect(scan.formulas.map(({ name, reads, state }) => [name, reads, state])).toEqual([["COST", 0, "fine"], ["AVAILABILITY", 2, "fine"], ["STATIONARY", 0, "stale"]]);
  });
  it("the audit says so, and judges them as what they are", () => {
    const role = roleOf(scan, 1);
    expect(role).toEqual({ role: "costs", name: "COST", where: "Plan!A1" });
    expect(audit(scan.tables[1].cells, { role }).map(({ code }) => code)).toEqual(["readAsOther"]);
    expect(findingTexts(audit(scan.tables[1].cells, { role })[0]).finding).toBe("Plan!A1 reads this range as costs of arrows, not as rates: CTMC.COST.");
    const rounded = square([[0.9, 0.1, 0.01], [0, 0.8, 0.2], [0, 0, 1]]);
    expect(audit(rounded, { role: roleOf(scan, 2) }).map(({ code }) => code)).toEqual(["probabilitySums", "readAsOther"]);
    expect(roleOf(scan, 0)).toBeUndefined();
  });
});

describe("EXP over a table, cell by cell", () => {
  const grid = (formula: (i: number, j: number) => string): (string | [string, number])[][] =>
    Array.from({ length: 3 }, (_, i) => Array.from({ length: 3 }, (__, j): [string, number] => [formula(i, j), 1]));
  const scan = (lines: (string | number | [string, number])[][]): BookScan => finish(scanBook([sheet("Now", rates(0.02)), sheet("Work", lines)]));
  it("is a stop, as one formula or as many", () => {
    expect(scan(grid((i, j) => `=EXP(Now!${"BCD"[j]}${i + 2}*12)`)).findings).toMatchObject([{ finding: { code: "exponentialsOverTable", severity: "stop" } }]);
    expect(scan([[["=EXP(Now!B2:D4*12)", 1]]]).findings).toHaveLength(1);
  });
  it("is silent on the survival of single exits", () => {
    expect(scan([[["=EXP(-Now!B2*12)", 1]], [["=EXP(Now!C2*12)", 1]]]).findings).toEqual([]);
  });
});

it("scans 200 sheets with 2,000 formulas, pausing at least twice a sheet", () => {
  const sheets = Array.from({ length: 200 }, (_, k) =>
    sheet(`S${k}`, [...rates(0.02 + k / 1000), ...Array.from({ length: 10 }, (__, i): [string, string | number] => [`=CTMC.AVAILABILITY(A1:D4,"Running",,${i})`, 0.9]).map((cell) => [cell])]),
  );
  const steps = scanBook(sheets);
  let longest = 0;
  let last = performance.now();
  const begin = last;
  let pauses = 0;
  let step = steps.next();
  while (!step.done) {
    pauses++;
    const now = performance.now();
    longest = Math.max(longest, now - last);
    last = now;
    step = steps.next();
  }
  console.log(`200 tables, 2,000 formulas: ${(performance.now() - begin).toFixed(0)} ms, longest step ${longest.toFixed(1)} ms.`);
  expect(step.value.formulas).toHaveLength(2000);
  expect(step.value.pairs).toHaveLength(199);
  expect(pauses).toBeGreaterThanOrEqual(400);
});
