/**
 * The example that the practice workbook opens with: a plan on a clean rate table, and a colleague's table with planted
 * mistakes. Places, people and figures are invented.
 */
import { Book, type BookFile } from "../engine";
import { chillerRates, fromColleague, plan } from "./chillers";
import { place, type DemoSheet } from "./sheet";

export const DEMO_SHEETS: readonly DemoSheet[] = [plan, chillerRates, fromColleague];

export function demoFile(): BookFile {
  const book = new Book();
  place(book, DEMO_SHEETS);
  return book.toJSON();
}
