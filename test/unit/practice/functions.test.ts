import { describe, expect, test } from "vitest";
import { Book, functionList } from "../../../src/host/practice/engine";
import { evaluate } from "./formulas.helper";

const cells = { A1: 1, A2: 2, A3: 3, A4: "text", A5: true, B1: 10, B2: 20, B3: 30 };

/** Exact facts. Sources as in the operators' test; [text] follows from the function's description alone. */
const exact: readonly [formula: string, value: unknown, source: string][] = [
  ["=SUM(A1:A5)", 6, "ECMA: text and logical values in a range do not count"],
  ['=SUM("4",TRUE,A1)', 6, "ECMA: written into the formula they do"],
  ["=SUM(1,,2)", 3, "ECMA: an argument left out counts 0"],
  ["=AVERAGE(A1:A5)", 2, "ECMA"],
  ["=COUNT(A1:A6)", 3, "ECMA"],
  ["=COUNTA(A1:A6)", 5, "ECMA"],
  ["=COUNTBLANK(A1:A6)", 1, "ECMA"],
  ["=AVERAGE(A6:A9)", "#DIV/0!", "ECMA"],
  ["=SUMPRODUCT(A1:A3,B1:B3)", 140, "arithmetic"],
  ["=SUMPRODUCT(A1:A4,B1:B3)", "#VALUE!", "ECMA: shapes must agree"],
  ["=IF(A1>0,A1:A3,0)", [[1], [2], [3]], "text"],
  ['=IF({1,0},"a","b")', [["a", "b"]], "OF: a table of conditions"],
  ["=IF(FALSE,1)", false, "ECMA"],
  ["=IF(FALSE,1,)", 0, "common practice"],
  ["=IF(TRUE,1,1/0)", 1, "ECMA: only the branch taken is worked out"],
  ['=IFERROR(1/0,"x")', "x", "text"],
  ["=IFERROR(1/{0,2},9)", [[9, 0.5]], "text"],
  ["=IFNA(1/0,9)", "#DIV/0!", "text"],
  ["=IFNA(NA(),9)", 9, "text"],
  ['=IFS(A1>1,"a",A2>1,"b")', "b", "text"],
  ['=SWITCH(2,1,"a",2,"b","c")', "b", "text"],
  ["=CHOOSE(2,A1,B1:B3)", [[10], [20], [30]], "text"],
  ["=AND(A1:A3)", true, "text"],
  ["=ISNUMBER(A1:A4)", [[true], [true], [true], [false]], "text"],
  ["=ISERROR(1/0)", true, "text"],
  ["=ISERR(NA())", false, "text"],
  ["=ISBLANK(C1)", true, "text"],
  ["=INDEX(A1:B3,2,0)", [[2, 20]], "ECMA: 0 takes the whole row"],
  ["=INDEX(A1:A3,2)", 2, "ECMA"],
  ["=INDEX({1,2,3},2)", 2, "ECMA: one number runs along a row"],
  ["=INDEX(A1:B3,4,1)", "#REF!", "ECMA"],
  ["=SUM(A1:INDEX(A1:A3,2))", 3, "OF: INDEX gives a reference"],
  ["=MATCH(2.5,A1:A3)", 2, "ECMA: the last at or below"],
  ["=MATCH(2.5,A1:A3,0)", "#N/A", "ECMA"],
  ['=MATCH("te*",A1:A4,0)', 4, "ECMA: wildcards"],
  ["=MATCH(2,{3,2,1},-1)", 2, "ECMA"],
  ["=XLOOKUP(2,A1:A3,B1:B3)", 20, "text"],
  ['=XLOOKUP(9,A1:A3,B1:B3,"none")', "none", "text"],
  ["=XLOOKUP(2.5,A1:A3,B1:B3,,-1)", 20, "text"],
  ["=XLOOKUP(2.5,A1:A3,B1:B3,,1)", 30, "text"],
  ["=XLOOKUP({1,3},A1:A3,B1:B3)", [[10, 30]], "text"],
  ["=VLOOKUP(2,A1:B3,2,FALSE)", 20, "ECMA"],
  ["=VLOOKUP(2.7,A1:B3,2)", 20, "ECMA"],
  ["=HLOOKUP(2,{1,2;7,8},2,FALSE)", 8, "ECMA"],
  ["=LOOKUP(2.5,A1:A3,B1:B3)", 20, "ECMA"],
  ["=OFFSET(A1,1,1)", 20, "ECMA"],
  ["=SUM(OFFSET(A1,0,0,3,2))", 66, "ECMA"],
  ["=OFFSET(A1,-1,0)", "#REF!", "ECMA"],
  ['=INDIRECT("B"&2)', 20, "ECMA"],
  ["=ROWS(A:A)", 1048576, "ECMA: rows of a sheet"],
  ["=COLUMNS(1:1)", 16384, "ECMA: columns of a sheet"],
  ["=ROW(B3)", 3, "ECMA"],
  ["=SEQUENCE(2,3)", [[1, 2, 3], [4, 5, 6]], "text"],
  ["=TRANSPOSE(A1:A3)", [[1, 2, 3]], "text"],
  ["=FILTER(A1:B3,A1:A3>1)", [[2, 20], [3, 30]], "text"],
  ["=FILTER(A1:B3,A1:A3>9)", "#CALC!", "common practice"],
  ["=SORT(A1:A3,1,-1)", [[3], [2], [1]], "text"],
  ["=SORTBY({1;2;3},{3;1;2})", [[2], [3], [1]], "text"],
  ["=UNIQUE({1;1;2})", [[1], [2]], "text"],
  ["=VSTACK(A1:A2,{1,2})", [[1, "#N/A"], [2, "#N/A"], [1, 2]], "text"],
  ["=TAKE(A1:A3,-1)", 3, "text"],
  ["=DROP(A1:A3,1)", [[2], [3]], "text"],
  ["=TOCOL({1,2;3,4})", [[1], [2], [3], [4]], "text"],
  ["=WRAPROWS({1,2,3},2)", [[1, 2], [3, "#N/A"]], "text"],
  ["=MMULT({1,2;3,4},{1;1})", [[3], [7]], "arithmetic"],
  ["=MINVERSE({0,2;4,0})", [[0, 0.25], [0.5, 0]], "arithmetic: rows must be exchanged"],
  ["=MINVERSE({1,2;2,4})", "#NUM!", "arithmetic: no inverse"],
  ["=MDETERM({1,2;3,4})", -2, "arithmetic"],
  ["=MDETERM({0,2;4,0})", -8, "arithmetic"],
  ["=LET(x,A1:A3,SUM(x)*2)", 12, "text"],
  ["=LAMBDA(x,y,x*y)(3,4)", 12, "text"],
  ["=MAP({1,2},LAMBDA(x,x^2))", [[1, 4]], "text"],
  ["=REDUCE(0,{1,2,3},LAMBDA(a,b,a+b))", 6, "text"],
  ["=SCAN(0,{1,2,3},LAMBDA(a,b,a+b))", [[1, 3, 6]], "text"],
  ["=BYROW(A1:B3,LAMBDA(r,SUM(r)))", [[11], [22], [33]], "text"],
  ["=MAKEARRAY(2,2,LAMBDA(r,c,r*10+c))", [[11, 12], [21, 22]], "text"],
  ['=COUNTIF(A1:A3,">1")', 2, "ECMA"],
  ['=COUNTIF({"a*b","axb","~"},"a~*b")', 1, "ECMA: a tilde takes a wildcard literally"],
  ['=COUNTIF({"a-b","~"},"~~")', 1, "ECMA"],
  ['=COUNTIF(A1:A5,"<>2")', 4, "ECMA: everything but 2, text and logical values too"],
  ['=SUMIF(A1:A3,">=2",B1:B3)', 50, "ECMA"],
  ['=SUMIFS(B1:B3,A1:A3,">1",B1:B3,"<30")', 20, "ECMA"],
  ['=AVERAGEIF(A1:A3,">1")', 2.5, "ECMA"],
  ["=ROUND(2.675,2)", 2.68, "common practice: decimal rounding of what is written"],
  ["=ROUND(-2.5,0)", -3, "ECMA: halves away from 0"],
  ["=ROUND(1234,-2)", 1200, "ECMA"],
  ["=ROUNDDOWN(-1.99,1)", -1.9, "ECMA"],
  ["=INT(-1.5)", -2, "ECMA"],
  ["=TRUNC(-1.5)", -1, "ECMA"],
  ["=MOD(-3,2)", 1, "ECMA: the divisor's sign"],
  ["=MOD(3,-2)", -1, "ECMA"],
  ["=CEILING(2.1,0.5)", 2.5, "ECMA"],
  ["=ATAN2(1,0)", 0, "ECMA: x comes first"],
  ["=LOG(8,2)", 3, "arithmetic"],
  ["=LN(0)", "#NUM!", "ECMA"],
  ["=SQRT(-1)", "#NUM!", "ECMA"],
  ["=FACT(5)", 120, "arithmetic"],
  ["=COMBIN(5,2)", 10, "arithmetic"],
  ["=DATE(1900,1,1)", 1, "ECMA 18.17.4.1"],
  ["=DATE(1900,3,1)", 61, "ECMA 18.17.4.1: the day 60 that never was"],
  ["=DATE(2000,1,1)", 36526, "common practice"],
  ["=DATE(2026,14,1)", 46419, "ECMA: months run over; 2027-02-01"],
  ["=YEAR(36526)&MONTH(36526)&DAY(36526)", "200011", "common practice"],
  ["=EOMONTH(DATE(2024,1,31),1)-DATE(2024,2,29)", 0, "calendar"],
  ["=EDATE(DATE(2026,1,31),1)-DATE(2026,2,28)", 0, "calendar"],
  ["=WEEKDAY(DATE(2026,12,1),2)", 2, "calendar: a Tuesday"],
  ["=ISOWEEKNUM(DATE(2027,1,1))", 53, "ISO 8601: the year 2026 has 53 weeks"],
  ["=NETWORKDAYS(DATE(2026,12,1),DATE(2026,12,31))", 23, "calendar"],
  ["=WORKDAY(DATE(2026,12,4),1)-DATE(2026,12,7)", 0, "calendar: Friday to Monday"],
  ['=TEXT(DATE(2026,3,1),"yyyy-mm-dd")', "2026-03-01", "ECMA"],
  ['=TEXT(0.125,"0.0%")', "12.5%", "ECMA"],
  ['=TEXTJOIN(",",TRUE,A1:A3)', "1,2,3", "text"],
  ['=SUBSTITUTE("aXbX","X","y",2)', "aXby", "ECMA"],
  ['=FIND("x","abc")', "#VALUE!", "ECMA"],
  ['=SEARCH("B","abc")', 2, "ECMA"],
  ['=MID("abc",2,5)', "bc", "ECMA"],
  ['=VALUE("12%")', 0.12, "ECMA"],
  ['=LEFT("abc",0)', "", "ECMA"],
];

