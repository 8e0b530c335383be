import { describe, expect, test } from "vitest";
import { Book, CustomFunctionHost, type Conventions, type FunctionsFile } from "../../../src/host/practice/engine";
import { result } from "./formulas.helper";

/** A script as a build would ship it: it registers at once and knows no other global than the host's. */
const SCRIPT = `
  const seen = (globalThis.seen = []);
  const note = (...args) => { seen.push(args.slice(0, -1)); return args.at(-1); };
  CustomFunctions.associate("ECHO", (table, extra, invocation) => { note(table, extra, invocation); return table; });
  CustomFunctions.associate({
    BAD: () => [[NaN, undefined, Infinity, null, 1]],
    TYPED: () => [new Float64Array([1, 2])],
    RAGGED: () => [[1, 2], [3]],
    REFUSE: () => { throw new CustomFunctions.Error(CustomFunctions.ErrorCode.invalidValue, "Row 3: -0.2 is not a rate. Enter 0 or more."); },
    DIVIDE: () => { throw new CustomFunctions.Error(CustomFunctions.ErrorCode.divisionByZero, "this text is lost"); },
    CRASH: () => { throw new Error("lost too"); },
    PARTLY: () => [[1, new CustomFunctions.Error(CustomFunctions.ErrorCode.notAvailable, "Not reached.")]],
    KINDS: (table) => [table.flat().map((entry) => entry instanceof CustomFunctions.Error ? "error " + entry.code : entry === null ? "null" : typeof entry)],
    WHERE: (invocation) => invocation.address,
    LATER: (value, invocation) => { invocation.onCanceled = () => globalThis.canceled.push(value); return new Promise((resolve) => globalThis.waiting.push({ value, resolve })); },
    REJECT: () => Promise.reject(new CustomFunctions.Error(CustomFunctions.ErrorCode.notAvailable, "No answer.")),
  });
`;

const any = { type: "any" } as const;
const table = { name: "table", dimensionality: "matrix", ...any } as const;
const METADATA: FunctionsFile = {
  allowErrorForDataTypeAny: true,
  functions: [
    { id: "ECHO", name: "ECHO", parameters: [table, { name: "extra", optional: true, ...any }] },
    ...["BAD", "TYPED", "RAGGED", "REFUSE", "DIVIDE", "CRASH", "PARTLY", "REJECT"].map((id) => ({ id, name: id, parameters: [] })),
    { id: "KINDS", name: "KINDS", parameters: [table] },
    { id: "WHERE", name: "WHERE", parameters: [], options: { requiresAddress: true } },
    { id: "LATER", name: "LATER", parameters: [{ name: "value", ...any }], options: { cancelable: true } },
  ],
};

interface Globals {
  seen: unknown[][];
  waiting: { value: unknown; resolve(value: unknown): void }[];
  canceled: unknown[];
}
const globals = globalThis as unknown as Globals;

function bookWith(conventions: Partial<Conventions> = {}) {
  const functions = new CustomFunctionHost(conventions);
  functions.load(SCRIPT, METADATA);
  globals.waiting = [];
  globals.canceled = [];
  const book = new Book({ functions });
  const put = (row: number, column: number, value: string | number | boolean | null) => book.apply([{ kind: "put", sheet: "s1", row, column, value }], "Write");
  const ask = (formula: string) => {
    put(20, 5, formula);
    return result(book, 20, 5);
  };
  return { book, put, ask, sentence: () => book.view("s1", 20, 5).sentence };
}

describe("what a function receives", () => {
  test.each([["zero", 0], ["empty", ""], ["null", null]] as const)("blank cells as %s", (blanks, arrives) => {
    const { put, ask } = bookWith({ blanks });
    put(0, 0, 7);
    ask("=CTMC.ECHO(A1:B1,C1)");
    expect(globals.seen.at(-1)).toEqual([[[7, arrives]], arrives]);
  });

  test("optional arguments left out as null, at the end and before it", () => {
    const { ask } = bookWith();
    ask("=CTMC.ECHO({1,2})");
    expect(globals.seen.at(-1)).toEqual([[[1, 2]], null]);
    ask("=CTMC.ECHO({1,2},)");
    expect(globals.seen.at(-1)).toEqual([[[1, 2]], null]);
  });

  test("a single cell bare or as a table of one", () => {
    bookWith({ singles: "matrix" }).ask("=CTMC.ECHO(5)");
    expect(globals.seen.at(-1)![0]).toEqual([[5]]);
    bookWith({ singles: "scalar" }).ask("=CTMC.ECHO(5)");
    expect(globals.seen.at(-1)![0]).toBe(5);
  });

  test("errors in cells as the host's error objects", () => {
    const { put, ask } = bookWith();
    put(0, 0, "=1/0");
    put(0, 1, "x");
    put(0, 2, true);
    expect(ask("=CTMC.KINDS(A1:D1)")).toEqual([["error #DIV/0!", "string", "boolean", "number"]]);
  });

  test("its own address, where it asks for it", () => {
    expect(bookWith().ask("=CTMC.WHERE()")).toBe("Sheet1!F21");
  });

  test("a missing or surplus argument is refused by the host with the argument's name", () => {
    const { ask, sentence } = bookWith();
    expect(ask("=CTMC.ECHO()")).toBe("#VALUE!");
    expect(sentence()).toBe('CTMC.ECHO needs its argument "table".');
    expect(ask("=CTMC.ECHO(1,2,3)")).toBe("#VALUE!");
    expect(ask("=CTMC.ECHO(1,{1,2})")).toBe("#VALUE!");
  });
});

