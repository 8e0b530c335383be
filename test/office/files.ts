/**
 * The workbooks that another office program is asked to read: the demo as it is saved, and one of ordinary formulas
 * whose stored values are taken out, so that the other program has to work them out itself.
 */
import { readFileSync } from "node:fs";
import { Book, CustomFunctionHost, type BookFile, type CellRecord, type FunctionsFile } from "../../src/host/practice/engine";
import { demoFile } from "../../src/host/practice/demo/demo";
import { openXlsx, saveXlsx } from "../../src/host/practice/exchange";
import { unzip, zip } from "../../src/host/practice/exchange/zip";

export interface OfficeFile {
  readonly name: string;
  readonly bytes: Uint8Array;
  /** The file keeps values beside its formulas. */
  readonly kept: boolean;
  /** Values by sheet, row by row; "" is blank. Formulas of ordinary functions carry their text. */
  readonly sheets: readonly { readonly name: string; readonly rows: readonly (readonly Expected[])[] }[];
}

export interface Expected {
  readonly value: number | string | boolean;
  /** As it is displayed. */
  readonly text: string;
  /** The formula that fills the cell, its own or another cell's. */
  readonly formula: string | null;
  /** The value rests on the add-in's functions, in this formula or in one that it follows. */
  readonly addIn: boolean;
}

export async function officeFiles(dist: string): Promise<OfficeFile[]> {
  const functions = new CustomFunctionHost();
  functions.load(readFileSync(`${dist}/functions.js`, "utf8"), JSON.parse(readFileSync(`${dist}/functions.json`, "utf8")) as FunctionsFile);
  const demo = Book.fromJSON(demoFile(), { functions });
  demo.store.set("ctmc.audit", { version: 1, unit: "day" });
  const ordinary = Book.fromJSON(ordinaryFile());
  return [
    { name: "demo", bytes: await saveXlsx(demo), kept: true, sheets: expected(demo) },
    { name: "ordinary", bytes: await withoutValues(await saveXlsx(ordinary)), kept: false, sheets: expected(ordinary) },
  ];
}

/** What a file says after another program has written it, against what the workbook said before. */
export async function reopened(bytes: Uint8Array): Promise<{ sheets: string[]; hidden: string[]; formulas: number; store: unknown }> {
  const { file } = await openXlsx(bytes);
  return {
    sheets: file.sheets.map((sheet) => sheet.name),
    hidden: file.sheets.filter((sheet) => sheet.hidden).map((sheet) => sheet.name),
    formulas: file.sheets.reduce((sum, sheet) => sum + sheet.cells.filter((cell) => typeof cell[2] === "string" && cell[2].startsWith("=")).length, 0),
    store: file.store,
  };
}

function expected(book: Book): OfficeFile["sheets"] {
  const resting = new Map<string, boolean>();
  /** The cell whose formula fills this one, itself or another. */
  const source = (sheet: string, row: number, column: number) => book.view(sheet, row, column).anchor ?? { row, column };
  const restsOnAddIn = (sheet: string, row: number, column: number): boolean => {
    const name = `${sheet} ${row} ${column}`;
    const known = resting.get(name);
    if (known !== undefined) return known;
    resting.set(name, false);
    const found =
      (book.formula(sheet, row, column)?.includes("CTMC.") ?? false) ||
      book.precedents(sheet, row, column).some((area) =>
        Array.from({ length: area.rows * area.columns }, (_, at) => source(area.sheet, area.row + Math.floor(at / area.columns), area.column + (at % area.columns))).some((cell) => restsOnAddIn(area.sheet, cell.row, cell.column)),
      );
    resting.set(name, found);
    return found;
  };
  return book.sheets().map(({ id, name, used }) => ({
    name,
    rows: Array.from({ length: used ? used.row + used.rows : 0 }, (_, row) =>
      Array.from({ length: used ? used.column + used.columns : 0 }, (__, column) => {
        const { value, text } = book.view(id, row, column);
        const from = source(id, row, column);
        return { value, text, formula: book.formula(id, from.row, from.column), addIn: restsOnAddIn(id, from.row, from.column) };
      }),
    ),
  }));
}

async function withoutValues(bytes: Uint8Array): Promise<Uint8Array> {
  const parts = await unzip(bytes);
  for (const [name, content] of parts) {
    if (!name.startsWith("xl/worksheets/")) continue;
    const xml = new TextDecoder().decode(content);
    parts.set(name, new TextEncoder().encode(xml.replace(/(<c [^>]*?)(?: t="\w+")?((?: cm="1")?>)(<f[^>]*>[^<]*<\/f>)<v>[^<]*<\/v>/g, "$1$2$3")));
  }
  return zip(parts, true);
}

/**
 * Formulas that the other program knows too. Left out, since the two are meant to differ: odd roots of negative numbers
 * (it gives them, here they are #NUM! as in the add-in's host) and logical values among numbers (it counts them).
 */
