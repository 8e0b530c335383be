import { withNames, type Answer, type AnswerCell } from "../cells/answer";
import type { Argument } from "../cells/argument";
import { readCounts } from "../cells/counts";
import { Problem } from "../chain/problem";
import type { Steps } from "../chain/steps";
import { readRateTable } from "../table/read";
import type { Cells, RateTable } from "../table/rate-table";
import { Cache } from "./cache";
import { bytesOf, digestOf } from "./digest";

/** One store for every function: tables that were read and answers that were given. */
export const cache = new Cache(48_000_000);

/** An answer still to be worked out: the boundary runs the steps, here or aside. */
export class Asked {
  constructor(readonly steps: Steps<Answer | AnswerCell>) {}
}

/** The table in a range, read once however many formulas name it. @throws the first problem of the reading */
export function tableIn(rates: Argument, name = "rates"): RateTable {
  if (rates === null) throw new Problem("argumentMissing", { argument: name });
  return readOnce("table", rates, (cells) => {
    const table = readRateTable(cells);
    return { value: table, bytes: 400 + 120 * table.generator.arrowCount + 64 * table.size };
  });
}

/** The counts of jumps in a range, as a table whose "rates" they are. @throws as `readCounts` */
export function countsIn(counts: Argument): RateTable {
  if (counts === null) throw new Problem("argumentMissing", { argument: "counts" });
  return readOnce("counts", counts, (cells) => {
    const table = readCounts(cells);
    return { value: table, bytes: 400 + 120 * table.generator.arrowCount + 64 * table.size };
  });
}

/** Reads a range once for each purpose; refusals are kept as well. @throws what `read` threw */
export function readOnce<T>(purpose: string, cells: Cells, read: (cells: Cells) => { value: T; bytes: number }): T {
  const key = `${purpose} ${digestOf(cells)}`;
  let found = cache.find(key, [cells]) as { value: T } | { problem: Problem } | undefined;
  if (!found) {
    let bytes = bytesOf(cells);
    try {
      const result = read(cells);
      bytes += result.bytes;
      found = { value: result.value };
    } catch (problem) {
      if (!(problem instanceof Problem)) throw problem;
      found = { problem };
    }
    cache.keep(key, [cells], found, bytes);
  }
  if ("problem" in found) throw found.problem;
  return found.value;
}

/**
 * Asks a question of the chain and words its answer as cells; problems get the names of the table's states.
 * Typed as the host's result, because the boundary turns it into one.
 */
export function ask<T>(table: Pick<RateTable, "names" | "size"> | null, question: () => Steps<T> | T, encode: (found: T) => Answer | AnswerCell): any {
  function* steps(): Steps<Answer | AnswerCell> {
    try {
      const asked = question();
      return encode(isSteps(asked) ? yield* asked : asked);
    } catch (problem) {
      throw table ? withNames(problem, table) : problem;
    }
  }
  return new Asked(steps());
}

function isSteps<T>(value: Steps<T> | T): value is Steps<T> {
  return typeof value === "object" && value !== null && "next" in value && typeof value.next === "function";
}