describe("what arrives in the sheet", () => {
  test("what has no spelling on the way arrives as 0", () => expect(bookWith().ask("=CTMC.BAD()")).toEqual([[0, 0, 0, 0, 1]]));
  test("rows that are no plain lists, or of unlike length, are lost", () => {
    expect(bookWith().ask("=CTMC.TYPED()")).toBe("#VALUE!");
    expect(bookWith().ask("=CTMC.RAGGED()")).toBe("#VALUE!");
  });
  test("the host's errors keep code and, for two codes, text", () => {
    const { ask, sentence } = bookWith();
    expect(ask("=CTMC.REFUSE()")).toBe("#VALUE!");
    expect(sentence()).toBe("Row 3: -0.2 is not a rate. Enter 0 or more.");
    expect(ask("=CTMC.DIVIDE()")).toBe("#DIV/0!");
    expect(sentence()).not.toContain("lost");
    expect(ask("=CTMC.CRASH()")).toBe("#VALUE!");
    expect(sentence()).not.toContain("lost");
    expect(ask("=CTMC.PARTLY()")).toEqual([[1, "#N/A"]]);
    expect(ask("=IFNA(CTMC.PARTLY(),9)")).toEqual([[1, 9]]);
  });
  test("names in any case, and in the spelling of files saved without the add-in", () => {
    const { ask } = bookWith();
    expect(ask("=ctmc.echo(4)")).toBe(4);
    expect(ask("=_xldudf_CTMC_ECHO(4)")).toBe(4);
    expect(ask("=CTMC.NONE(4)")).toBe("#NAME?");
  });
  test("functions registered after the workbook was opened come to life", () => {
    const functions = new CustomFunctionHost();
    const book = new Book({ functions });
    book.apply([{ kind: "put", sheet: "s1", row: 0, column: 0, value: "=CTMC.ECHO(4)" }], "Write");
    expect(book.view("s1", 0, 0).value).toBe("#NAME?");
    let recalculations = 0;
    functions.onChange(() => recalculations++);
    functions.load(SCRIPT, METADATA);
    expect(book.view("s1", 0, 0).value).toBe(4);
    expect(recalculations).toBe(1);
  });
  test("whether the script or its description comes first", async () => {
    const functions = new CustomFunctionHost();
    const book = new Book({ functions });
    book.apply([{ kind: "put", sheet: "s1", row: 0, column: 0, value: "=CTMC.ONE()" }], "Write");
    functions.useMetadata({ functions: [{ id: "ONE", name: "ONE", parameters: [] }] });
    functions.standIn.associate("ONE", () => 1);
    await Promise.resolve();
    expect(book.view("s1", 0, 0).value).toBe(1);
  });
});

describe("answers that come later", () => {
  test("the cell and its followers are busy until then", async () => {
    const { book, put } = bookWith();
    put(0, 0, "=CTMC.LATER(1)+CTMC.LATER(2)");
    put(1, 0, "=SUM(A1,1)");
    expect(book.view("s1", 0, 0)).toMatchObject({ busy: true, text: "…" });
    expect(book.view("s1", 1, 0).busy).toBe(true);
    const idle = book.whenIdle();
    globals.waiting[0]!.resolve(10);
    await expect.poll(() => globals.waiting.length).toBe(2);
    globals.waiting[1]!.resolve([[100, NaN]]);
    await idle;
    expect(result(book, 0, 0)).toEqual([[110, 10]]);
    expect(book.view("s1", 1, 0)).toMatchObject({ value: 111, busy: false });
    expect(globals.canceled).toEqual([]);
  });

  test("a changed input cancels the call and its answer is forgotten", async () => {
    const { book, put } = bookWith();
    put(0, 0, 1);
    put(0, 1, "=CTMC.LATER(A1)");
    put(0, 0, 2);
    expect(globals.canceled).toEqual([1]);
    globals.waiting[0]!.resolve("old");
    globals.waiting[1]!.resolve("new");
    await book.whenIdle();
    expect(book.view("s1", 0, 1).value).toBe("new");
    put(0, 1, null);
    expect(book.busy).toBe(false);
  });

  test("a refusal that comes later keeps its sentence", async () => {
    const { book, put } = bookWith();
    put(0, 0, "=CTMC.REJECT()");
    await book.whenIdle();
    expect(book.view("s1", 0, 0)).toMatchObject({ value: "#N/A", sentence: "No answer." });
  });
});