const FORMULAS = `
-2^2|1-2^2|2^3^2|2^-1|10%^2|-2%|50%%|1&2+3|1&2=12|1+1=2|"a"="A"|"a"<"b"|1<"a"|FALSE<TRUE|TRUE+1|"3"*"4"|--"3"|8/4/2|7-4-2
1/0|1E308*10|"abc"+1|NA()+1
SUM(A1:A4)|AVERAGE(A1:A4)|COUNT(A1:A4)|COUNTA(A1:A6)|COUNTBLANK(A1:A6)|SUMPRODUCT(A1:A3,B1:B3)|PRODUCT(A1:A3)|SUMSQ(A1:A3)|MIN(A1:A4)|MAX(A1:A4)|MEDIAN(A1:B3)
STDEV.S(A1:B3)|STDEV.P(A1:B3)|VAR.S(A1:B3)|VAR.P(A1:B3)|GEOMEAN(A1:B3)|HARMEAN(A1:B3)|AVEDEV(A1:B3)|SKEW(A1:B3)|KURT(A1:B3)|LARGE(B1:B3,2)|SMALL(B1:B3,2)|PERCENTILE.INC(B1:B3,0.3)|QUARTILE.INC(A1:B3,1)|RANK(20,B1:B3)|RANK(20,B1:B3,1)
CORREL(A1:A3,C1:C3)|SLOPE(C1:C3,A1:A3)|INTERCEPT(C1:C3,A1:A3)|RSQ(C1:C3,A1:A3)|SUMXMY2(A1:A3,C1:C3)
COUNTIF(A1:A3,">1")|COUNTIF(A1:A5,"<>2")|COUNTIF(A1:A5,"te*")|SUMIF(A1:A3,">=2",B1:B3)|SUMIFS(B1:B3,A1:A3,">1",B1:B3,"<30")|AVERAGEIF(A1:A3,">1")|COUNTIFS(A1:A3,">1",B1:B3,">20")|MAXIFS(B1:B3,A1:A3,"<3")|MINIFS(B1:B3,A1:A3,">1")
IF(A1>0,1,2)|IF(FALSE,1)|IFERROR(1/0,"x")|IFNA(NA(),9)|IFS(A1>1,"a",A2>1,"b")|SWITCH(2,1,"a",2,"b","c")|CHOOSE(2,A1,B2)|AND(A1:A3)|OR(FALSE,A1>5)|XOR(TRUE,TRUE)|NOT(A1)
ISNUMBER(A4)|ISTEXT(A4)|ISBLANK(E9)|ISERROR(1/0)|ISERR(NA())|ISNA(NA())|ISLOGICAL(A5)|ISEVEN(4)|ISODD(4)|N(TRUE)|TYPE("a")
INDEX(A1:B3,2,2)|INDEX(A1:A3,2)|MATCH(2.5,A1:A3)|MATCH(2,A1:A3,0)|MATCH(9,A1:A3,0)|VLOOKUP(2,A1:B3,2,FALSE)|VLOOKUP(2.7,A1:B3,2)|HLOOKUP(2,D1:E2,2,FALSE)|LOOKUP(2.5,A1:A3,B1:B3)|OFFSET(A1,1,1)|SUM(OFFSET(A1,0,0,3,2))|INDIRECT("B"&2)|ROWS(A1:B3)|COLUMNS(A1:B3)|ROW(B3)|COLUMN(B3)|ADDRESS(2,3)|ADDRESS(2,3,4)
SUM(A1:INDEX(A1:A3,2))|SUM(A1:B3 A2:C2)
ABS(-2)|SIGN(-2)|SQRT(2)|SQRT(-1)|EXP(1)|LN(2)|LN(0)|LOG10(1000)|LOG(8,2)|LOG(100)|POWER(2,0.5)|INT(-1.5)|TRUNC(-1.57,1)|ROUND(2.675,2)|ROUND(-2.5,0)|ROUND(1234.5,-2)|ROUNDUP(-1.21,1)|ROUNDDOWN(-1.99,1)|CEILING(2.1,0.5)|FLOOR(2.7,0.5)|MROUND(7,3)|MOD(-3,2)|MOD(3,-2)|MOD(5.5,2)|QUOTIENT(-7,2)|PI()
SIN(1)|COS(1)|TAN(1)|ASIN(0.5)|ACOS(0.5)|ATAN(2)|ATAN2(1,2)|SINH(1)|COSH(1)|TANH(0.5)|ASINH(1)|ACOSH(2)|ATANH(0.5)|RADIANS(180)|DEGREES(1)
FACT(10)|COMBIN(10,3)|PERMUT(10,3)|EVEN(3)|ODD(2)|GCD(12,18)|LCM(4,6)|GAMMALN(10)|GAMMA(5)|ERF(0.5)|ERFC(0.5)|BASE(10,2)|DECIMAL("ff",16)
NORM.DIST(1,0,2,TRUE)|NORM.DIST(1,0,2,FALSE)|NORM.INV(0.9,1,2)|NORM.S.DIST(1.96,TRUE)|NORM.S.INV(0.975)|LOGNORM.DIST(2,0,1,TRUE)|EXPON.DIST(1,2,TRUE)|EXPON.DIST(1,2,FALSE)|WEIBULL.DIST(1,2,3,TRUE)|GAMMA.DIST(1,2,3,TRUE)|GAMMA.DIST(2,2,3,FALSE)|GAMMA.INV(0.5,2,3)|BETA.DIST(0.4,2,3,TRUE)|BETA.DIST(0.9,5,0.5,TRUE)|BETA.DIST(0.4,2,3,FALSE)|BETA.INV(0.5,2,3)|BETA.INV(0.01,0.5,4)
CHISQ.DIST(3,4,TRUE)|CHISQ.DIST.RT(3,4)|CHISQ.INV(0.05,10)|CHISQ.INV.RT(0.05,10)|T.DIST(1,10,TRUE)|T.DIST(-4,3,TRUE)|T.DIST(1,10,FALSE)|T.INV(0.01,5)|T.INV(0.9,10)|T.INV.2T(0.05,10)|POISSON.DIST(2,3,TRUE)|POISSON.DIST(2,3,FALSE)|BINOM.DIST(3,10,0.4,TRUE)|BINOM.DIST(3,10,0.4,FALSE)
PMT(0.01,12,1000)|PV(0.01,12,-88)|FV(0.01,12,-88)|NPER(0.01,-88,1000)|RATE(12,-88,1000)|NPV(0.1,1,2,3)|IRR(F1:F3)
DATE(2026,3,1)|DATE(2026,14,1)|YEAR(46082)|MONTH(46082)|DAY(46082)|WEEKDAY(46082)|WEEKDAY(46082,2)|ISOWEEKNUM(DATE(2027,1,1))|EDATE(DATE(2026,1,31),1)|EOMONTH(DATE(2024,1,31),1)|DAYS(46082,46000)|NETWORKDAYS(DATE(2026,12,1),DATE(2026,12,31))|WORKDAY(DATE(2026,12,4),3)|TIME(18,30,0)|HOUR(46082.75)|MINUTE(0.51)|SECOND(0.123)
LEN("abc")|UPPER("ab")|LOWER("AB")|PROPER("ada LOVE")|TRIM("  a  b ")|LEFT("abc",2)|RIGHT("abc",2)|MID("abc",2,5)|FIND("c","abc")|FIND("x","abc")|SEARCH("B","abc")|SUBSTITUTE("aXbX","X","y",2)|SUBSTITUTE("aXbX","X","y")|REPLACE("abcdef",2,3,"-")|REPT("ab",3)|EXACT("a","A")|CHAR(65)|CODE("A")|UNICHAR(8364)|VALUE("12%")|TEXT(0.125,"0.0%")|TEXT(1234.5,"#,##0.00")|TEXT(46082,"yyyy-mm-dd")|TEXT(0.000123,"0.00E+00")|T(1)|CONCAT("a",1)|CONCATENATE("a",1)|TEXTJOIN(",",TRUE,A1:A3)
A1:A3*2|SUM(A1:A3*B1:B3)|SUM(IF(A1:A3>1,B1:B3,0))|TRANSPOSE(A1:A3)|MMULT(A1:B2,A1:B2)|MINVERSE(A1:B2)|MDETERM(A1:B2)|{1,2;3,4}+{10;20}|{1,2}*{1;2}|A1:B2=A1:B2|-A1:A3|A1:A3%|MUNIT(2)
My!A1+'My'!B1|SUM(My!A:A)|E9=0|E9=""|E9&"x"
`;

/** All fifteen digits, whatever kind of number it is. */
const FULL = "0.00000000000000E+00";

function ordinaryFile(): BookFile {
  const data: CellRecord[] = [
    [0, 0, 1], [1, 0, 2], [2, 0, 3], [3, 0, "text"], [4, 0, true],
    [0, 1, 10], [1, 1, 20], [2, 1, 30], [0, 2, 1.5], [1, 2, 1.9], [2, 2, 4.4],
    [0, 3, 1], [0, 4, 2], [1, 3, 7], [1, 4, 8], [0, 5, -100], [1, 5, 60], [2, 5, 60],
  ];
  const formulas = FORMULAS.trim().split(/[|\n]/);
  // Four rows for each, as the largest result needs.
  const cells = formulas.map((formula, index): CellRecord => [12 + 4 * index, 0, `=${formula}`, FULL]);
  return {
    version: 1,
    store: {},
    sheets: [
      { id: "a", name: "Data", cells: [...data, ...cells] },
      { id: "b", name: "My", cells: [[0, 0, 5], [0, 1, 7]] },
    ],
  };
}
