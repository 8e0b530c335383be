/** How a sheet that the pane has added looks and prints. */
import { type SheetLook } from "../../pane/workbook";
import { rangeAt } from "./place";
import { HostRefusal, run } from "./run";

/** Points of a column so many characters wide: in the host's standard font a digit has 7 pixels and a cell 5 of margin, at 96 to the inch. */
const pointsOf = (characters: number): number => (characters * 7 + 5) * 0.75;
/** Longest footer that the host takes. */
const FOOTER_CHARACTERS = 255;

export function presentSheet(name: string, look: SheetLook): Promise<void> {
  return run(async (context) => {
    const sheet = context.workbook.worksheets.getItemOrNullObject(name).load("name");
    await context.sync();
    if (sheet.isNullObject) throw new HostRefusal(`There is no sheet "${name}" any more.`);
    for (const [column, characters] of look.columnWidths.entries()) {
      sheet.getRangeByIndexes(0, column, 1, 1).format.columnWidth = pointsOf(characters);
    }
    for (const row of look.boldRows) {
      rangeAt(context, { sheet: name, row, column: 0, rows: 1, columns: Math.max(1, look.columnWidths.length) }).format.font.bold = true;
    }
    sheet.pageLayout.zoom = { horizontalFitToPages: 1 };
    // The host reads an ampersand as the start of a code.
    sheet.pageLayout.headersFooters.defaultForAllPages.centerFooter = look.footer.replace(/&/g, "&&").slice(0, FOOTER_CHARACTERS);
    await context.sync();
  });
}

/** The workbook's file name. */
export const workbookName = (): Promise<string> =>
  run(async (context) => {
    const workbook = context.workbook.load("name");
    await context.sync();
    return workbook.name;
  });
