import { Generator } from "../chain/generator";
import { compareTables, type CompareRow } from "../table/compare";
import { fingerprint } from "../table/fingerprint";
import type { RateTable } from "../table/rate-table";
import type { SignOff } from "./memory";

/** A table as a person signs it off: its fingerprint and, for a later comparison, its names and arrows. */
export function signOffOf(table: RateTable, checker: string, date: string): SignOff {
  return {
    fingerprint: fingerprint(table),
    date,
    checker,
    names: table.names,
    size: table.size,
    arrows: [...table.generator.arrows()],
  };
}

/** The rows that `COMPARE` gives for the signed-off table and the present one. */
export function changedSince({ names, size, arrows }: SignOff, table: RateTable): CompareRow[] {
  return compareTables({ names, generator: Generator.fromArrows(size, arrows) }, table);
}
