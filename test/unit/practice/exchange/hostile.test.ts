import { describe, expect, test } from "vitest";
import { Book } from "../../../../src/host/practice/engine";
import { ExchangeRefused, openXlsx, saveXlsx } from "../../../../src/host/practice/exchange";
import { crc32, LIMITS, unzip, zip } from "../../../../src/host/practice/exchange/zip";

const bytes = (text: string) => new TextEncoder().encode(text);

async function parts(change: (parts: Map<string, Uint8Array>) => void): Promise<Uint8Array> {
  const contents = await unzip(await saveXlsx(new Book()));
  change(contents);
  return zip(contents, true);
}

const edited = (name: string, change: (xml: string) => string) =>
  parts((contents) => contents.set(name, bytes(change(new TextDecoder().decode(contents.get(name))))));

async function refusal(file: Uint8Array | Promise<Uint8Array>, limits = LIMITS): Promise<string> {
  const error: unknown = await openXlsx(await file, limits).then(() => null, (reason: unknown) => reason);
  expect(error).toBeInstanceOf(ExchangeRefused);
  return (error as Error).message;
}

test("the check sum of zip files (value of \"123456789\" in the catalogue of check sums, CRC-32/ISO-HDLC; from memory)", () => expect(crc32(bytes("123456789"))).toBe(0xcbf43926));

describe("files that are no workbooks", () => {
  test.each([
    ["nothing", new Uint8Array(0), /no zip file/],
    ["text", bytes("a,b\n1,2\n".repeat(20)), /no zip file/],
    ["an old or protected file", Uint8Array.of(0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1), /password or is of the old \.xls kind/],
  ])("%s", async (_, file, sentence) => expect(await refusal(file)).toMatch(sentence));
  test("another zip file", async () => expect(await refusal(zip(new Map([["hello.txt", bytes("hello")]]), true))).toMatch(/no table of contents/));
  test("the binary kind", async () => expect(await refusal(parts((contents) => contents.set("xl/workbook.bin", bytes("x"))))).toMatch(/\.xlsb/));
});

describe("damage", () => {
  test("cut off at any place, or with any byte changed: refused or opened, never anything else", async () => {
    const whole = await saveXlsx(Book.fromJSON({ version: 1, sheets: [{ id: "a", name: "A", cells: [[0, 0, 1], [1, 1, "=A1+1"], [2, 0, "text", "0.0"]] }], store: { "ctmc.audit": 1 } }));
    const outcomes = { refused: 0, opened: 0 };
    const attempt = async (file: Uint8Array) => {
      try {
        Book.fromJSON((await openXlsx(file)).file);
        outcomes.opened++;
      } catch (error) {
        expect(["ExchangeRefused", "FileRefused"]).toContain((error as Error).name);
        outcomes.refused++;
      }
    };
    for (let length = 0; length < whole.length; length += 97) await attempt(whole.slice(0, length));
    expect(outcomes.opened).toBe(0);
    let random = 12345;
    for (let turn = 0; turn < 150; turn++) {
      const changed = whole.slice();
      for (let mark = 0; mark < 3; mark++) {
        random = (random * 1103515245 + 12345) % 2 ** 31;
        changed[random % changed.length] = random >> 8;
      }
      await attempt(changed);
    }
    expect(outcomes.refused).toBeGreaterThan(60);
  });
  test("a sheet that is missing, or a workbook that names none", async () => {
    expect(await refusal(parts((contents) => contents.delete("xl/workbook.xml")))).toMatch(/no workbook part/);
    expect(await refusal(parts((contents) => contents.delete("xl/worksheets/sheet1.xml")))).toMatch(/missing|damaged/);
    expect(await refusal(edited("xl/workbook.xml", (xml) => xml.replace(/<sheets>.*<\/sheets>/, "<sheets></sheets>")))).toMatch(/no sheets|damaged/);
  });
});

describe("hostile files", () => {
  test("too large, too many parts, too much unpacked, too tightly packed", async () => {
    const file = await saveXlsx(new Book());
    expect(await refusal(file, { ...LIMITS, fileBytes: 1000 })).toMatch(/at most 0 MB/);
    expect(await refusal(file, { ...LIMITS, entries: 3 })).toMatch(/parts; at most 3/);
    expect(await refusal(file, { ...LIMITS, unpackedBytes: 2000 })).toMatch(/would unpack to more than/);
    const bomb = parts((contents) => contents.set("xl/media/zeros.bin", new Uint8Array(5_000_000)));
    expect(await refusal(bomb)).toMatch(/would grow to \d+ times its size/);
  });
  test("a part that is larger, or shorter, than it claims", async () => {
    for (const [claim, sentence] of [[10, /larger than it claims/], [900_000, /shorter than it claims/]] as const) {
      const file = await zip(new Map([["[Content_Types].xml", new Uint8Array(100_000).fill(65)]]), true);
      const view = new DataView(file.buffer);
      for (let at = 0; at + 4 < file.length; at++) if (view.getUint32(at, true) === 0x02014b50) view.setUint32(at + 24, claim, true);
      expect(await refusal(file)).toMatch(sentence);
    }
  });
  test("entities, two parts of one name, columns without end", async () => {
    expect(await refusal(edited("xl/workbook.xml", (xml) => xml.replace("<workbook", '<!DOCTYPE x [<!ENTITY a "aaaa">]><workbook')))).toMatch(/declares entities/);
    expect(await refusal(parts((contents) => contents.set("XL/workbook.xml", bytes("x"))))).toMatch(/two parts named/);
    expect(await refusal(edited("xl/worksheets/sheet1.xml", (xml) => xml.replace("<sheetData", '<cols><col min="1" max="4294967295" width="9"/></cols><sheetData')))).toMatch(/describes column 4294967295/);
  });
  test("names that would reach into objects of the program", async () => {
    const { file } = await openXlsx(await edited("customXml/item1.xml", () => "").catch(() => saveXlsx(new Book())));
    expect(Object.keys(file.store)).toEqual([]);
    const book = new Book();
    book.store.set("x", 1);
    const contents = await unzip(await saveXlsx(book));
    const name = "customXml/item1.xml";
    contents.set(name, bytes(new TextDecoder().decode(contents.get(name)).replace('key="x"', 'key="__proto__"')));
    expect((await openXlsx(await zip(contents, true))).file.store).toEqual({});
    expect(({} as Record<string, unknown>).x).toBe(undefined);
  });
});

test("what a file holds beyond what is kept is said in a sentence", async () => {
  const file = await parts((contents) => {
    contents.set("xl/charts/chart1.xml", bytes("<c/>"));
    contents.set("xl/vbaProject.bin", bytes("x"));
  });
  expect((await openXlsx(file)).notes).toEqual([
    "Not opened here, and not kept when you save: charts, macros.",
  ]);
});
