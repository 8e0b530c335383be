import { beforeAll, describe, expect, it } from "vitest";
import { functionsMetadata } from "../../../scripts/metadata.mjs";
import { HostError } from "../../support/functions";
import { call, functions, LIST, ONE_WAY, PUMP, refusal } from "./tables";

/** Ids, arguments and their order, which people's workbooks depend on; brackets mark what may be left out. */
const CATALOGUE = `
TRANSITION(rates, time, [headings])
DISTRIBUTION(rates, start, times, [headings])
STATIONARY(rates, [start], [headings])
MEANABSORPTION(rates, [targets], [headings])
ABSORPTIONSD(rates, [targets], [headings])
ABSORPTIONPROB(rates, [targets], [headings])
SURVIVAL(rates, start, targets, times)
REACHED(rates, start, targets, times)
HAZARD(rates, start, targets, times)
PERCENTILE(rates, start, targets, fractions)
TIMEBEFORE(rates, start, [targets], [headings])
QUASISTATIONARY(rates, [targets], [headings])
OCCUPANCY(rates, start, horizon, [headings])
JUMPS(rates, start, horizon, [headings])
FAILURES(rates, up, start, horizon)
COST(rates, start, horizon, stateCosts, [jumpCosts], [discount])
COSTUNTIL(rates, start, stateCosts, [targets], [jumpCosts], [discount])
COSTRATE(rates, stateCosts, [jumpCosts], [start])
PHASED(ratesStack, durations, start, [headings])
PHASEDOCCUPANCY(ratesStack, durations, start, [headings])
INSPECTION(rates, resets, interval, [headings])
AVAILABILITY(rates, up, [start], [times])
INTERVALAVAILABILITY(rates, up, start, horizon)
UPDOWN(rates, up, [start])
FLOWS(rates, [start], [headings])
ELASTICITY(rates, up, [start], [time], [headings])
MEANTIMEELASTICITY(rates, start, targets, [headings])
COSTELASTICITY(rates, stateCosts, [jumpCosts], [start], [headings])
RATEFORGOAL(rates, from, to, up, goal, [start], [time])
AVAILABILITYBAND(counts, timeInState, up, [start], [time], [confidence], [draws], [seed])
GENERATOR(rates, [headings])
FROMLIST(list, [headings])
BIRTHDEATH(upRates, downRates, [headings])
REPAIRGROUP(units, failureRate, repairRate, crews, [running], [standbyFailureRate], [commonCause], [headings])
QUEUE(arrivalRate, serviceRate, servers, places, [headings])
COMBINE(ratesA, ratesB, [headings])
STAGES(rates, state, stages, [headings])
LUMP(rates, groups, [approximate], [headings])
FROMPROBABILITY(probabilities, period, [headings])
EMBEDDINGGAP(probabilities, period)
FROMCOUNTS(counts, timeInState, [headings])
FROMLOG(log, end, [headings])
RATEINTERVAL(count, exposure, [confidence], [failureTruncated])
CHECK(rates, [start])
CLASSES(rates, [headings])
JUMPCHAIN(rates, [headings])
HOLDING(rates, [headings])
SETTLING(rates, [tolerance])
SAMPLEPATH(rates, start, horizon, seed, [headings])
FINGERPRINT(rates)
COMPARE(before, after)
`.trim().split("\n");

