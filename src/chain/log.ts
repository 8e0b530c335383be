import { Generator, type Arrow } from "./generator";
import type { Built } from "./named";
import { Problem } from "./problem";

/** One line of a log: a unit enters a state. `row` is the line's place in the range it came from. */
export interface LogEntry {
  readonly unit: string;
  readonly time: number;
  readonly state: string;
  readonly row: number;
}

export interface LogEstimate extends Built {
  /** Jumps observed, n × n. */
  readonly counts: Float64Array;
  /** Time observed in each state. */
  readonly timeInState: Float64Array;
}

/**
 * Rates from a log of who entered which state when.
 *
 * q_ij = jumps i→j of all units ÷ time of all units in i. Each unit is watched from its first entry until `end`; entering the
 * state it is already in adds nothing. Units and states are told apart without regard to case and outer spaces.
 *
 * @param entries - in any order
 * @param end - time at which the watch ends, in the time unit of the log
 * @returns states in the order of first appearance in the log, spelt as there
 * @throws `logEmpty`; `logAfterEnd` {row, time, end}; `logTwoStates` {row, firstRow, unit, time} for two states of one unit
 *   at one time
 *
 * *Method*: occurrence over exposure, as `fromCounts`. *Accuracy*: `test/reference/checks-chain.test.ts`, F06.
 *
 * @example fromLog([{ unit: "P1", time: 0, state: "Up", row: 0 }, { unit: "P1", time: 50, state: "Down", row: 1 }], 60)
 *   .generator.rateOf(0, 1) // 0.02
 */
export function fromLog(entries: readonly LogEntry[], end: number): LogEstimate {
  if (entries.length === 0) throw new Problem("logEmpty");
  const names: string[] = [];
  const numberOf = new Map<string, number>();
  const units = new Map<string, { time: number; state: number; row: number; unit: string }[]>();
  for (const { unit, time, state, row } of entries) {
    if (time > end) throw new Problem("logAfterEnd", { row, time, end });
    const key = keyOf(state);
    if (!numberOf.has(key)) numberOf.set(key, names.push(state.trim()) - 1);
    const steps = units.get(keyOf(unit));
    const step = { time, state: numberOf.get(key)!, row, unit: unit.trim() };
    if (steps) steps.push(step);
    else units.set(keyOf(unit), [step]);
  }
  const n = names.length;
  const counts = new Float64Array(n * n);
  const timeInState = new Float64Array(n);
  for (const steps of units.values()) {
    steps.sort((a, b) => a.time - b.time || a.row - b.row);
    let current = steps[0];
    steps.forEach((step, k) => {
      const before = steps[k - 1];
      if (k > 0 && before.time === step.time && before.state !== step.state)
        throw new Problem("logTwoStates", { row: step.row, firstRow: before.row, unit: step.unit, time: step.time });
      if (step.state === current.state) return;
      timeInState[current.state] += step.time - current.time;
      counts[current.state * n + step.state]++;
      current = step;
    });
    timeInState[current.state] += end - current.time;
  }
  const arrows: Arrow[] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) if (counts[i * n + j] > 0) arrows.push([i, j, counts[i * n + j] / timeInState[i]]);
  return { generator: Generator.fromArrows(n, arrows), names, counts, timeInState };
}

function keyOf(text: string): string {
  return text.trim().toLowerCase();
}
