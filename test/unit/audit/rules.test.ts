import { describe, expect, it } from "vitest";
import { audit } from "../../../src/audit/audit";
import { findingTexts } from "../../../src/cells/sentences/findings";
import type { AskedQuestion } from "../../../src/audit/context";
import type { Cells } from "../../../src/table/rate-table";
import { codes, complaints, findingOf, headed } from "./table";

const three = ["Running", "Degraded", "Failed"];
const rates = [[null, 0.02, 0.01], [0.5, null, 0.1], [1, 0, null]];
const asked = (question: Partial<AskedQuestion>): AskedQuestion => ({ name: "DISTRIBUTION", hasTargets: false, hasStart: true, hasTimes: (question.times ?? []).length > 0, times: [], where: "Plan!B2", ...question });

describe("mistake 7: a single probability typed as a rate", () => {
  it.each(["probability per year", "prob.", "annual risk", "chance per cycle"])("warns where the corner says %j", (corner) => {
    expect(findingOf(headed(corner, three, rates), "probabilityLabel")).toMatchObject({ severity: "warning" });
  });
  it("gives the rate that a probability means: 0.2 a year is 0.2231", () => {
    const finding = findingOf(headed("prob.", ["Up", "Down"], [[null, 0.2], [0.1, null]]), "probabilityLabel")!;
    expect(finding.details.rate).toBeCloseTo(0.2231435513, 9); // -ln(0.8), from memory of ln 0.8 = -0.22314
    expect(findingTexts(finding).remedy).toContain("0.2231");
  });
  it("is silent on states at risk, on rates above 1, and on a rate of risk events", () => {
    expect(complaints(headed("", ["Well", "At risk", "High risk"], rates))).toEqual([]);
    expect(complaints(headed("risk rate per year", three, rates))).toEqual([]);
  });
});

describe("mistake 8: exits made probabilities one by one", () => {
  // 1 − exp(−0.9) and 1 − exp(−0.8): together above 1; the diagonal is what is left to 1
  const rows = [[1 - 0.5934 - 0.5507, 0.5934, 0.5507], [0.2, 0.8, 0], [0, 0, 1]];
  it("stops where a row's exits exceed 1", () => {
    expect(findingOf(headed("", three, rows), "competingExits")).toMatchObject({ severity: "stop", details: { name: "Running" } });
  });
  it("stops where a label says probability and the exits exceed 1", () => {
    expect(complaints(headed("probability", three, [[null, 0.6, 0.7], [0.1, null, 0], [0.2, 0, null]]))).toContain("competingExits");
  });
  it("stops at two formulas 1−EXP in one row, and not at one", () => {
    const cells = headed("", three, [[null, 0.2592, 0.3935], [0.5, null, 0], [1, 0, null]]);
    const formulas = cells.map((row) => row.map(() => ""));
    formulas[1][2] = "=1-EXP(-H3*1)";
    expect(complaints(cells, { facts: { formulas } })).toEqual([]);
    formulas[1][3] = "=1-EXP(-H4*1)";
    expect(findingOf(cells, "competingFormulas", { facts: { formulas } })).toMatchObject({ severity: "stop", span: { row: 1, column: 2 }, also: [{ row: 1, column: 3 }] });
  });
});

