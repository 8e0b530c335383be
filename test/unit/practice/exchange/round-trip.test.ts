import { describe, expect, test } from "vitest";
import { Book, CustomFunctionHost, type BookFile, type Edit } from "../../../../src/host/practice/engine";
import { ExchangeRefused, openXlsx, saveXlsx } from "../../../../src/host/practice/exchange";
import { fromFileSpelling, toFileSpelling } from "../../../../src/host/practice/exchange/spelling";
import { markOldReading } from "../../../../src/host/practice/exchange/old-formulas";
import { mayUseArrays } from "../../../../src/host/practice/exchange/array-use";
import { unzip } from "../../../../src/host/practice/exchange/zip";
import { place } from "../formulas.helper";

function functions(): CustomFunctionHost {
  const host = new CustomFunctionHost();
  host.standIn.associate("DOUBLE", (table) => (table as number[][]).map((row) => row.map((entry) => entry * 2)));
  host.useMetadata({ functions: [{ id: "DOUBLE", name: "DOUBLE", parameters: [{ name: "table", dimensionality: "matrix", type: "any" }] }] });
  return host;
}

function sample(): Book {
  const book = new Book({ functions: functions() });
  const type = (sheet: string, cells: Readonly<Record<string, string>>): Edit[] => Object.entries(cells).map(([address, text]) => ({ kind: "type", sheet, ...place(address), text }));
  book.apply(
    [
      { kind: "renameSheet", sheet: "s1", name: "Ferry rates" },
      { kind: "addSheet", id: "plan", name: "Bob's & \"plan\" <1>" },
      { kind: "addSheet", id: "kept", name: "Kept out of sight" },
      ...type("s1", { A1: "per hour", B1: "Sailing", C1: "Docked", A2: "Sailing", C2: "0.25", A3: "Docked", B3: "0.04", A5: "=CTMC.DOUBLE(B2:C3)", D1: "TRUE", D2: "#N/A", D3: "'=text", D4: "'12", E1: "  spaced  ", E2: "line\none", E3: "ärger 漢 🜁 & < > \"", A9: "=1+" }),
      ...type("plan", { A1: "2026-03-01", A2: "=A1+30", B1: "12.5%", B2: "1e-7", C1: "='Ferry rates'!C2*24", C2: "=SUM(A5#)", A5: "=SEQUENCE(2,2)", D1: '=LET(x,1,y,x+1,x*y)&"x"', D2: "=SUM(B1:B2*B1:B2)", D3: "=IF(A1>0,\"a,b\",2)", D4: "=1/0", E1: "=FILTER('Ferry rates'!A1:C3,{1;0;1})" }),
      ...type("kept", { B2: "=plan", C3: "5" }),
      { kind: "hideSheet", sheet: "kept", hidden: true },
      { kind: "format", area: { sheet: "s1", row: 0, column: 0, rows: 1, columns: 3 }, bold: true },
      { kind: "format", area: { sheet: "s1", row: 1, column: 1, rows: 2, columns: 2 }, format: "0.000" },
      { kind: "format", area: { sheet: "s1", row: 4, column: 0, rows: 1, columns: 1 }, format: "#,##0.00;[Red](#,##0.00)", bold: true },
      { kind: "format", area: { sheet: "s1", row: 20, column: 5, rows: 1, columns: 1 }, format: "0%" },
      { kind: "width", sheet: "s1", column: 0, width: 150 },
      { kind: "width", sheet: "plan", column: 2, columns: 2, width: 60 },
      { kind: "hideRows", sheet: "s1", from: 10, count: 2, hidden: true },
      { kind: "hideColumns", sheet: "s1", from: 6, count: 1, hidden: true },
      { kind: "width", sheet: "s1", column: 7, width: 70 },
      { kind: "hideColumns", sheet: "s1", from: 7, count: 1, hidden: true },
      { kind: "merge", area: { sheet: "s1", row: 15, column: 0, rows: 2, columns: 3 } },
    ],
    "Set up",
  );
  book.store.set("ctmc.audit", { version: 1, unit: "h", notes: ["a < b & \"c\"", "line\nend\r\u0001", "]]>"] });
  return book;
}

/** A record with its lists in one order, so that two can be compared. */
function ordered(file: BookFile): unknown {
  return {
    store: file.store,
    sheets: file.sheets.map(({ cells, widths, hiddenRows, hiddenColumns, ...rest }) => ({
      ...rest,
      id: "",
      cells: [...cells].sort((a, b) => a[0] - b[0] || a[1] - b[1]),
      widths: [...(widths ?? [])].sort((a, b) => a[0] - b[0]),
      hiddenRows,
      hiddenColumns,
    })),
  };
}

const values = (book: Book): unknown[] =>
  book.sheets().flatMap((sheet) => Array.from({ length: 20 * 8 }, (_, at) => [at >> 3, at & 7].map(Number)).map(([row, column]) => book.view(sheet.id, row!, column!).text));

