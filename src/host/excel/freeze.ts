/**
 * Formulas kept as values, for people without the add-in, and brought back. What was a formula is remembered twice:
 * in the workbook's settings, from which it is brought back, and on a sheet, where a person can read it.
 */
import { fingerprint } from "../../table/fingerprint";
import { readRateTable } from "../../table/read";
import { type FrozenFormula, type HostValue, type Outcome } from "../../pane/workbook";
import { frozenEntry } from "./entry";
import { ourFormulas, type FoundFormula } from "./our-formulas";
import { cellText, placeText, rangeAt } from "./place";
import { protectedSheets, refusalFor } from "./protected";
import { HostRefusal, run } from "./run";
import { getSetting, queueSetting } from "./store";
import { tableReference, type TableReference } from "./table-reference";
import { freeName } from "./writing";

const KEY = "ctmc.frozen";
const LIST_NAME = "Frozen formulas";
const HEADINGS = ["Sheet", "Cell", "Formula", "Values as of", "Fingerprint of its table", "Now"];
/** Cells that show no answer: frozen, these would only hide that something is to be done. */
const NO_ANSWER = /^#(NAME\?|BUSY!|SPILL!|CALC!|GETTING_DATA|CONNECT!|BLOCKED!)$/;

interface Frozen extends FrozenFormula {
  /** Stays when the sheet is renamed. */
  readonly sheetId: string;
  /** Of the values that stand there now: a block that was changed since is not overwritten. */
  readonly digest: string;
  /** Row on the list. */
  readonly listRow: number;
}

interface Record {
  readonly version: 1;
  readonly listSheet: string;
  readonly formulas: readonly Frozen[];
}

export const frozen = (): Promise<readonly FrozenFormula[]> =>
  run(async (context) =>
    (await recordOf(context)).formulas.map(({ sheet, row, column, rows, columns, formula, date, fingerprint }) => ({ sheet, row, column, rows, columns, formula, date, fingerprint })),
  );

async function recordOf(context: Excel.RequestContext): Promise<Record> {
  const kept = (await getSetting(context, KEY)) as Partial<Record> | undefined;
  if (kept === undefined) return { version: 1, listSheet: "", formulas: [] };
  if (kept.version !== 1 || !Array.isArray(kept.formulas)) throw new HostRefusal("The formulas kept in this workbook were written by a newer version of this add-in. Update it to bring them back.");
  return kept as Record;
}

export function freeze(now: Date): Promise<Outcome & { readonly sheet: string | null }> {
  return run(async (context) => {
    const record = await recordOf(context);
    const found = await ourFormulas(context);
    const closed = await protectedSheets(context, found);
    const shown = found.filter((one) => !NO_ANSWER.test(String(one.value)));
    const ready = shown.filter((one) => !closed.has(one.sheet));
    const refused = [
      ...[...closed].map((sheet) => refusalFor(sheet, found.filter((one) => one.sheet === sheet).length)),
      ...found.filter((one) => !shown.includes(one)).map((one) => `${placeText(one.sheet, one.row, one.column)} shows ${one.value}; its formula was left as it is.`),
    ];
    if (ready.length === 0) return { done: 0, sheet: null, refused };

    const blocks = await blocksOf(context, ready);
    const prints = await fingerprints(context, ready);
    const list = await listSheet(context, record);
    const date = now.toISOString();
    // A new list also takes up what was frozen before and is not back yet.
    const earlier = list.isNew ? record.formulas.map((one, i) => ({ ...one, listRow: 1 + i })) : record.formulas;
    const firstRow = list.isNew ? 1 + earlier.length : list.nextRow;
    const items = ready.map((one, i): Omit<Frozen, "digest"> => {
      const { sheet, row, column, formula } = one;
      const { rows, columns, sheetId } = blocks[i];
      return { sheet, row, column, formula, rows, columns, sheetId, date, fingerprint: prints[i], listRow: firstRow + i };
    });
    for (const { range, values } of blocks) range.formulas = values.map((cells) => cells.map(frozenEntry)) as string[][];
    queueList(list, list.isNew ? [...earlier, ...items] : items);
    const keep = async (valuesNow: readonly HostValue[][][]): Promise<void> => {
      const digests = await Promise.all(valuesNow.map(digestOf));
      const formulas = [...earlier, ...items.map((one, i) => ({ ...one, digest: digests[i] }))];
      queueSetting(context, KEY, { version: 1, listSheet: list.name, formulas } satisfies Record);
    };
    // Kept in the same step as the change, so that no formula is ever only in one place; then with the values as the host holds them.
    await keep(blocks.map((one) => one.values));
    for (const { range } of blocks) range.load("values");
    await context.sync();
    await keep(blocks.map(({ range }) => range.values as HostValue[][]));
    await context.sync();
    return { done: items.length, sheet: list.name, refused };
  });
}

