/** Stands in for office.js in a page: the host's objects over a workbook of the engine, which calculates with the page's own functions.js. */
import { Book, CustomFunctionHost } from "../../../src/host/practice/engine";
import { fakeExcel, type FakeState } from "./fake-excel";

export interface PageHost {
  readonly book: Book;
  readonly state: FakeState;
}

const functions = new CustomFunctionHost();
functions.install(window);
const book = new Book({ functions });
const { sheets } = window as unknown as { sheets: { name: string; cells: (string | number)[][] }[] };
const [opening] = book.sheets();
if (opening) book.apply([{ kind: "renameSheet", sheet: opening.id, name: sheets[0].name }], "open");
for (const { name, cells } of sheets) {
  if (!book.sheetNamed(name)) book.apply([{ kind: "addSheet", name }], "open");
  const sheet = book.sheetNamed(name)!.id;
  cells.forEach((line, row) => line.forEach((text, column) => text !== "" && book.apply([{ kind: "type", sheet, row, column, text: String(text) }], "open")));
}

const { Excel, Office, state } = fakeExcel(book);
const { context } = Office as { context: object };
Object.assign(window, {
  host: { book, state } satisfies PageHost,
  Excel,
  Office: {
    HostType: { Excel: "Excel" },
    StartupBehavior: { load: "Load" },
    addin: { setStartupBehavior: () => Promise.resolve() },
    context: { ...context, officeTheme: { bodyBackgroundColor: "#ffffff" } },
    async onReady() {
      functions.useMetadata(await (await fetch("functions.json")).json());
      return { host: "Excel" };
    },
  },
});