test("a workbook comes back from its file with contents, values, formats, layout and what the pane keeps", async () => {
  const book = sample();
  const bytes = await saveXlsx(book);
  const { file, notes } = await openXlsx(bytes);
  expect(notes).toEqual([]);
  const again = Book.fromJSON(file, { functions: functions() });
  // The unreadable formula is kept as text, since no file may hold it as a formula.
  const expected = JSON.parse(JSON.stringify(book.toJSON()).replace('"=1+"', '{"text":"=1+"}')) as BookFile;
  expect(ordered(again.toJSON())).toEqual(ordered(expected));
  const shown = values(book);
  shown[8 * 8] = "=1+";
  expect(values(again)).toEqual(shown);
});

test("names for cells come along, follow their cells and their sheet's name, and go back into the file", async () => {
  const record: BookFile = {
    version: 1,
    names: [{ name: "repair_rate", formula: "=Rates!$A$1" }, { name: "all", formula: "=Rates!$A$1:$A$2" }, { name: "all", formula: "=10", sheet: "s2" }, { name: "loop", formula: "=loop" }],
    sheets: [
      { id: "s1", name: "Rates", cells: [[0, 0, 4], [1, 0, 5], [0, 1, "=SUM(all)*Repair_Rate"], [1, 1, "=loop"]] },
      { id: "s2", name: "Plan", cells: [[0, 0, "=all+repair_rate"]] },
    ],
    store: {},
  };
  const book = Book.fromJSON((await openXlsx(await saveXlsx(Book.fromJSON(record)))).file);
  expect(book.toJSON().names).toEqual(record.names);
  expect([book.view("s1", 0, 1).value, book.view("s2", 0, 0).value]).toEqual([36, 14]);
  expect(book.view("s1", 1, 1).sentence).toBe("The name LOOP stands for itself.");
  book.apply([{ kind: "put", sheet: "s1", row: 0, column: 0, value: 5 }], "Write");
  expect([book.view("s1", 0, 1).value, book.view("s2", 0, 0).value]).toEqual([50, 15]);
  book.apply([{ kind: "renameSheet", sheet: "s1", name: "New rates" }], "Rename");
  expect(book.view("s2", 0, 0).value).toBe(15);
  expect(book.toJSON().names![0]).toEqual({ name: "repair_rate", formula: "='New rates'!$A$1" });
  book.undo();
  expect(book.toJSON().names).toEqual(record.names);
  expect(book.view("s2", 0, 0).value).toBe(15);
});

test("the file spells formulas as files do, with their values beside them", async () => {
  const parts = await unzip(await saveXlsx(sample()));
  const xml = (name: string) => new TextDecoder().decode(parts.get(name));
  expect(xml("xl/worksheets/sheet1.xml")).toMatch(/<c r="A5" s="\d" cm="1"><f t="array" ref="A5:B6">_xldudf_CTMC_DOUBLE\(B2:C3\)<\/f><v>0<\/v><\/c>/);
  expect(xml("xl/worksheets/sheet1.xml")).toContain('<c r="B5"><v>0.5</v></c>');
  expect(xml("xl/worksheets/sheet2.xml")).toContain("SUM(_xlfn.ANCHORARRAY(A5))");
  expect(xml("xl/worksheets/sheet2.xml")).toContain("_xlfn.LET(_xlpm.x,1,_xlpm.y,_xlpm.x+1,_xlpm.x*_xlpm.y)");
  expect(xml("xl/worksheets/sheet2.xml")).toMatch(/<c r="D1" t="str" cm="1"><f[^>]*>[^<]*<\/f><v>2x<\/v><\/c>/);
  expect(xml("xl/worksheets/sheet2.xml")).toMatch(/<c r="D3" t="str"><f>IF\(A1&gt;0,&quot;a,b&quot;,2\)<\/f><v>a,b<\/v><\/c>/);
  expect(xml("xl/workbook.xml")).toContain('state="hidden"');
  expect(xml("xl/styles.xml")).not.toContain("stayrate-bold");
  expect([...parts.keys()]).toContain("customXml/item1.xml");
});