describe("mistake 9: an annual matrix cut into months", () => {
  const names = ["Good", "Fair", "Default"];
  const year = [[0.7, 0.2, 0.1], [0.15, 0.6, 0.25], [0, 0, 1]];
  const annual = headed("", names, year);
  const others = [{ where: "Annual!A1:D4", cells: annual }];
  const monthly = (entry: (value: number, onDiagonal: boolean) => number): Cells => {
    const rows = year.map((row, i) => row.map((value, j) => (i === j ? 0 : entry(value, false))));
    rows.forEach((row, i) => (row[i] = 1 - row.reduce((sum, value) => sum + value, 0)));
    return headed("", names, rows);
  };
  it("stops at a twelfth of each entry", () => {
    expect(findingOf(monthly((value) => value / 12), "cycleLength", { others })).toMatchObject({ severity: "stop", details: { way: "divided", cycles: 12, where: "Annual!A1:D4" } });
  });
  it("stops at the twelfth root of each entry", () => {
    const rooted = headed("", names, year.map((row) => row.map((value) => value ** (1 / 12))));
    expect(findingOf(headed("", names, [[0.7 ** (1 / 12), 1 - 0.7 ** (1 / 12), 0], [0.04, 0.6 ** (1 / 12), 0.96 - 0.6 ** (1 / 12)], [0, 0, 1]]), "cycleLength", { others })).toMatchObject({ details: { way: "root" } });
    expect(complaints(rooted)).not.toContain("cycleLength");
  });
  // common practice: half-years, four-monthly periods, quarters, two months, months, four weeks, half-months, fortnights, weeks, days
  it.each([2, 3, 4, 6, 12, 13, 24, 26, 52, 365])("knows a year cut into %d", (cycles) => {
    expect(findingOf(monthly((value) => value / cycles), "cycleLength", { others })).toMatchObject({ details: { way: "divided", cycles } });
  });
  it("is silent on the right twelfth, on another table, and on tables with hardly an exit", () => {
    // the monthly table whose twelfth power is the annual one, for two states: exits e with 1 − (1 − 2e)^12 = 2·0.18
    const e = (1 - 0.64 ** (1 / 12)) / 2;
    const two = headed("", ["A", "B"], [[1 - e, e], [e, 1 - e]]);
    expect(complaints(two, { others: [{ where: "x", cells: headed("", ["A", "B"], [[0.82, 0.18], [0.18, 0.82]]) }] })).not.toContain("cycleLength");
    const rare = headed("", ["A", "B"], [[1 - 1e-5, 1e-5], [2e-5, 1 - 2e-5]]);
    const rareYear = headed("", ["A", "B"], [[1 - 12e-5, 12e-5], [24e-5, 1 - 24e-5]]);
    expect(complaints(rare, { others: [{ where: "x", cells: rareYear }] })).not.toContain("cycleLength");
  });
});

describe("mistake 10: two time units", () => {
  it("warns where labels name different units", () => {
    const list = [["From", "To", "Rate", "Unit"], ["Up", "Down", 0.5, "per year"], ["Down", "Up", 0.1, "per h"]];
    expect(findingOf(list, "unitsDiffer")).toMatchObject({ severity: "warning", details: { units: ["years", "hours"] } });
    expect(complaints(headed("MTBF (years), MTTR (h)", three, rates))).toContain("unitsDiffer");
  });
  it("only notes a factor of hours in a year, or a wide spread", () => {
    expect(findingOf([[0, 1], [8760, 0]], "rateSpread")).toMatchObject({ severity: "note", details: { factor: 8760 } });
    expect(findingOf([[0, 1e-7], [1, 0]], "rateSpread")).toMatchObject({ severity: "note", details: { factor: null } });
    expect(findingOf([[0, 1], [9000, 0]], "rateSpread")).toBeUndefined();
  });
  it("is silent on one unit spelt in several ways, and on scaled hours", () => {
    const list = [["From", "To", "Rate (1/h)", "Unit"], ["Up", "Down", 0.5, "per hour"], ["Down", "Up", 0.1, "per h"]];
    expect(complaints(list)).toEqual(["listTooWide", "listWithMore"]);
    expect(complaints(headed("failures per 1e6 h", three, rates))).toEqual([]);
    expect(complaints(headed("FIT (1e-9 / h)", three, rates))).toEqual([]);
  });
});

describe("mistake 11: mean times in rate cells", () => {
  it.each(["MTBF", "MTTR (h)", "mean time in h", "Mean time between failures"])("warns where the corner says %j", (corner) => {
    expect(findingOf(headed(corner, three, rates), "meanTimes")).toMatchObject({ severity: "warning", remedy: "invertMeanTimes" });
  });
  it("asks where the first state holds less than half of the long run; CHECK stays silent", () => {
    const times = headed("from/to", ["Up", "Down"], [[null, 400], [8, null]]);
    expect(findingOf(times, "largestArrow", { answers: {} })?.details).toMatchObject({ firstShare: true, meanTime: true });
    expect(codes(audit(times))).toEqual(["diagonalBlank"]);
    expect(complaints(times, { answers: { largestArrow: "meanTime" } })).toEqual(["meanTimes"]);
  });
  it("is silent on a rate worked out from a mean time", () => {
    expect(complaints(headed("rate = 1/MTBF", three, rates))).toEqual([]);
  });
});