interface Block {
  readonly range: Excel.Range;
  readonly rows: number;
  readonly columns: number;
  readonly values: HostValue[][];
  readonly sheetId: string;
}

/** What each formula fills: its spill, or its own cell. */
async function blocksOf(context: Excel.RequestContext, formulas: readonly FoundFormula[]): Promise<Block[]> {
  const asked = formulas.map((one) => {
    const cell = rangeAt(context, { ...one, rows: 1, columns: 1 }).load("values");
    return { cell, sheet: cell.worksheet.load("id"), spill: cell.getSpillingToRangeOrNullObject().load("rowCount, columnCount, values") };
  });
  await context.sync();
  return asked.map(({ cell, sheet, spill }, i) => {
    const [rows, columns] = spill.isNullObject ? [1, 1] : [spill.rowCount, spill.columnCount];
    // By its place: what a formula spills to is no range any more once the formula is gone.
    const range = rangeAt(context, { ...formulas[i], rows, columns });
    return { range, rows, columns, values: (spill.isNullObject ? cell : spill).values as HostValue[][], sheetId: sheet.id };
  });
}

/** The fingerprint of the rate table that each formula reads; null where its first argument is no plain range or holds no table. */
async function fingerprints(context: Excel.RequestContext, formulas: readonly FoundFormula[]): Promise<(string | null)[]> {
  const wanted = formulas.map((one) => tableReference(one.formula));
  const sheets = wanted.map((one, i) => (one ? context.workbook.worksheets.getItemOrNullObject(one.sheet ?? formulas[i].sheet).load("name") : null));
  await context.sync();
  const ranges = wanted.map((one, i) => {
    const sheet = sheets[i];
    return one && sheet && !sheet.isNullObject ? rangeOf(sheet, one).load("values") : null;
  });
  await context.sync();
  return ranges.map((range) => {
    if (!range || range.isNullObject) return null;
    try {
      return fingerprint(readRateTable(range.values as HostValue[][]));
    } catch {
      return null;
    }
  });
}

const rangeOf = (sheet: Excel.Worksheet, { address, spill }: TableReference): Excel.Range =>
  spill ? sheet.getRange(address).getSpillingToRangeOrNullObject() : sheet.getRange(address);

interface List {
  readonly sheet: Excel.Worksheet;
  readonly name: string;
  readonly nextRow: number;
  readonly isNew: boolean;
}

