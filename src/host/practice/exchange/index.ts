/** Workbooks from and to .xlsx files. Import this module lazily: `await import("../exchange")`. */
export { openXlsx, type Opened } from "./open";
export { ExchangeRefused } from "./refused";
export { saveXlsx } from "./save";
