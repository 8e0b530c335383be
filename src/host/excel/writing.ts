/** Changes to the workbook, each one step, and taking back the last. */
import { type HostValue, type RangeAddress, type Write } from "../../pane/workbook";
import { entry, frozenEntry } from "./entry";
import { placeText, rangeAt } from "./place";
import { HostRefusal, run } from "./run";
import { contentsOf, spilledCells } from "./spills";

/** A rectangle before and after a step, enough to take the step back. */
interface Change {
  readonly at: RangeAddress;
  readonly before: { readonly formulas: readonly (readonly (HostValue | null)[])[]; readonly formats: readonly (readonly string[])[] };
  readonly after: readonly (readonly unknown[])[];
}

interface Step {
  readonly changes: readonly Change[];
  /** Name of the sheet that the step added. */
  readonly addedSheet?: string;
}

/** So many steps can be taken back. */
const DEPTH = 20;

/**
 * Writes, and remembers how to take it back. The host's own undo serves the person at the sheet and cannot be
 * called by an add-in, so the pane's button undoes what the pane did.
 */
export class Writing {
  private readonly steps: Step[] = [];

  /** Writes all rectangles in one batch: all or none. */
  async write(batch: readonly Write[]): Promise<void> {
    const filled = batch.filter((one) => one.cells.length > 0 && one.cells[0].length > 0);
    if (filled.length === 0) return;
    const changes = await run((context) => writeAll(context, filled));
    this.remember({ changes });
  }

  async addSheet(name: string, cells: Write["cells"], formats?: Write["formats"]): Promise<string> {
    const step = await run(async (context) => {
      const sheets = context.workbook.worksheets.load("items/name");
      const structure = context.workbook.protection.load("protected");
      await context.sync();
      if (structure.protected) throw new HostRefusal("The workbook's structure is protected, so no sheet can be added. Unprotect it (Review, Protect Workbook), then try again.");
      const free = freeName(name, sheets.items.map((sheet) => sheet.name));
      context.workbook.worksheets.add(free);
      const filled = cells.length > 0 && cells[0].length > 0;
      const changes = filled ? await writeAll(context, [{ sheet: free, row: 0, column: 0, cells, formats }]) : [];
      await context.sync();
      return { changes, addedSheet: free };
    });
    this.remember(step);
    return step.addedSheet;
  }

  async undo(): Promise<void> {
    const step = this.steps.at(-1);
    if (!step) throw new HostRefusal("There is nothing to take back.");
    await run(async (context) => {
      const now = step.changes.map(({ at }) => rangeAt(context, at).load("formulas"));
      await context.sync();
      const touched = step.changes.find(({ after }, i) => JSON.stringify(now[i].formulas) !== JSON.stringify(after));
      if (touched) {
        throw new HostRefusal(`${placeText(touched.at.sheet, touched.at.row, touched.at.column)}: cells that this step wrote have changed since. Nothing was taken back.`);
      }
      if (step.addedSheet !== undefined) context.workbook.worksheets.getItem(step.addedSheet).delete();
      else {
        for (const { at, before } of [...step.changes].reverse()) {
          const range = rangeAt(context, at);
          range.numberFormat = before.formats as string[][];
          range.formulas = before.formulas as string[][];
        }
      }
      await context.sync();
    });
    this.steps.pop();
  }

  private remember(step: Step): void {
    this.steps.push(step);
    if (this.steps.length > DEPTH) this.steps.shift();
  }
}

/** Looks at what is there, refuses what must not be written to, then writes everything before one synchronisation. */
async function writeAll(context: Excel.RequestContext, batch: readonly Write[]): Promise<Change[]> {
  const places = batch.map((one): RangeAddress => ({ sheet: one.sheet, row: one.row, column: one.column, rows: one.cells.length, columns: one.cells[0].length }));
  await refuseProtected(context, places);
  const ranges = places.map((at) => rangeAt(context, at).load("formulas, values, numberFormat, hasSpill"));
  await context.sync();
  const before: Change["before"][] = [];
  for (const [i, range] of ranges.entries()) {
    // Rare, and each answer is needed before the first change, hence a round trip of its own.
    const spilled = range.hasSpill === false ? null : await spilledCells(context, places[i], range.formulas);
    before.push({ formulas: typedAgain(contentsOf(range, spilled), range.values as HostValue[][]), formats: range.numberFormat as string[][] });
  }
  for (const [i, one] of batch.entries()) {
    if (one.formats) ranges[i].numberFormat = one.formats.map((row) => row.map((format) => format ?? null)) as string[][];
    ranges[i].formulas = one.cells.map((row) => row.map(entry)) as string[][];
    ranges[i].load("formulas");
  }
  await context.sync();
  return places.map((at, i) => ({ at, before: before[i], after: ranges[i].formulas }));
}

/** Contents to write back: formulas as such, all else by its value, so that text is marked as text and numbers keep every digit. */
const typedAgain = (contents: readonly (readonly string[])[], values: readonly (readonly HostValue[])[]): (HostValue | null)[][] =>
  contents.map((row, i) => row.map((content, j) => (content === "" || content.startsWith("=") ? content : frozenEntry(values[i][j]))));

/** @throws a sentence where a rectangle lies on a protected sheet and is not unlocked, or the sheet is not there */
export async function refuseProtected(context: Excel.RequestContext, places: readonly RangeAddress[]): Promise<void> {
  const names = [...new Set(places.map((at) => at.sheet))];
  const sheets = names.map((name) => context.workbook.worksheets.getItemOrNullObject(name).load("name"));
  await context.sync();
  const missing = names.find((_, i) => sheets[i].isNullObject);
  if (missing !== undefined) throw new HostRefusal(`There is no sheet "${missing}" any more.`);
  const protections = sheets.map((sheet) => sheet.protection.load("protected"));
  const locks = places.map((at) => rangeAt(context, at).format.protection.load("locked"));
  await context.sync();
  const closed = places.find((at, i) => protections[names.indexOf(at.sheet)].protected && locks[i].locked !== false);
  if (closed) {
    throw new HostRefusal(`The sheet "${closed.sheet}" is protected and ${placeText(closed.sheet, closed.row, closed.column)} is locked. Unprotect the sheet (Review, Unprotect Sheet), then try again.`);
  }
}

/** A name that Excel takes and no sheet has yet: without the signs it refuses, at most 31 characters, numbered if need be. */
export function freeName(wanted: string, taken: readonly string[]): string {
  const plain = wanted.replace(/[[\]:*?/\\]/g, " ").replace(/\s+/g, " ").trim().replace(/^'+|'+$/g, "") || "Sheet";
  // Excel keeps "History" for itself.
  const base = plain.toLowerCase() === "history" ? `${plain} 1` : plain;
  const known = new Set(taken.map((name) => name.toLowerCase()));
  for (let number = 1; ; number++) {
    const suffix = number === 1 ? "" : ` ${number}`;
    const name = base.slice(0, 31 - suffix.length).trimEnd() + suffix;
    if (!known.has(name.toLowerCase())) return name;
  }
}
