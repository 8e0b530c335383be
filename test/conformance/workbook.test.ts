import { PracticeWorkbook, type PageView } from "../../src/host/practice/workbook";
import { type Area, type Book } from "../../src/host/practice/engine";
import { excelHost } from "../support/excel/host";
import { bookHost } from "../support/book-host";
import { describeWorkbook } from "./workbook";

describeWorkbook("Excel", (sheets) => excelHost(sheets));

describeWorkbook("the practice page", (sheets) => {
  const { book, ...host } = bookHost(sheets);
  return { ...host, workbook: new PracticeWorkbook(book, pageOf(book)) };
});

/** The part of the page that the adapter uses: a selection, and no edit under way. */
function pageOf(book: Book): PageView {
  const listeners = new Set<() => void>();
  let selection: Area = { sheet: book.sheets()[0].id, row: 0, column: 0, rows: 1, columns: 1 };
  return {
    get selection() {
      return selection;
    },
    readOnly: null,
    settle: () => undefined,
    select(area) {
      selection = area;
      for (const listener of listeners) listener();
    },
    onSelection(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
  };
}