describe("mistake 12: a horizon in another unit", () => {
  const table = headed("", three, rates);
  it("warns where hardly anything, or far too much, can happen", () => {
    expect(findingOf(table, "horizonUnit", { asked: [asked({ times: [0.0005] })] })).toMatchObject({ severity: "warning", details: { time: 0.0005, where: "Plan!B2" } });
    expect(findingOf(table, "horizonUnit", { asked: [asked({ times: [3e6] })] })).toMatchObject({ severity: "warning" });
  });
  it("is silent on a series of dates that reaches into the life of the chain", () => {
    expect(complaints(table, { asked: [asked({ times: [0, 0.0001, 1, 100, 8760] })] })).toEqual([]);
  });
});

describe("mistake 20: a range one row or column short", () => {
  const whole = headed("", [...three, "Repair"], [[0, 0.02, 0.01, 0], [0.5, 0, 0.1, 0.2], [0, 0, 0, 1], [2, 0, 0, 0]]);
  const cut = (rows: number, columns: number): Cells => whole.slice(0, rows).map((row) => row.slice(0, columns));
  const none = { above: [], left: [] };
  it("warns where the next row and column bear one name", () => {
    const facts = { neighbours: { ...none, right: ["Repair", 0, 0.2, 1], below: ["Repair", 2, 0, 0] } };
    expect(findingOf(cut(4, 4), "rangeShort", { facts })).toMatchObject({ severity: "warning", remedy: "widenSelection", details: { name: "Repair", range: [0, 0, 5, 5] } });
  });
  it("warns where one column is missing, also without the sheet", () => {
    const facts = { neighbours: { ...none, right: ["Repair", 0, 0.2, 1, 0], below: [null, null, null, null] } };
    expect(complaints(cut(5, 4), { facts })).toEqual(["notSquare", "rangeShort"]);
    expect(complaints(cut(5, 4))).toEqual(["notSquare"]);
    expect(findingTexts(audit(cut(5, 4))[0]).finding).toMatch(/^Row 4 \(Repair\) has no column/u);
  });
  it("is silent on totals, costs, notes and results beside the table", () => {
    for (const right of [["Total", 0.03, 0.8, 1, 2], ["Cost", 10, 20, 30, 5], ["Note", "log", "log", "guess", ""]])
      for (const below of [[null, null, null, null, null], ["Total", 2.5, 0.02, 0.11, 1.2], ["Availability", 0.98, null, null, null]])
        expect(complaints(whole, { facts: { neighbours: { ...none, right, below } } })).toEqual([]);
  });
  it("warns without headings where rates go on both ways", () => {
    const body = [[0, 0.02], [0.5, 0]];
    expect(complaints(body, { facts: { neighbours: { ...none, right: [0.01, 0.1], below: [1, 0.3] } } })).toEqual(["rangeShort"]);
    expect(complaints(body, { facts: { neighbours: { ...none, right: [0.01, 0.1], below: [null, null] } } })).toEqual([]);
  });
});