/** The sheet that lists what is frozen: the one of an earlier time, or a new one. */
async function listSheet(context: Excel.RequestContext, record: Record): Promise<List> {
  const sheets = context.workbook.worksheets.load("items/name");
  const structure = context.workbook.protection.load("protected");
  const earlier = context.workbook.worksheets.getItemOrNullObject(record.listSheet || LIST_NAME);
  const used = earlier.getUsedRangeOrNullObject(true).load("rowIndex, rowCount");
  earlier.load("name");
  await context.sync();
  if (record.listSheet !== "" && !earlier.isNullObject) {
    const closed = await protectedSheets(context, [{ sheet: record.listSheet, row: 0, column: 0 }]);
    if (closed.size > 0) throw new HostRefusal(`The sheet "${record.listSheet}", which lists what is frozen, is protected. Unprotect it, then try again.`);
    return { sheet: earlier, name: record.listSheet, nextRow: used.isNullObject ? 1 : used.rowIndex + used.rowCount, isNew: used.isNullObject };
  }
  if (structure.protected) throw new HostRefusal("The workbook's structure is protected, so the list of frozen formulas cannot be added. Unprotect it (Review, Protect Workbook), then try again.");
  const name = freeName(LIST_NAME, sheets.items.map((one) => one.name));
  return { sheet: context.workbook.worksheets.add(name), name, nextRow: 1, isNew: true };
}

function queueList(list: List, items: readonly Omit<Frozen, "digest">[]): void {
  const rows = items.map((one) => [one.sheet, cellText(one.row, one.column), one.formula, one.date, one.fingerprint ?? "", "values"].map((text) => (text === "" ? "" : `'${text}`)));
  if (list.isNew) list.sheet.getRangeByIndexes(0, 0, 1, HEADINGS.length).values = [HEADINGS];
  list.sheet.getRangeByIndexes(list.nextRow, 0, rows.length, HEADINGS.length).values = rows;
}

export function thaw(): Promise<Outcome> {
  return run(async (context) => {
    const record = await recordOf(context);
    const sheets = record.formulas.map((one) => context.workbook.worksheets.getItemOrNullObject(one.sheetId).load("name"));
    await context.sync();
    const there = record.formulas.flatMap((one, i) => (sheets[i].isNullObject ? [] : [{ one: { ...one, sheet: sheets[i].name }, range: null as Excel.Range | null }]));
    const closed = await protectedSheets(context, there.map(({ one }) => one));
    for (const item of there) item.range = rangeAt(context, item.one).load("values");
    await context.sync();
    const refused: string[] = [...closed].map((sheet) => refusalFor(sheet, there.filter(({ one }) => one.sheet === sheet).length));
    for (const [i, one] of record.formulas.entries()) if (sheets[i].isNullObject) refused.push(`The sheet "${one.sheet}" is gone; ${one.formula} stays on the list.`);
    const back = new Set<string>();
    for (const { one, range } of there) {
      if (!range || closed.has(one.sheet)) continue;
      if ((await digestOf(range.values as HostValue[][])) !== one.digest) {
        refused.push(`${placeText(one.sheet, one.row, one.column)} was changed since; its formula stays on the list.`);
        continue;
      }
      range.clear("Contents" as Excel.ClearApplyTo);
      rangeAt(context, { ...one, rows: 1, columns: 1 }).formulas = [[one.formula]];
      back.add(keyOf(one));
    }
    const list = context.workbook.worksheets.getItemOrNullObject(record.listSheet || LIST_NAME).load("name");
    await context.sync();
    const done = record.formulas.filter((one) => back.has(keyOf(one)));
    const marked = !list.isNullObject && (await protectedSheets(context, [{ sheet: list.name, row: 0, column: 0 }])).size === 0;
    if (marked) for (const one of done) list.getRangeByIndexes(one.listRow, HEADINGS.length - 1, 1, 1).values = [["formula"]];
    queueSetting(context, KEY, { ...record, formulas: record.formulas.filter((one) => !back.has(keyOf(one))) } satisfies Record);
    await context.sync();
    return { done: done.length, refused };
  });
}

const keyOf = (one: Pick<Frozen, "sheetId" | "row" | "column">): string => `${one.sheetId} ${one.row} ${one.column}`;

async function digestOf(values: readonly (readonly HostValue[])[]): Promise<string> {
  const bytes = await crypto.subtle.digest("SHA-256", new TextEncoder().encode(JSON.stringify(values)));
  return [...new Uint8Array(bytes)].map((byte) => byte.toString(16).padStart(2, "0")).join("");
}
