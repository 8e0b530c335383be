/** The engine of the practice workbook, as its page and its file exchange use it. */
export { areaText, cellText, columnFromText, columnText, COLUMN_LIMIT, columnOf, keyOf, parseArea, quoteSheet, ROW_LIMIT, rowOf, splitSheet, type Area, type Rect } from "./address";
export { Book, DEFAULT_WIDTH, type BookOptions, type CellsChanged, type CellView, type SheetView } from "./book";
export { functionList, type FunctionHelp } from "./completion";
export { CustomFunctionHost, type Conventions, type FunctionMetadata, type FunctionsFile } from "./custom-functions";
export { EditRefused, sheetNameProblem, type Edit } from "./edits";
export { readEntry } from "./entry";
export { FILE_VERSION, FileRefused, type BookFile, type CellRecord, type ContentRecord, type NameRecord, type SheetRecord } from "./file";
export { shiftFormula } from "./formula";
export { callAt, pieces, type CallAt, type Piece, type PieceKind } from "./formula-text";
export { CANONICAL, localeOf, toCanonical, toLocal, type Locale } from "./locale";
export { formatValue, isDateFormat, isPercentFormat } from "./number-format";
export { copy, fill, fillDown, fillRight, move, paste, readFields, type Clip } from "./transfer";
export { Fault, type Scalar } from "./value";