describe("mistakes 23 to 26: seen on the sheet only", () => {
  const table = headed("", three, [[null, 0.02, 0.01], [0.5, null, null], [1, 0, null]]);
  it("notes blanks among typed zeros", () => {
    expect(findingOf(table, "blanksAmongZeros", { facts: {} })).toMatchObject({ severity: "note", details: { blanks: 1, said: 1 } });
    expect(findingOf(headed("", three, [[null, 0.02, null], [0.5, null, null], [1, null, null]]), "blanksAmongZeros", { facts: {} })).toBeUndefined();
    expect(findingOf(table, "blanksAmongZeros")).toBeUndefined();
  });
  it("notes a rate that is shown as 0", () => {
    const small = headed("", three, [[null, 0.0004, 0.01], [0.5, null, 0], [1, 0, null]]);
    const texts = small.map((row) => row.map((value) => (typeof value === "number" ? value.toFixed(2) : "")));
    expect(findingOf(small, "shownAsZero", { facts: { texts } })).toMatchObject({ severity: "note", span: { row: 1, column: 2 }, details: { rates: 1 } });
    expect(findingOf(small, "shownAsZero", { facts: { texts: small.map((row) => row.map(String)) } })).toBeUndefined();
  });
  it("warns of hidden rows and columns inside, not outside", () => {
    expect(findingOf(table, "hiddenLines", { facts: { hiddenRows: [2], hiddenColumns: [] } })).toMatchObject({ severity: "warning", span: { row: 2 } });
    expect(complaints(table, { facts: { hiddenRows: [7], hiddenColumns: [-1, 4] } })).toEqual([]);
  });
  it("stops at merged cells among the rates, not in the headings", () => {
    expect(findingOf(table, "mergedCells", { facts: { merged: [{ row: 1, column: 2, rows: 1, columns: 2 }] } })).toMatchObject({ severity: "stop" });
    expect(complaints(table, { facts: { merged: [{ row: -1, column: 0, rows: 1, columns: 4 }, { row: 0, column: 1, rows: 1, columns: 3 }] } })).toEqual([]);
  });
  it("warns of calculation by hand", () => {
    expect(complaints(table, { facts: { calculation: "manual" } })).toEqual(["manualCalculation"]);
    expect(complaints(table, { facts: { calculation: "automatic" } })).toEqual([]);
  });
  it("warns of few constants among formulas, not of a mixture", () => {
    const formulas = [["", "", "", ""], ["", "", "=1/C20", "=1/C21"], ["", "=1/C22", "", "0.1"], ["", "=C23", "", ""]];
    const full = headed("", three, [[null, 0.02, 0.01], [0.5, null, 0.1], [1, null, null]]);
    expect(findingOf(full, "pastedConstants", { facts: { formulas } })).toMatchObject({ severity: "warning", span: { row: 2, column: 3 } });
    formulas[1][2] = "0.02";
    expect(complaints(full, { facts: { formulas } })).toEqual([]);
  });
});

describe("mistake 27: EXP cell by cell, I + Q·t", () => {
  const q = [[-0.3, 0.2, 0.1], [0.5, -0.6, 0.1], [0, 1, -1]];
  const eachExp = headed("", three, q.map((row) => row.map((value) => Math.exp(value * 1.5))));
  it("stops at values that only EXP of each entry gives", () => expect(complaints(eachExp)).toContain("exponentialCells"));
  it("stops at EXP formulas over the table", () => {
    const formulas = eachExp.map((row, i) => row.map((_, j) => (i > 0 && j > 0 ? `=EXP(B${i + 10}*2)` : "x")));
    expect(complaints(headed("", three, [[1, 2, 3], [1, 2, 3], [1, 2, 3]]), { facts: { formulas } })).toContain("exponentialCells");
  });
  it("stops at I + Q·t where it leaves 0..1", () => {
    expect(complaints(headed("", three, q.map((row, i) => row.map((value, j) => value * 1.5 + (i === j ? 1 : 0)))))).toEqual(expect.arrayContaining(["linearSteps"]));
  });
  it("stops at an entry outside 0..1 under a label that says probability", () => {
    expect(complaints(headed("P(t)", three, [[0.9, 0.2, 0.1], [0.5, 0.3, 1.2], [0, 0, 1]]))).toContain("outsideUnit");
  });
  it("is silent on rates above 1 and on one EXP", () => {
    expect(complaints(headed("", three, [[null, 2, 3], [1, null, 4], [5, 1, null]]))).toEqual([]);
    const formulas = [["", "", "", ""], ["", "", "=EXP(-H3)", ""], ["", "", "", ""], ["", "", "", ""]];
    expect(complaints(headed("", three, rates), { facts: { formulas } })).toEqual([]);
  });
});

