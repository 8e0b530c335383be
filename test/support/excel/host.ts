import { vi } from "vitest";
import { excelWorkbook } from "../../../src/host/excel/workbook";
import { type Book } from "../../../src/host/practice/engine";
import { type TestHost, type TestSheet } from "../../conformance/workbook";
import { bookHost, type BookHost } from "../book-host";
import { fakeExcel, type FakeState } from "./fake-excel";

export interface ExcelTestHost extends TestHost, Pick<BookHost, "book" | "id"> {
  readonly state: FakeState;
}

/** The Excel adapter over the stand-in for the host, which becomes the global `Excel` and `Office` until the next one. */
export function excelHost(sheets: readonly TestSheet[], book?: Book): ExcelTestHost {
  const host = bookHost(sheets, book);
  const { Excel, Office, state } = fakeExcel(host.book);
  vi.stubGlobal("Excel", Excel);
  vi.stubGlobal("Office", Office);
  return { ...host, state, workbook: excelWorkbook(), protect: (sheet) => void state.protectedSheets.add(sheet) };
}
