import { absorbingStates } from "../chain/classes";
import { Problem } from "../chain/problem";
import type { RateTable } from "../table/rate-table";
import type { Argument } from "./argument";
import { readStates, type StateSet } from "./states";

/** The states that end a wait; the absorbing states when left out. @throws noTargets where there are none */
export function readTargets(argument: Argument, table: RateTable): StateSet {
  if (argument !== null) return readStates(argument, "targets", table);
  const absorbing = absorbingStates(table.generator);
  if (!absorbing.includes(1)) throw new Problem("noTargets");
  return absorbing;
}