describe("mistakes 28 and 29: groups of like units", () => {
  const group = (names: string[], up: number[], down: number[]): Cells =>
    headed("", names, names.map((_, i) => names.map((__, j) => (j === i + 1 ? up[i] : j === i - 1 ? down[j] : 0))));
  const counted = ["0 down", "1 down", "2 down", "3 down"];
  it("warns of failures at one rate where labels count units", () => {
    expect(findingOf(group(counted, [0.1, 0.1, 0.1], [1, 1, 1]), "failuresIgnoreUnits")).toMatchObject({ severity: "warning" });
    expect(findingOf(group(["3 up", "2 up", "1 up", "0 up"], [0.1, 0.1, 0.1], [1, 1, 1]), "failuresIgnoreUnits")).toMatchObject({ severity: "warning" });
    expect(findingOf(group(["A", "B", "C", "D"], [0.1, 0.1, 0.1], [1, 1, 1]), "failuresIgnoreUnits")).toMatchObject({ severity: "note" });
  });
  it("notes crews without limit and a missing common cause", () => {
    const cells = group(counted, [0.3, 0.2, 0.1], [1, 2, 3]);
    expect(complaints(cells)).toEqual([]);
    expect(findingOf(cells, "crewsUnlimited")).toMatchObject({ severity: "note", details: { most: 3, rate: 1 } });
    expect(findingOf(cells, "commonCause")).toMatchObject({ severity: "note", details: { upName: "0 down", downName: "3 down" } });
  });
  it("notes one repair that mends several units, as in the forum table whose row sums were perfect", () => {
    const cells = headed("", ["0 down", "1 down", "2 down"], [[null, 0.2, 0], [1, null, 0.1], [1, 0, null]]);
    expect(findingOf(cells, "repairMendsSeveral")).toMatchObject({ details: { fromName: "2 down", toName: "0 down" } });
  });
  it("is silent on queues with equal arrivals, and on a common cause that is there", () => {
    expect(codes(audit(group(["0 present", "1 present", "2 present"], [5, 5], [2, 4])))).toEqual(["diagonalBlank"]);
    const shared = headed("", ["0 down", "1 down", "2 down"], [[null, 0.2, 0.01], [1, null, 0.1], [0, 1, null]]);
    expect(findingOf(shared, "commonCause")).toBeUndefined();
  });
});

describe("mistake 30: long-run figures before the long run", () => {
  const table = headed("", three, rates);
  it("notes a share at the latest date that differs by more than 1 %", () => {
    const both = [asked({ name: "STATIONARY" }), asked({ times: [1, 2] })];
    expect(findingOf(table, "longRunNotReached", { asked: both })).toMatchObject({ severity: "note", details: { time: 2 } });
  });
  it("is silent at a late date, and where only one of the two is asked", () => {
    expect(findingOf(table, "longRunNotReached", { asked: [asked({ name: "STATIONARY" }), asked({ times: [1000] })] })).toBeUndefined();
    expect(findingOf(table, "longRunNotReached", { asked: [asked({ times: [1] })] })).toBeUndefined();
  });
});

describe("zero events typed as rate 0", () => {
  it("is noted in a list, not in a square table", () => {
    expect(findingOf([["From", "To", "Rate"], ["Up", "Down", 0.1], ["Down", "Up", 1], ["Up", "Lost", 0]], "zeroEvents")).toMatchObject({ severity: "note", span: { row: 3, column: 2 } });
    expect(findingOf(headed("", three, rates), "zeroEvents")).toBeUndefined();
  });
});

