import { denseKernel, LARGEST_MATRIX, LARGEST_WALK, SMALL, type Method } from "./method-choice";
import { repairRow, type MatrixKernel } from "./matrix-kernel";
import { poissonWeights } from "./poisson";
import { denseOf, type ChainRates } from "./rows";
import { Squarings, rowTimesMatrix } from "./squarings";
import { JumpWalk } from "./uniformization";

type Steps<T> = globalThis.Generator<number, T, void>;

/** What a quantile is read from, for each state of the stopped chain; all ≥ 0. */
export interface PassageValues {
  /** 1 where a target has been met, 0 elsewhere. */
  readonly met: Float64Array;
  /** Probability of meeting one yet; 0 where one has been met. */
  readonly yet: Float64Array;
  /** Rate into the targets. */
  readonly flow: Float64Array;
}

/** The level sought: `met` reaches it from below, or `yet` falls to it, whichever is the smaller number. */
export type Goal = { readonly value: "met" | "yet"; readonly level: number };

/**
 * Times at which the goals are met, for a stopped chain left from `start`; null when it would take too long. Small chains go
 * through stored squarings at once; others jump by jump as long as that is cheaper.
 *
 * *Method*: P(h2^k) is squared until the goal is passed, then the time is built from its highest binary digit down, keeping
 * the row reached; the last step below h is a Newton iteration on the Poisson series from that row. A goal above half of
 * what is ever met is sought in what is yet to be met, so that neither end of the distribution loses digits.
 */
export function* passageQuantiles(
  chain: ChainRates,
  start: Float64Array,
  values: PassageValues,
  goals: readonly Goal[],
  options: { method?: Method; kernel?: MatrixKernel; largestWalk?: number } = {},
): Steps<number[] | null> {
  const n = chain.size;
  const stored = options.method ? options.method === "matrix" : n <= SMALL;
  if (!stored) {
    const budget = options.method || n > LARGEST_MATRIX ? (options.largestWalk ?? LARGEST_WALK) : 8 * n ** 3;
    const walked = yield* quantilesByWalk(chain, start, values, goals, budget);
    if (walked || options.method || n > LARGEST_MATRIX) return walked;
  }
  const dense = denseOf(chain);
  const squarings = yield* Squarings.open(dense, options.kernel ?? denseKernel(), (4 * n) / dense.largestExit);
  const times: number[] = [];
  for (const goal of goals) {
    times.push(yield* quantileBySquarings(chain, squarings, start, values, goal));
    yield times.length / goals.length;
  }
  return times;
}

/** 2^POWERS steps exceed every time that a double can hold for rates of 1e-150. */
const POWERS = 1040;

function* quantileBySquarings(
  chain: ChainRates,
  squarings: Squarings,
  start: Float64Array,
  values: PassageValues,
  goal: Goal,
): Steps<number> {
  const trial = new Float64Array(chain.size);
  const passed = function* (row: Float64Array, power: number): Steps<boolean> {
    rowTimesMatrix(row, yield* squarings.matrix(power), trial);
    repairRow(trial, 0, trial.length);
    const value = dot(values[goal.value], trial);
    return goal.value === "met" ? value >= goal.level : value <= goal.level;
  };
  let power = 0;
  while (!(yield* passed(start, power))) {
    if (power >= POWERS || (squarings.isSettled && power > squarings.top)) return Infinity;
    power++;
    yield 0;
  }
  const row = start.slice();
  let time = 0;
  while (--power >= 0)
    if (!(yield* passed(row, power))) {
      row.set(trial);
      time += squarings.step * 2 ** power;
    }
  const series = new PassageSeries(new JumpWalk(chain, row), values);
  yield* series.extend(series.jumpsFor(squarings.step), Infinity);
  return time + series.solve(goal, squarings.step, time);
}

function* quantilesByWalk(
  chain: ChainRates,
  start: Float64Array,
  values: PassageValues,
  goals: readonly Goal[],
  budget: number,
): Steps<number[] | null> {
  const series = new PassageSeries(new JumpWalk(chain, start), values);
  const times: number[] = [];
  for (const goal of goals) {
    for (let horizon = 1 / series.largestExit; ; horizon *= 2) {
      if (!(yield* series.extend(series.jumpsFor(horizon), budget))) return null;
      if (!series.passed(goal, horizon)) continue;
      times.push(series.solve(goal, horizon, 0));
      break;
    }
  }
  return times;
}

/** The three values after 0, 1, 2, … jumps; at a time they are Poisson mixtures of these. */
class PassageSeries {
  private readonly after: Record<keyof PassageValues, number[]> = { met: [], yet: [], flow: [] };
  private work = 0;

  constructor(
    private readonly walk: JumpWalk,
    private readonly values: PassageValues,
  ) {}

  get largestExit(): number {
    return this.walk.largestExit;
  }

  /** Jumps after which the Poisson weights of a time up to `horizon` are negligible. */
  jumpsFor(horizon: number): number {
    const { first, weights } = poissonWeights(this.largestExit * horizon);
    return first + weights.length;
  }

  /** Walks on to so many jumps; false when the work exceeds the budget. */
  *extend(jumps: number, budget: number): Steps<boolean> {
    const { walk, values, after } = this;
    let sincePause = 0;
    while (after.met.length <= jumps) {
      if (after.met.length > 0) walk.jump();
      for (const value of ["met", "yet", "flow"] as const) after[value].push(walk.value(values[value]));
      const work = walk.workPerJump + 3 * walk.active;
      if ((this.work += work) > budget) return false;
      if ((sincePause += work) > 1e7) {
        sincePause = 0;
        yield Math.min(1, after.met.length / jumps);
      }
    }
    return true;
  }

  passed(goal: Goal, time: number): boolean {
    const value = this.at(goal.value, time);
    return goal.value === "met" ? value >= goal.level : value <= goal.level;
  }

  private at(value: keyof PassageValues, time: number): number {
    const { first, weights } = poissonWeights(this.largestExit * time);
    const sequence = this.after[value];
    let sum = 0;
    for (let k = 0; k < weights.length; k++) sum += weights[k] * sequence[first + k];
    return sum;
  }

  /**
   * The τ in (0, end] at which the goal is met, `before` being the time already passed: Newton, kept inside a bracket.
   * From time 0 the step is taken in logarithms: a small chance grows like a power of the time there.
   */
  solve(goal: Goal, end: number, before: number): number {
    const sign = goal.value === "met" ? 1 : -1;
    let low = 0;
    let high = end;
    let time = end;
    for (let round = 0; round < 400; round++) {
      const value = this.at(goal.value, time);
      const missing = sign * (goal.level - value);
      if (missing > 0) low = time;
      else high = time;
      if (missing === 0 || high - low <= 2 ** -53 * (before + high)) break;
      const slope = this.at("flow", time);
      const logarithmic = before === 0 && goal.value === "met" && value > 0;
      let next = logarithmic
        ? time * Math.exp((value * Math.log(goal.level / value)) / (slope * time))
        : time + missing / slope;
      if (!(next > low && next < high)) next = low > 0 ? Math.sqrt(low * high) : before > 0 ? high / 2 : high / 256;
      if (Math.abs(next - time) <= 2 ** -54 * (before + time)) return next;
      time = next;
    }
    return time;
  }
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k] * b[k];
  return sum;
}
