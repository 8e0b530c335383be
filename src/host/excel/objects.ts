/** Formulas with room to spill, pictures and charts. */
import { type ChartWish, type HostValue, type Picture, type Place, type Write } from "../../pane/workbook";
import { placeText, rangeAt } from "./place";
import { HostRefusal, run } from "./run";
import { type Writing } from "./writing";

const CHART_KINDS: Readonly<Record<ChartWish["kind"], Excel.ChartType>> = {
  line: "Line" as Excel.ChartType,
  columns: "ColumnClustered" as Excel.ChartType,
  stackedAreas: "AreaStacked" as Excel.ChartType,
};

/** Puts a formula where all that its answer needs is empty, and takes it back if the host finds the place too small all the same. */
export async function placeFormula(writing: Writing, place: Place, formula: string, size: { readonly rows: number; readonly columns: number }): Promise<void> {
  await run(async (context) => {
    const range = rangeAt(context, { ...place, ...size }).load("values");
    await context.sync();
    const filled = firstFilled(range.values as HostValue[][]);
    if (filled) {
      const at = placeText(place.sheet, place.row + filled.row, place.column + filled.column);
      throw new HostRefusal(`${at} is not empty. The answer needs ${size.rows} × ${size.columns} empty cells from ${placeText(place.sheet, place.row, place.column)}.`);
    }
  });
  const write: Write = { ...place, cells: [[formula]] };
  await writing.write([write]);
  const value = await run(async (context) => {
    const cell = rangeAt(context, { ...place, rows: 1, columns: 1 }).load("values");
    await context.sync();
    return cell.values[0][0] as HostValue;
  });
  if (value === "#SPILL!") {
    await writing.undo();
    throw new HostRefusal(`The answer does not fit at ${placeText(place.sheet, place.row, place.column)}: a merged cell or a table is in its way. Nothing was written.`);
  }
}

function firstFilled(values: readonly (readonly HostValue[])[]): { row: number; column: number } | null {
  for (const [row, cells] of values.entries()) {
    const column = cells.findIndex((value) => value !== "");
    if (column >= 0) return { row, column };
  }
  return null;
}

export function addPicture(place: Place, picture: Picture): Promise<void> {
  return run(async (context) => {
    const cell = rangeAt(context, { ...place, rows: 1, columns: 1 }).load("left, top");
    const sheet = context.workbook.worksheets.getItem(place.sheet);
    const protection = sheet.protection.load("protected");
    await context.sync();
    if (protection.protected) throw new HostRefusal(`The sheet "${place.sheet}" is protected, so no picture can be put there.`);
    const shape = sheet.shapes.addImage(picture.png);
    shape.name = picture.name;
    shape.altTextDescription = picture.description;
    shape.lockAspectRatio = false;
    shape.left = cell.left;
    shape.top = cell.top;
    shape.width = picture.width;
    shape.height = picture.height;
    shape.lockAspectRatio = true;
    await context.sync();
  });
}

export function addChart(place: Place, { kind, title, seriesIn }: ChartWish): Promise<void> {
  return run(async (context) => {
    const anchor = rangeAt(context, { ...place, rows: 1, columns: 1 });
    const spill = anchor.getSpillingToRangeOrNullObject().load("left, top, height");
    const sheet = context.workbook.worksheets.getItem(place.sheet);
    const protection = sheet.protection.load("protected");
    await context.sync();
    if (spill.isNullObject) throw new HostRefusal(`${placeText(place.sheet, place.row, place.column)} holds no formula that fills several cells, so there is nothing to draw.`);
    if (protection.protected) throw new HostRefusal(`The sheet "${place.sheet}" is protected, so no chart can be put there.`);
    const chart = sheet.charts.add(CHART_KINDS[kind], spill, (seriesIn === "rows" ? "Rows" : "Columns") as Excel.ChartSeriesBy);
    chart.title.text = title;
    chart.left = spill.left;
    // Below what it draws, a line's height away.
    chart.top = spill.top + spill.height + 15;
    chart.width = 480;
    chart.height = 280;
    await context.sync();
  });
}