describe("tables as people keep them", () => {
  const rows = rates.map((row, i) => [three[i], ...row]);
  const only = (cells: Cells, code: string): void => expect(complaints(cells).slice(1), JSON.stringify(complaints(cells))).toEqual([code]);
  it("unit row, note column, title and second heading row", () => {
    only([["", ...three], ["", "1/h", "1/h", "1/h"], ...rows], "linesAside");
    only([["", ...three, "Source"], ...rows.map((row, i) => [...row, `log ${i}`])], "linesAside");
    only([["", "To", "", ""], ["From", ...three], ...rows], "linesAside");
    only([["Line 3, rates per h", "", "", ""], ["", ...three], ...rows], "linesAside");
  });
  it("does not take what notes speak of for what the table holds", () => {
    only([["", ...three, "Source"], ...rows.map((row, i) => [...row, ["MTBF 50 h, plate", "10 % above last year", "MTTR (days) by crew"][i]])], "linesAside");
    expect(complaints(headed("", three, rates), { facts: { neighbours: { above: ["Target", null, "95 %", null], below: [], left: [], right: [] } } })).toEqual([]);
    expect(complaints(headed("", three, rates), { facts: { neighbours: { above: ["Mean times of line 3 (h)", null, null, null], below: [], left: [], right: [] } } })).toEqual(["meanTimes"]);
  });
  it("audits the table inside", () => {
    const faulty: Cells = [["", ...three, "Source"], ...rows.map((row, i) => [...row.map((value) => (value === 0.02 ? -0.02 : value)), `log ${i}`])];
    expect(findingOf(faulty, "rateNegative")).toMatchObject({ span: { row: 1, column: 2 } });
  });
  it("lists with further columns", () => {
    const list = [["From", "To", "Rate", "Unit", "Source"], ["Up", "Down", 0.1, "per h", "log"], ["Down", "Up", 2, "per h", "log"]];
    only(list, "listWithMore");
    expect(findingOf(list, "listWithMore")).toMatchObject({ remedy: "narrowSelection" });
    const apart = list.map(([from, to, rate, unit, source]) => [from, to, unit, rate, source]);
    expect(findingTexts(findingOf(apart, "listWithMore")!).remedy).toContain("CHOOSECOLS(list, 1, 2, 4)");
  });
  it("counts beside time in state, square and list", () => {
    const square: Cells = [["", ...three, "Time in state"], ...[[0, 12, 3], [10, 0, 2], [5, 0, 0]].map((row, i) => [three[i], ...row, 900])];
    only(square, "countsBesideTime");
    const list = [["From", "To", "Count", "Exposure (h)"], ["Up", "Down", 4, 1200], ["Down", "Up", 4, 60]];
    only(list, "countsBesideTime");
    expect(findingTexts(findingOf(list, "countsBesideTime")!).remedy).toContain("FROMLIST");
  });
  it("columns before the names, and figures of each state behind the rates", () => {
    only([["No.", "State", ...three], ...rows.map((row, i) => [i + 1, ...row])], "linesAside");
    only([["", "", ...three], ...rows.map((row, i) => [i === 0 ? "in service" : null, ...row])], "linesAside");
    only([["", ...three, "Cost per h"], ...rows.map((row, i) => [...row, 10 * i])], "linesAside");
    only([["", ...three, "Exits out"], ...rows.map((row) => [...row, row.slice(1).reduce<number>((sum, rate) => sum + Number(rate ?? 0), 0)])], "totalsSelected");
    only([["", ...three, "Hours"], ...[[0, 12, 3], [10, 0, 2], [5, 0, 0]].map((row, i) => [three[i], ...row, 900])], "countsBesideTime");
  });
  it("a list whose headings say to before from is not taken silently", () => {
    const list = [["To", "From", "Rate"], ["Down", "Up", 0.1], ["Up", "Down", 2]];
    expect(findingOf(list, "listReversed")).toMatchObject({ severity: "stop", remedy: "transposeCopy" });
    expect(complaints([["From", "To", "Rate"], ["Up", "Down", 0.1], ["Down", "Up", 2]])).toEqual([]);
  });
  it("a counted arrow without an event is noted", () => {
    const list = [["From", "To", "Count", "Exposure (h)"], ["Up", "Down", 4, 1200], ["Down", "Up", 0, 60]];
    expect(findingOf(list, "zeroEvents")).toMatchObject({ severity: "note", span: { row: 2, column: 2 } });
  });
  it("mean times in a list", () => {
    expect(complaints([["From", "To", "Mean time (h)"], ["Up", "Down", 400], ["Down", "Up", 8]])).toEqual(["meanTimes"]);
  });
});
