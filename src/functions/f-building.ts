import { checkSpillWith, type Answer } from "../cells/answer";
import { readFlag, type Argument } from "../cells/argument";
import { generatorValues } from "../cells/generator-cells";
import { readGroups } from "../cells/groups";
import { NOT_NEGATIVE, readNumber, readNumbers } from "../cells/numbers";
import { readState } from "../cells/states";
import { birthDeath as birthDeathChain } from "../chain/birth-death";
import { combine as combineChains } from "../chain/combine";
import { lump as lumpChain } from "../chain/lump";
import type { Named } from "../chain/named";
import { Problem } from "../chain/problem";
import { queue as queueChain } from "../chain/queue";
import { repairGroup as repairGroupChain } from "../chain/repair-group";
import { stages as stagesChain } from "../chain/stages";
import { nameKey } from "../table/cell";
import { listLikeness, readList } from "../table/list";
import { read } from "../table/read";
import type { Cells } from "../table/rate-table";
import { ask, tableIn } from "./asking";
import { square } from "./shapes";

// Section F: building a table

/** Every size that a builder takes whole, at least one. */
const COUNT = { least: 1, whole: true };

/**
 * The table with its diagonal worked out: minus the exits of each row.
 * @customfunction GENERATOR
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} One row and one column for each state.
 */
export function generator(rates: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  return built(states.size, headings ?? null, () => states);
}

/**
 * A list of from, to, rate as a from-rows by to-columns table.
 * @customfunction FROMLIST
 * @param list Three columns: from-state, to-state, rate; a heading row is allowed.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} The rate table, its diagonal worked out, states in order of first appearance.
 */
export function fromList(list: any[][], headings?: any[][]): any[][] {
  const states = tableOfList(list);
  return built(states.size, headings ?? null, () => states);
}

/** A table in either form; what is neither is refused as a list. */
function tableOfList(list: Argument) {
  if (list === null) throw new Problem("argumentMissing", { argument: "list" });
  const cells: Cells = list;
  const square = listLikeness(cells) === "no" ? read(cells) : null;
  const columns = cells[0]?.length ?? 0;
  if (!square?.table && columns < 3) throw new Problem("listTooNarrow", { columns });
  const reading = square?.table ? square : readList(cells);
  if (reading.table && reading.table.size > 0) return reading.table;
  throw reading.problems[0] ?? new Problem("listEmpty");
}

/**
 * Table of levels 0, 1, 2, … with a rate from each level to the next and back.
 * @customfunction BIRTHDEATH
 * @param upRates Rates upward: from level 0 to 1, from 1 to 2, and so on.
 * @param downRates Rates downward: from level 1 to 0, from 2 to 1, and so on; as many as upward.
 * @param [headings] TRUE adds the state names (level 0, level 1, …) around the result.
 * @returns {any[][]} The rate table, its diagonal worked out.
 */
export function birthDeath(upRates: any[][], downRates: any[][], headings?: any[][]): any[][] {
  const up = readNumbers(upRates, "upRates", NOT_NEGATIVE).values;
  const down = readNumbers(downRates, "downRates", NOT_NEGATIVE).values;
  return built(up.length + 1, headings ?? null, () => birthDeathChain(up, down));
}

/**
 * Table of a group of equal units with repair crews: how many are down.
 * @customfunction REPAIRGROUP
 * @param units Number of units.
 * @param failureRate Failures per time unit of one running unit.
 * @param repairRate Repairs per time unit by one crew.
 * @param crews Units repaired at once; 0 allowed.
 * @param [running] Units that run at a time while the rest stand by; all when left out. A blank cell counts as 0, which is refused.
 * @param [standbyFailureRate] Failures per time unit of a unit standing by; 0 when left out.
 * @param [commonCause] Share of the failure rate, 0 to 1, that is one event taking every unit down; 0 when left out.
 * @param [headings] TRUE adds the state names (0 down, 1 down, …) around the result.
 * @returns {any[][]} The rate table, its diagonal worked out.
 */
export function repairGroup(
  units: any[][],
  failureRate: any[][],
  repairRate: any[][],
  crews: any[][],
  running?: any[][],
  standbyFailureRate?: any[][],
  commonCause?: any[][],
  headings?: any[][],
): any[][] {
  const count = readNumber(units, "units", COUNT);
  const failure = readNumber(failureRate, "failureRate", NOT_NEGATIVE);
  const repair = readNumber(repairRate, "repairRate", NOT_NEGATIVE);
  const hands = readNumber(crews, "crews", { least: 0, whole: true });
  const options = {
    running: readNumber(running ?? null, "running", COUNT, count),
    standbyFailureRate: readNumber(standbyFailureRate ?? null, "standbyFailureRate", NOT_NEGATIVE, 0),
    commonCause: readNumber(commonCause ?? null, "commonCause", { least: 0, most: 1 }, 0),
  };
  return built(count + 1, headings ?? null, () => repairGroupChain(count, failure, repair, hands, options));
}