describe("spelling of formulas in files", () => {
  const pairs: readonly [ours: string, files: string][] = [
    ["=CTMC.TRANSITION(B3:F7,12)", "_xldudf_CTMC_TRANSITION(B3:F7,12)"],
    ["=SUM(A5#)+B1", "SUM(_xlfn.ANCHORARRAY(A5))+B1"],
    ["='My plan'!A5#", "_xlfn.ANCHORARRAY('My plan'!A5)"],
    ["=@A1:A9*2", "_xlfn.SINGLE(A1:A9)*2"],
    ["=LET(x,1,x*2)", "_xlfn.LET(_xlpm.x,1,_xlpm.x*2)"],
    ["=MAP(A1:A2,LAMBDA(q,q+1))", "_xlfn.MAP(A1:A2,_xlfn.LAMBDA(_xlpm.q,_xlpm.q+1))"],
    ["=SORT(FILTER(A1:B2,{1;0}))", "_xlfn._xlws.SORT(_xlfn._xlws.FILTER(A1:B2,{1;0}))"],
    ['=IF(A1>0,"LET(x,A5#)",-1)', 'IF(A1>0,"LET(x,A5#)",-1)'],
    ["=STDEV.S(A1:A9)", "_xlfn.STDEV.S(A1:A9)"],
  ];
  test.each(pairs)("%s", (ours, files) => {
    expect(toFileSpelling(ours)).toBe(files);
    expect(fromFileSpelling(files)).toBe(ours);
  });
  test("the plain spelling of the add-in's functions is read too", () => expect(fromFileSpelling("CTMC.TRANSITION(B3:F7,12)")).toBe("=CTMC.TRANSITION(B3:F7,12)"));
});

test("formulas are marked as able to spill when they work on tables", () => {
  for (const formula of ["=A1:A3*2", "=SUM(A1:A3*B1:B3)", "=CTMC.X(A1)", "={1,2}", "=A1#", "=SUM(A1#)", "=ABS(A1:A3)", "=SUM(IF(A1:A3>0,1))", "=INDEX(A1:B3,2,0)", "=LET(x,1,x)", "=SUMPRODUCT(A1:A3*2)"]) {
    expect(mayUseArrays(formula), formula).toBe(true);
  }
  for (const formula of ["=A1+1", "=SUM(A1:A3)", "=SUM(A1:A3)/COUNT(A1:A3)", "=IF(SUM(A1:A3)>0,A1,B1)", "=ROUND(AVERAGE(A:A),2)", "=TODAY()+1", '="a"&B1']) {
    expect(mayUseArrays(formula), formula).toBe(false);
  }
});

describe("formulas not marked as able to spill are read the old way", () => {
  test.each([
    ["=A1:A9*2", "=@A1:A9*2"],
    ["=A:A", "=@A:A"],
    ["=SUM(A1:A9)", "=SUM(A1:A9)"],
    ["=SUM(A1:A9*B1:B9)", "=SUM(@A1:A9*@B1:B9)"],
    ["=SUMPRODUCT(A1:A9*(B1:B9>0))", "=SUMPRODUCT(A1:A9*(B1:B9>0))"],
    ["=IF('My plan'!A1:A9>0,1,-B1:B9)", "=IF(@'My plan'!A1:A9>0,1,-@B1:B9)"],
    ["=INDEX(A1:B9,2,1)&\"A1:A9\"", "=INDEX(A1:B9,2,1)&\"A1:A9\""],
    ["=CTMC.AVAILABILITY(B3:F7*24,A1:A2)", "=CTMC.AVAILABILITY(B3:F7*24,A1:A2)"],
    ["=VLOOKUP(A1,B1:C9,2,FALSE)", "=VLOOKUP(A1,B1:C9,2,FALSE)"],
    ["=VLOOKUP(A1:A9,B1:C9,2,FALSE)", "=VLOOKUP(@A1:A9,B1:C9,2,FALSE)"],
    ["=1+(", "=1+("],
  ])("%s", (written, read) => expect(markOldReading(written)).toBe(read));

  test("what is saved from here comes back unmarked", () => {
    for (const formula of ["=SUM(A1:A9)", "=ROUND(AVERAGE(A1:A9),2)", "=IF(SUM(A1:A3)>0,A1,B1)", "=COUNTIF(A1:A9,\">1\")", "=A1+1"]) {
      expect(mayUseArrays(formula) || markOldReading(formula) === formula, formula).toBe(true);
    }
  });
});

test("a text longer than files keep is refused with its place", async () => {
  const book = new Book();
  book.apply([{ kind: "put", sheet: "s1", row: 1, column: 2, value: "x".repeat(32_768) }], "Write");
  await expect(saveXlsx(book)).rejects.toThrow(new ExchangeRefused("The text in Sheet1!C2 has 32768 characters; a file keeps at most 32767."));
});

test("answers under way are waited for", async () => {
  const host = new CustomFunctionHost();
  host.standIn.associate("LATER", () => new Promise((resolve) => setTimeout(() => resolve(7), 5)));
  host.useMetadata({ functions: [{ id: "LATER", name: "LATER", parameters: [] }] });
  const book = new Book({ functions: host });
  book.apply([{ kind: "put", sheet: "s1", row: 0, column: 0, value: "=CTMC.LATER()" }], "Write");
  const parts = await unzip(await saveXlsx(book));
  expect(new TextDecoder().decode(parts.get("xl/worksheets/sheet1.xml"))).toContain("<v>7</v>");
});