/** For each function a full set of arguments that it answers. */
const SAMPLES: Record<string, unknown[]> = {
  TRANSITION: [PUMP, 3, true],
  DISTRIBUTION: [PUMP, "Worn", [[1, 2]], true],
  STATIONARY: [PUMP, 2, true],
  MEANABSORPTION: [ONE_WAY, "Failed", true],
  ABSORPTIONSD: [ONE_WAY, "Failed", true],
  ABSORPTIONPROB: [ONE_WAY, [["Worn"], ["Failed"]], true],
  SURVIVAL: [PUMP, 1, 3, [[1, 2]]],
  REACHED: [PUMP, 1, 3, [[1], [2]]],
  HAZARD: [PUMP, 1, 3, 2],
  PERCENTILE: [PUMP, 1, 3, [[0.1, 0.9]]],
  TIMEBEFORE: [ONE_WAY, 1, 3, true],
  QUASISTATIONARY: [[["", "A", "B", "C"], ["A", "", 1, 1], ["B", 1, "", 1], ["C", "", "", ""]], "C", true],
  OCCUPANCY: [PUMP, 1, [[1], [2]], true],
  JUMPS: [PUMP, 1, 5, true],
  FAILURES: [PUMP, [[1], [2]], 1, 5],
  COST: [PUMP, 1, 5, [[1, 2, 3]], [[0, 1, 1], [1, 0, 1], [1, 1, 0]], 0.1],
  COSTUNTIL: [ONE_WAY, 1, [[1, 2, 3]], 3, [[0, 1, 1], [1, 0, 1], [1, 1, 0]], 0.1],
  COSTRATE: [PUMP, [[1], [2], [3]], [[0, 1, 1], [1, 0, 1], [1, 1, 0]], 1],
  PHASED: [[...PUMP, ...ONE_WAY], [[1], [2]], 1, true],
  PHASEDOCCUPANCY: [[...PUMP, ...ONE_WAY], [[1, 2]], 1, true],
  INSPECTION: [ONE_WAY, [["", "", ""], [1, "", ""], [1, "", ""]], 5, true],
  AVAILABILITY: [PUMP, [["Running", "Worn"]], 1, [[1, 2]]],
  INTERVALAVAILABILITY: [PUMP, 1, 1, 5],
  UPDOWN: [PUMP, 1, 2],
  FLOWS: [PUMP, 1, true],
  ELASTICITY: [PUMP, 3, 1, 2, true],
  MEANTIMEELASTICITY: [ONE_WAY, 1, 3, true],
  COSTELASTICITY: [PUMP, [[1, 2, 3]], [[0, 1, 1], [1, 0, 1], [1, 1, 0]], 1, true],
  RATEFORGOAL: [PUMP, "Failed", "Running", 3, 0.1, 1, 2],
  AVAILABILITYBAND: [[["", 4], [4, ""]], [[100, 10]], 1, 1, 5, 0.8, 200, 3],
  GENERATOR: [LIST, true],
  FROMLIST: [LIST, true],
  BIRTHDEATH: [[[1, 2]], [[3], [4]], true],
  REPAIRGROUP: [3, 0.1, 1, 2, 2, 0.01, 0.1, true],
  QUEUE: [1, 2, 1, 3, true],
  COMBINE: [PUMP, LIST, true],
  STAGES: [PUMP, "Worn", 3, true],
  LUMP: [PUMP, [["on", "on", "off"]], true, true],
  FROMPROBABILITY: [[[0.9, 0.1], [0.2, 0.8]], 1, true],
  EMBEDDINGGAP: [[[0.9, 0.1], [0.2, 0.8]], 1],
  FROMCOUNTS: [[["", 4], [4, ""]], [[100, 10]], true],
  FROMLOG: [[["P", 0, "Up"], ["P", 5, "Down"]], 9, true],
  RATEINTERVAL: [3, 100, 0.8, true],
  CHECK: [PUMP, 1],
  CLASSES: [PUMP, true],
  JUMPCHAIN: [PUMP, true],
  HOLDING: [PUMP, true],
  SETTLING: [PUMP, 0.05],
  SAMPLEPATH: [PUMP, 1, 5, 3, true],
  FINGERPRINT: [PUMP],
  COMPARE: [PUMP, ONE_WAY],
};
/** Refused on purpose when these are left out; every other gap is answered. */
const NEEDED: Record<string, (given: unknown[]) => boolean> = {
  LUMP: (given) => given[2] === null,
};

let signatures: { id: string; parameters: { name: string; optional?: boolean; dimensionality?: string; description?: string }[] }[];
beforeAll(async () => {
  signatures = (await functionsMetadata()).functions as typeof signatures;
});

describe("the catalogue", () => {
  it("is registered and described with the agreed ids and arguments, in order", () => {
    const written = signatures.map(({ id, parameters }) => `${id}(${parameters.map(({ name, optional }) => (optional ? `[${name}]` : name)).join(", ")})`);
    expect(written).toEqual(CATALOGUE);
    expect(Object.keys(functions).sort()).toEqual(signatures.map(({ id }) => id).sort());
  });

  it("takes every argument as a range, because a single cell may stand for one", () => {
    for (const { id, parameters } of signatures) for (const { name, dimensionality } of parameters) expect(dimensionality, `${id} ${name}`).toBe("matrix");
  });

  it.each(Object.keys(SAMPLES))("%s answers with every combination of what may be left out", (id) => {
    const { parameters } = signatures.find((one) => one.id === id)!;
    const full = SAMPLES[id];
    expect(full).toHaveLength(parameters.length);
    const optional = parameters.flatMap(({ optional }, k) => (optional ? [k] : []));
    const headed = new Set<string>();
    for (let subset = 0; subset < 2 ** optional.length; subset++) {
      const given = full.map((value, k) => (optional.includes(k) && !(subset & (2 ** optional.indexOf(k))) ? null : value));
      const found = call(id, ...given);
      if (NEEDED[id]?.(given)) {
        expect(found).toBeInstanceOf(HostError);
        continue;
      }
      expect(found, `${id} ${JSON.stringify(given.map((value) => value !== null))}: ${refusal(found)}`).not.toBeInstanceOf(HostError);
      const rows: unknown[][] = Array.isArray(found) ? found : [[found]];
      expect(new Set(rows.map((row) => row.length)).size).toBe(1);
      for (const cell of rows.flat()) expect(typeof cell === "string" || Number.isFinite(cell), `${id}: ${refusal(cell)}`).toBe(true);
      const trimmed = given.slice(0, given.length - [...given].reverse().findIndex((value) => value !== null));
      expect(call(id, ...trimmed)).toEqual(found);
      expect(call(id, ...given.map((value) => value ?? undefined))).toEqual(found);
      expect(call(id, ...given.map((value) => (value === null || Array.isArray(value) ? value : [[value]])), { onCanceled: null })).toEqual(found);
      if (parameters.at(-1)!.name === "headings") headed.add(`${given.at(-1) === null}: ${rows.length} × ${rows[0].length}`);
    }
    if (parameters.at(-1)!.name === "headings") expect(headed.size).toBeGreaterThanOrEqual(2);
  });
});
