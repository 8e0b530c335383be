/**
 * The example that the practice workbook opens with: a plan on a clean rate table, a colleague's table with planted
 * mistakes, and a sheet for each section of the catalogue. Places, people and figures are invented.
 */
import { Book, type BookFile } from "../engine";
import { chillerRates, fromColleague, plan } from "./chillers";
import { sectionsAToD } from "./sections-a-d";
import { sectionsEToH } from "./sections-e-h";
import { place, type DemoSheet } from "./sheet";

export const DEMO_SHEETS: readonly DemoSheet[] = [plan, chillerRates, fromColleague, ...sectionsAToD, ...sectionsEToH];

export function demoFile(): BookFile {
  const book = new Book();
  place(book, DEMO_SHEETS);
  return book.toJSON();
}
