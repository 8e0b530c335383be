/** One way of doing the work: returns the time of a call in microseconds, measured over at least `SPAN` milliseconds. */
export interface Contestant {
  readonly name: string;
  measure(): number | Promise<number>;
}

const SPAN = 25;
const WARM_UP = 150;

/** A contestant in this process. Warmed up first, long enough for the optimising compilers. */
export function local(name: string, work: () => unknown): Contestant {
  const begun = performance.now();
  let calls = 0;
  do {
    work();
    calls++;
  } while (performance.now() - begun < WARM_UP);
  const repeat = Math.max(1, Math.round((SPAN * calls) / (performance.now() - begun)));
  return {
    name,
    measure() {
      const start = performance.now();
      for (let k = 0; k < repeat; k++) work();
      return ((performance.now() - start) / repeat) * 1e3;
    },
  };
}

export interface Timing {
  readonly median: number;
  /** The quickest round: what the work takes when nothing else is in the way. */
  readonly best: number;
}

/**
 * Times of each contestant over rounds in which they take turns, so that whatever else the machine does meets all alike. Long
 * calls get fewer rounds.
 */
export async function compete(contestants: readonly Contestant[], rounds = 15): Promise<Timing[]> {
  const times: number[][] = contestants.map(() => []);
  for (let round = 0; round < rounds; round++) {
    for (let c = 0; c < contestants.length; c++) {
      if (round >= 3 && times[c][0] > 1e6) continue;
      times[c].push(await contestants[c].measure());
    }
  }
  return times.map((values) => ({ median: median(values), best: Math.min(...values) }));
}

/** How many times quicker than the other, by the best rounds. */
export function ratio(other: Timing | undefined, ours: Timing): string {
  return other ? `${(other.best / ours.best).toPrecision(2)}×` : "–";
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

/** The median with three figures and a unit: 3.12 µs, 20.8 ms. */
export function shown(timing: Timing | undefined): string {
  if (!timing) return "–";
  const microseconds = timing.median;
  const [value, unit] = microseconds < 1e3 ? [microseconds, "µs"] : microseconds < 1e6 ? [microseconds / 1e3, "ms"] : [microseconds / 1e6, "s"];
  return `${value.toPrecision(3)} ${unit}`;
}

export function table(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]): string => `| ${cells.join(" | ")} |`;
  return [line(head), line(head.map(() => "---")), ...rows.map(line)].join("\n");
}
