import type { Cells, CellValue } from "../table/rate-table";
import type { Span } from "./finding";

/**
 * What only someone who sees the sheet can tell: formulas, formats, hidden lines, merged cells, neighbours, calculation
 * mode. Positions are relative to the audited range. A fact that the host cannot give is left out, and its rules stay silent.
 */
export interface SheetFacts {
  readonly texts?: Lines<string>;
  readonly formulas?: Lines<string>;
  readonly formats?: Lines<string>;
  readonly hiddenRows?: readonly number[];
  readonly hiddenColumns?: readonly number[];
  readonly merged?: readonly Span[];
  readonly neighbours?: {
    readonly above: readonly CellValue[];
    readonly below: readonly CellValue[];
    readonly left: readonly CellValue[];
    readonly right: readonly CellValue[];
  };
  readonly calculation?: "automatic" | "manual";
}

type Lines<T> = readonly (readonly T[])[];
type SheetValue = number | string | boolean;
type Known<T> = T | "unknown";

/** What a host's reading of a range has to offer here; `Workbook.read` gives it as it is. */
export interface SheetReading {
  readonly address: Span;
  readonly texts: Lines<string>;
  readonly formulas: Lines<string>;
  readonly formats: Lines<string>;
  readonly facts: {
    readonly hiddenRows: Known<readonly number[]>;
    readonly hiddenColumns: Known<readonly number[]>;
    readonly merged: Known<readonly Span[]>;
    readonly neighbours: Known<Record<"above" | "below" | "left" | "right", readonly SheetValue[]>>;
    readonly calculation: Known<"automatic" | "manual">;
  };
}

export function sheetFacts(reading: SheetReading): SheetFacts {
  const { address, facts } = reading;
  const known = <T>(fact: Known<T>): T | undefined => (fact === "unknown" ? undefined : (fact as T));
  const neighbours = known(facts.neighbours);
  return {
    texts: reading.texts,
    formulas: reading.formulas,
    formats: reading.formats,
    hiddenRows: known(facts.hiddenRows)?.map((row) => row - address.row),
    hiddenColumns: known(facts.hiddenColumns)?.map((column) => column - address.column),
    merged: known(facts.merged)?.map((area) => ({
      row: area.row - address.row,
      column: area.column - address.column,
      rows: area.rows,
      columns: area.columns,
    })),
    neighbours: neighbours && {
      above: neighbours.above.map(cellFrom),
      below: neighbours.below.map(cellFrom),
      left: neighbours.left.map(cellFrom),
      right: neighbours.right.map(cellFrom),
    },
    calculation: known(facts.calculation),
  };
}

const FAULT = /^#(NULL!|DIV\/0!|VALUE!|REF!|NAME\?|NUM!|N\/A|SPILL!|CALC!|GETTING_DATA|FIELD!|BLOCKED!|CONNECT!|UNKNOWN!|BUSY!)$/i;

/** Sheet values as the audit takes them: "" is blank, an error code becomes a fault. */
export function cellsFrom(values: Lines<SheetValue>): Cells {
  return values.map((line) => line.map(cellFrom));
}

function cellFrom(value: SheetValue): CellValue {
  if (value === "") return null;
  return typeof value === "string" && FAULT.test(value) ? { fault: value } : value;
}
