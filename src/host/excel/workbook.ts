/** The pane's view of an Excel workbook. */
import { type RangeAddress, type Workbook } from "../../pane/workbook";
import { calculation, recalculate } from "./calculation";
import { Events } from "./events";
import { freeze, frozen, thaw } from "./freeze";
import { addChart, addPicture, placeFormula } from "./objects";
import { placeText, rangeAt } from "./place";
import { presentSheet, workbookName } from "./presenting";
import { readRange, readSelection, readSheets, scanRange } from "./reading";
import { relink, unlinked } from "./relink";
import { HostRefusal, run } from "./run";
import { store } from "./store";
import { Writing } from "./writing";

export function excelWorkbook(): Workbook {
  const writing = new Writing();
  const events = new Events();
  return {
    host: "excel",
    sheets: readSheets,
    selection: readSelection,
    // Async, so that a refusal is always a rejection.
    read: async (range) => readRange(range),
    scan: async (range) => scanRange(range),
    write: (batch) => writing.write(batch),
    addSheet: (name, cells, formats) => writing.addSheet(name, cells, formats),
    select,
    undo: () => writing.undo(),
    on: (event, listener) => events.on(event, listener),
    store,
    name: workbookName,
    presentSheet,
    placeFormula: (place, formula, size) => placeFormula(writing, place, formula, size),
    addPicture,
    addChart,
    shared: { unlinked, relink, frozen, freeze, thaw, calculation, recalculate },
  };
}

const select = (at: RangeAddress): Promise<void> =>
  run(async (context) => {
    const sheet = context.workbook.worksheets.getItemOrNullObject(at.sheet).load("visibility");
    await context.sync();
    if (sheet.isNullObject) throw new HostRefusal(`There is no sheet "${at.sheet}" any more.`);
    if (sheet.visibility !== "Visible") throw new HostRefusal(`${placeText(at.sheet, at.row, at.column)} is on a hidden sheet. Unhide "${at.sheet}" to go there.`);
    sheet.activate();
    rangeAt(context, at).select();
    await context.sync();
  });