describe("ordinary functions", () => {
  for (const [formula, value, source] of exact) {
    test(`${formula} (${source})`, () => expect(evaluate(formula, cells)).toEqual(value));
  }
});

/** Handbook values, as printed, and closed forms to twelve digits (measured: within 2e-13, where the library's log gamma ends). */
const printed: readonly [formula: string, value: number, digits: number, source: string][] = [
  ["=CHISQ.INV.RT(0.05,10)", 18.307, 5, "chi-square table, upper 5 %, 10 degrees (any statistics handbook; from memory)"],
  ["=NORM.S.INV(0.975)", 1.959964, 7, "normal table, 97.5 % (from memory)"],
  ["=NORM.S.DIST(1.96,TRUE)", 0.9750021, 7, "normal table (from memory)"],
  ["=T.INV.2T(0.05,10)", 2.228, 4, "Student's table, 10 degrees (from memory)"],
  ["=T.INV.2T(0.05,1)", 12.7062047362, 12, "Cauchy distribution: tan(0.475 pi)"],
  ["=T.INV(0.75,2)", 0.816496580928, 12, "closed form for 2 degrees: (2p-1)/sqrt(2p(1-p)) = sqrt(2/3)"],
  ["=T.DIST(1,1,TRUE)", 0.75, 12, "Cauchy distribution"],
  ["=T.DIST(-3,1,TRUE)", 0.10241638235, 11, "Cauchy distribution: 1/2 - atan(3)/pi"],
  ["=POISSON.DIST(0,3,TRUE)", 0.0497871, 6, "exp(-3)"],
  ["=EXPON.DIST(1,2,TRUE)", 0.8646647, 7, "1 - exp(-2)"],
  ["=GAMMALN(10)", 12.80182748, 10, "ln 9!"],
  ["=ERF(0.5)", 0.5204999, 7, "table of the error function (from memory)"],
];

describe("printed values", () => {
  for (const [formula, value, digits, source] of printed) {
    test(`${formula} = ${value} (${source})`, () => expect(Number((evaluate(formula) as number).toPrecision(digits))).toBe(value));
  }
});

test("every function that is offered can be called without a fault of its own, whatever it is given", () => {
  const pool = ["1", "-1", "0", '"x"', "A1:B3", "C1", "TRUE", "{1,2;3,4}", "1/0", "1E300", "LAMBDA(x,x)"];
  for (const { name, arguments: parameters } of functionList(null)) {
    for (let shift = 0; shift < pool.length; shift++) {
      const given = parameters.map((_, index) => pool[(index * 3 + shift) % pool.length]).join(",");
      const book = new Book();
      book.apply([{ kind: "put", sheet: "s1", row: 50, column: 5, value: `=${name}(${given})` }], "Try");
      const { sentence, value } = book.view("s1", 50, 5);
      expect(["number", "string", "boolean"], `${name}(${given})`).toContain(typeof value);
      expect(sentence ?? "", `${name}(${given})`).not.toContain("could not be worked out");
    }
  }
});