/**
 * Table of a service desk with a limited number of places: how many are present.
 * @customfunction QUEUE
 * @param arrivalRate Arrivals per time unit; those that find every place taken are lost.
 * @param serviceRate Services ended per time unit by one busy server.
 * @param servers Number of servers.
 * @param places Number of places, those in service counted; not fewer than servers.
 * @param [headings] TRUE adds the state names (0 present, 1 present, …) around the result.
 * @returns {any[][]} The rate table, its diagonal worked out.
 */
export function queue(arrivalRate: any[][], serviceRate: any[][], servers: any[][], places: any[][], headings?: any[][]): any[][] {
  const arrivals = readNumber(arrivalRate, "arrivalRate", NOT_NEGATIVE);
  const services = readNumber(serviceRate, "serviceRate", NOT_NEGATIVE);
  const desks = readNumber(servers, "servers", COUNT);
  const room = readNumber(places, "places", COUNT);
  return built(room + 1, headings ?? null, () => queueChain(arrivals, services, desks, room));
}

/**
 * Table of two independent chains seen as one.
 * @customfunction COMBINE
 * @param ratesA First rate table; its state varies slowest in the result.
 * @param ratesB Second rate table, in the same time unit.
 * @param [headings] TRUE adds the state names, joined by " + ", around the result.
 * @returns {any[][]} The rate table of all pairs of states, its diagonal worked out.
 */
export function combine(ratesA: any[][], ratesB: any[][], headings?: any[][]): any[][] {
  const first = tableIn(ratesA, "ratesA");
  const second = tableIn(ratesB, "ratesB");
  return built(first.size * second.size, headings ?? null, () => combineChains(first, second));
}

/**
 * Table with the stay in one state made less variable: equal stages in a row, same mean.
 * @customfunction STAGES
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param state The state to replace, by name or number.
 * @param stages Number of stages.
 * @param [headings] TRUE adds the state names around the result.
 * @returns {any[][]} The rate table, its diagonal worked out; the stages stand where the state stood.
 */
export function stages(rates: any[][], state: any[][], stages: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const one = readState(state, "state", states);
  const count = readNumber(stages, "stages", COUNT);
  return built(states.size + count - 1, headings ?? null, () => stagesChain(states, one, count));
}

/**
 * Table with states merged into groups.
 * @customfunction LUMP
 * @cancelable
 * @param rates Rate table: from-rows by to-columns, or a list of from, to, rate; one time unit throughout.
 * @param groups One group name for each state, in the table's order.
 * @param [approximate] TRUE merges states that differ, weighted by their long-run shares; else such groups are refused.
 * @param [headings] TRUE adds the group names around the result.
 * @returns {any[][]} The rate table of the groups, its diagonal worked out.
 */
export function lump(rates: any[][], groups: any[][], approximate?: any[][], headings?: any[][]): any[][] {
  const states = tableIn(rates);
  const names = readGroups(groups, states);
  const unequal = readFlag(approximate ?? null, "approximate");
  const count = new Set(names.map((name) => name.toLowerCase())).size;
  return built(count, headings ?? null, () => lumpChain(states, names, unequal), states);
}

/** Names put together may meet ("A" + "B + C", "A + B" + "C"): such a table would not be read back. @throws nameRepeated */
function refuseRepeatedNames(names: readonly string[]): void {
  const seen = new Map<string, number>();
  names.forEach((name, second) => {
    const first = seen.get(nameKey(name));
    if (first !== undefined) throw new Problem("nameRepeated", { first, second, name });
    seen.set(nameKey(name), second);
  });
}

/** A chain that is built only once its table is known to fit the sheet. */
function built(size: number, headings: Argument, build: () => Named, states: { names: readonly string[] | null; size: number } | null = null): any {
  const named = readFlag(headings, "headings");
  checkSpillWith(named, size, size, { top: true, left: true });
  return ask(states, build, (chain): Answer => {
    if (named) refuseRepeatedNames(chain.names ?? []);
    return square({ size, names: chain.names }, headings)(generatorValues(chain.generator));
  });
}
