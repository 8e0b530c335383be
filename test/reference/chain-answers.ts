import { absorptionProbability, absorptionSd, meanAbsorption } from "../../src/chain/absorption";
import { availability, intervalAvailability, upDown } from "../../src/chain/availability";
import { birthDeath } from "../../src/chain/birth-death";
import { absorbingStates } from "../../src/chain/classes";
import { costRate, costUntil } from "../../src/chain/cost";
import { fromCounts } from "../../src/chain/counts";
import { distributions } from "../../src/chain/distribution";
import { meanTimeElasticity, shareElasticity } from "../../src/chain/elasticity";
import { reached } from "../../src/chain/first-passage";
import { embeddingGap, generatorFromProbability } from "../../src/chain/from-probability";
import { Generator } from "../../src/chain/generator";
import { inspectionShares } from "../../src/chain/inspection";
import { failureCount, flows, jumpCounts } from "../../src/chain/jumps";
import { fromLog } from "../../src/chain/log";
import { quasiStationary } from "../../src/chain/quasi-stationary";
import { queue } from "../../src/chain/queue";
import { rateInterval } from "../../src/chain/rate-interval";
import { repairGroup } from "../../src/chain/repair-group";
import { stages } from "../../src/chain/stages";
import { stationaryShares } from "../../src/chain/stationary";
import { transitionMatrix } from "../../src/chain/transition";
import type { Argument, Ask, Cell } from "./check-cases";

/** Formulas answered by the chain itself, no cells in between; only as much decoding as `check-cases.ts` needs. */
export const askChain: Ask = (formula, ...args) => {
  const answer = answers[formula];
  if (!answer) throw new Error(`no answer for ${formula}`);
  return answer(...args);
};

const answers: Record<string, ((...args: Argument[]) => number[][]) | undefined> = {
  TRANSITION: (rates, time) => square(transitionMatrix(generator(rates), time as number)),
  DISTRIBUTION: (rates, start, time) => [[...distributions(generator(rates), startOf(rates, start), [time as number])[0]]],
  STATIONARY: (rates) => [[...stationaryShares(generator(rates))]],
  MEANABSORPTION: (rates, targets) => [...meanAbsorption(generator(rates), setOf(rates, targets))].map((m) => [m]),
  ABSORPTIONSD: (rates, targets) => [...absorptionSd(generator(rates), setOf(rates, targets))].map((s) => [s]),
  ABSORPTIONPROB: (rates, targets) => {
    const { targets: columns, probability } = absorptionProbability(generator(rates), setOf(rates, targets));
    return rowsOf(probability, columns.length);
  },
  REACHED: (rates, start, targets, time) =>
    [[reached(generator(rates), startOf(rates, start), setOf(rates, targets), [time as number])[0]]],
  QUASISTATIONARY: (rates, targets) => {
    const { shares, decayRate } = quasiStationary(generator(rates), setOf(rates, targets));
    return [[...shares, decayRate]];
  },
  JUMPS: (rates, start, horizon) => square(jumpCounts(generator(rates), startOf(rates, start), horizon as number)),
  FAILURES: (rates, up, start, horizon) =>
    [[failureCount(generator(rates), setOf(rates, up), startOf(rates, start), horizon as number)]],
  COSTUNTIL: (rates, start, costs, targets, _, discount) =>
    [[costUntil(generator(rates), startOf(rates, start), numbers(costs), setOf(rates, targets), null, (discount as number) ?? 0)]],
  COSTRATE: (rates, costs) => [[costRate(generator(rates), numbers(costs), null)]],
  AVAILABILITY: (rates, up, start, time) => {
    const set = setOf(rates, up);
    return [[time === undefined
      ? availability(generator(rates), set)
      : availability(generator(rates), set, startOf(rates, start), [time as number])[0]]];
  },
  INTERVALAVAILABILITY: (rates, up, start, horizon) =>
    [[intervalAvailability(generator(rates), setOf(rates, up), startOf(rates, start), [horizon as number])[0]]],
  UPDOWN: (rates, up) => Object.values(upDown(generator(rates), setOf(rates, up))).map((value: number) => [value]),
  FLOWS: (rates) => square(flows(generator(rates))),
  ELASTICITY: (rates, up) => square(shareElasticity(generator(rates), setOf(rates, up))),
  MEANTIMEELASTICITY: (rates, start, targets) =>
    square(meanTimeElasticity(generator(rates), startOf(rates, start), setOf(rates, targets))),
  BIRTHDEATH: (up, down) => table(birthDeath(numbers(up), numbers(down)).generator),
  QUEUE: (arrival, service, servers, places) =>
    table(queue(arrival as number, service as number, servers as number, places as number).generator),
  REPAIRGROUP: (units, failure, repair, crews, running) =>
    table(repairGroup(units as number, failure as number, repair as number, crews as number, running ? { running: running as number } : {}).generator),
  STAGES: (rates, state, count) =>
    table(stages({ generator: generator(rates), names: null }, (state as number) - 1, count as number).generator),
  FROMCOUNTS: (counts, time) => table(fromCounts({ generator: generator(counts), names: null }, numbers(time)).generator),
  FROMLOG: (log, end) => table(fromLog((log as Cell[][]).slice(1).map(([unit, time, state], row) =>
    ({ unit: unit as string, time: time as number, state: state as string, row })), end as number).generator),
  FROMPROBABILITY: (p, period) =>
    table(generatorFromProbability((p as Cell[][]).length, numbers(p), period as number).generator),
  EMBEDDINGGAP: (p, period) => [[embeddingGap((p as Cell[][]).length, numbers(p), period as number)]],
  INSPECTION: (rates, resets, interval) => [[...inspectionShares(generator(rates), numbers(resets), interval as number)]],
  RATEINTERVAL: (count, exposure, confidence) => {
    const { lower, estimate, upper } = rateInterval(count as number, exposure as number, (confidence as number) ?? 0.9);
    return [[lower, estimate, upper]];
  },
};

function generator(rates: Argument): Generator {
  const cells = rates as Cell[][];
  if (typeof cells[0][0] === "number") return Generator.fromDense(cells.length, cells.flat() as number[]);
  const names = [...new Set(cells.flatMap(([from, to]) => [from, to]))];
  return Generator.fromArrows(names.length, cells.map(([from, to, rate]) => [names.indexOf(from), names.indexOf(to), rate as number]));
}

function startOf(rates: Argument, start: Argument): Float64Array {
  if (Array.isArray(start)) return Float64Array.from(start[0] as number[]);
  const begin = new Float64Array(generator(rates).size);
  begin[(start as number) - 1] = 1;
  return begin;
}

function setOf(rates: Argument, states: Argument | undefined): Uint8Array {
  if (states === undefined || states === null) return absorbingStates(generator(rates));
  const set = new Uint8Array(generator(rates).size);
  for (const state of Array.isArray(states) ? (states.flat() as number[]) : [states as number]) set[state - 1] = 1;
  return set;
}

const numbers = (cells: Argument): Float64Array => Float64Array.from((cells as number[][]).flat());

function rowsOf(values: Float64Array, width: number): number[][] {
  return Array.from({ length: values.length / width }, (_, i) => [...values.subarray(i * width, (i + 1) * width)]);
}

const square = (values: Float64Array): number[][] => rowsOf(values, Math.sqrt(values.length));

/** The table with its diagonal worked out, as the builders spill it. */
function table(chain: Generator): number[][] {
  return square(chain.dense()).map((rates, i) => rates.map((rate, j) => (i === j ? -chain.exitRate[i] : rate)));
}
