import { findZero } from "../numerics/find-zero";
import { valuesAt } from "../numerics/rows";
import { communicatingClasses, type StateSet } from "./classes";
import { Generator, LARGEST_RATE, SMALLEST_RATE, type Arrow } from "./generator";
import { checkTimes } from "./horizon";
import { Problem } from "./problem";
import { classShares, classWeights, needOneClosedClass } from "./stationary";
import { finish, type Steps } from "./steps";
import { eliminated, membersOf, subchain } from "./subchain";

/** The rate is sought between these multiples of the largest exit rate. */
export const LOWEST_RATIO = 1e-12;
export const HIGHEST_RATIO = 1e12;
/** Steps of the search a decade; a share that turns twice within one is not resolved. */
const STEPS_PER_DECADE = 8;

/**
 * Which rate of this arrow brings the share in `up` to the goal?
 *
 * The x with A(x) = goal, where x is the rate from→to and A the long-run share in `up`, or that at `time`.
 *
 * @param generator - the chain, n states; the arrow need not exist yet
 * @param from - from-state of the arrow
 * @param to - to-state of the arrow
 * @param up - the states whose share is meant
 * @param goal - between 0 and 1
 * @param start - distribution at time 0; omitted: not needed with a single closed class, the first state at a time
 * @param time - ≥ 0; omitted: the long run
 * @returns the rate, between 10⁻¹² and 10¹² times the largest exit rate; of several at a time the one nearest to the present
 *   rate by ratio (for a new arrow: the lowest)
 * @throws `arrowToItself`, `goalOutside` {goal}; `goalNotReached` (no answer) {goal, lowest, highest}, the shares that can be
 *   reached; as `stationaryShares` and `distributions`
 *
 * *Method*: in the long run closed form. Watched at its visits to `from`, the chain collects up and down time per visit that
 * depends on x only through the next state: A(x) = r + w (u₀ + x u₁) / (u₀ + d₀ + x (u₁ + d₁)), all of them non-negative and
 * free of x (one elimination without the from-state); solved for x with up and down kept apart. At a time: shares on a grid
 * of 8 rates a decade, outward from the present rate; the first change of sign is closed by Brent 1973, a near miss by
 * golden section on the turning point.
 * *Cost*: one elimination; at a time some 200 distributions. *Accuracy*: `test/unit/chain/rate-for-goal.test.ts`.
 *
 * @example rateForGoal(Generator.fromArrows(2, [[0, 1, 1], [1, 0, 3]]), 1, 0, Uint8Array.of(1, 0), 0.9) // 9
 */
export function rateForGoal(
  generator: Generator, from: number, to: number, up: StateSet, goal: number, start?: Float64Array, time?: number,
): number {
  return finish(rateForGoalSteps(generator, from, to, up, goal, start, time));
}

export function* rateForGoalSteps(
  generator: Generator, from: number, to: number, up: StateSet, goal: number, start?: Float64Array, time?: number,
): Steps<number> {
  if (from === to) throw new Problem("arrowToItself", { from });
  if (!(goal >= 0 && goal <= 1)) throw new Problem("goalOutside", { goal });
  const scale = generator.largestExit() || 1;
  const low = Math.max(scale * LOWEST_RATIO, SMALLEST_RATE);
  const high = Math.min(scale * HIGHEST_RATIO, LARGEST_RATE);
  if (time === undefined) {
    const share = yield* longRunShare(generator, from, to, up, start);
    return solveShare(share, goal, low, high, generator.rateOf(from, to));
  }
  checkTimes(generator, [time]);
  const begin = start ?? Float64Array.from(up, (_, i) => (i === 0 ? 1 : 0));
  return yield* searchAtTime(generator, from, to, up, goal, begin, time, low, high);
}

/** A(x) = upElsewhere + visits · (upNow + x upThere) / (upNow + downNow + x (upThere + downThere)); likewise down. */
interface RationalShare {
  upElsewhere: number;
  downElsewhere: number;
  visits: number;
  upNow: number;
  downNow: number;
  upThere: number;
  downThere: number;
}

function shareAt(s: RationalShare, x: number): number {
  if (s.visits === 0) return s.upElsewhere;
  const upTime = s.upNow + x * s.upThere;
  return s.upElsewhere + (s.visits * upTime) / (upTime + s.downNow + x * s.downThere);
}

function solveShare(s: RationalShare, goal: number, low: number, high: number, present: number): number {
  const upPart = goal - s.upElsewhere;
  const downPart = 1 - goal - s.downElsewhere;
  const x = (upPart * s.downNow - downPart * s.upNow) / (downPart * s.upThere - upPart * s.downThere);
  if (x >= low && x <= high) return x;
  if (present > 0 && shareAt(s, present) === goal) return present;
  const ends = [shareAt(s, low), shareAt(s, high)].sort((a, b) => a - b);
  throw new Problem("goalNotReached", { goal, lowest: ends[0], highest: ends[1] }, "noAnswer");
}

/** The long-run share as a function of one rate. The classes are those with the arrow present. */
function* longRunShare(
  generator: Generator, from: number, to: number, up: StateSet, start?: Float64Array,
): Steps<RationalShare> {
  const n = generator.size;
  const present = generator.rateOf(from, to);
  const chain = present > 0 ? generator : withRate(generator, from, to, 1);
  const classes = communicatingClasses(chain);
  if (!start) needOneClosedClass(classes);
  const begin = start ?? Float64Array.from(up, (_, i) => (i === 0 ? 1 : 0));
  const recurrent = classes.closed[classes.classOf[from]] ? classes.classOf[from] : -1;
  const share: RationalShare =
    { upElsewhere: 0, downElsewhere: 0, visits: 0, upNow: 0, downNow: 0, upThere: 0, downThere: 0 };

  // what each state collects before the chain is next in `from`: time, or where it ends for good
  const upFrom = new Float64Array(n);
  const downFrom = new Float64Array(n);
  for (let c = 0; c < classes.classes.length; c++) {
    if (!classes.closed[c] || c === recurrent) continue;
    const inside = yield* classShares(chain, classes.classes[c]);
    let upShare = 0;
    let downShare = 0;
    classes.classes[c].forEach((state, a) => (up[state] ? (upShare += inside[a]) : (downShare += inside[a])));
    for (const state of classes.classes[c]) {
      upFrom[state] = upShare;
      downFrom[state] = downShare;
    }
  }
  if (recurrent >= 0) {
    const weights = yield* classWeights(chain, begin, classes);
    share.visits = weights[recurrent];
    classes.classes.forEach((members, c) => {
      share.upElsewhere += c === recurrent ? 0 : weights[c] * upFrom[members[0]];
      share.downElsewhere += c === recurrent ? 0 : weights[c] * downFrom[members[0]];
    });
    const part = subchain(chain, classes.classes[recurrent].filter((state) => state !== from));
    const elimination = yield* eliminated(part);
    const upTime = elimination.solve(Float64Array.from(part.members, (state) => up[state]));
    const downTime = elimination.solve(Float64Array.from(part.members, (state) => 1 - up[state]));
    part.members.forEach((state, a) => {
      upFrom[state] = upTime[a];
      downFrom[state] = downTime[a];
    });
    share.upNow = up[from];
    share.downNow = 1 - up[from];
  } else {
    const part = subchain(chain, membersOf(Uint8Array.from(classes.classOf, (c, i) => (classes.closed[c] || i === from ? 0 : 1))));
    share.visits = begin[from];
    for (let i = 0; i < n; i++)
      if (classes.closed[classes.classOf[i]]) {
        share.upElsewhere += begin[i] * upFrom[i];
        share.downElsewhere += begin[i] * downFrom[i];
      }
    if (part.members.length > 0) {
      const elimination = yield* eliminated(part);
      const ending = (value: Float64Array): Float64Array => Float64Array.from(part.members, (state) => {
        let sum = 0;
        for (let p = chain.rowStart[state]; p < chain.rowStart[state + 1]; p++)
          if (part.position[chain.toState[p]] < 0) sum += chain.rate[p] * value[chain.toState[p]];
        return sum;
      });
      const [upEnd, downEnd] = [ending(upFrom), ending(downFrom)];
      const stay = elimination.solveTransposed(Float64Array.from(part.members, (state) => begin[state]));
      part.members.forEach((state, a) => {
        share.visits += stay[a] * chain.rateOf(state, from);
        share.upElsewhere += stay[a] * upEnd[a];
        share.downElsewhere += stay[a] * downEnd[a];
      });
      const upLater = elimination.solve(upEnd);
      const downLater = elimination.solve(downEnd);
      part.members.forEach((state, a) => {
        upFrom[state] = upLater[a];
        downFrom[state] = downLater[a];
      });
    }
  }
  for (let p = generator.rowStart[from]; p < generator.rowStart[from + 1]; p++) {
    const next = generator.toState[p];
    if (next === to) continue;
    share.upNow += generator.rate[p] * upFrom[next];
    share.downNow += generator.rate[p] * downFrom[next];
  }
  share.upThere = upFrom[to];
  share.downThere = downFrom[to];
  return share;
}

function* searchAtTime(
  generator: Generator, from: number, to: number, up: StateSet, goal: number, start: Float64Array, time: number,
  low: number, high: number,
): Steps<number> {
  // compared on the smaller side, where the share has more digits
  const side = Float64Array.from(up, (u) => (goal > 0.5 ? 1 - u : u));
  const wanted = goal > 0.5 ? 1 - goal : goal;
  const shareOf = (logRate: number): number =>
    finish(valuesAt(withRate(generator, from, to, Math.min(Math.max(Math.exp(logRate), low), high)), start, [time], [side]))[0][0] - wanted;

  const present = generator.rateOf(from, to);
  const centre = present > 0 ? Math.min(Math.max(present, low), high) : low;
  const step = Math.LN10 / STEPS_PER_DECADE;
  const upward = Math.ceil((Math.log(high) - Math.log(centre)) / step);
  const downward = Math.ceil((Math.log(centre) - Math.log(low)) / step);
  const at = (k: number): number => Math.min(Math.max(Math.log(centre) + k * step, Math.log(low)), Math.log(high));
  const values = new Map<number, number>([[0, shareOf(at(0))]]);
  if (values.get(0) === 0) return centre;
  const total = upward + downward;
  for (let k = 1; k <= Math.max(upward, downward); k++) {
    const found: number[] = [];
    for (const [sign, count] of [[1, upward], [-1, downward]] as const) {
      if (k > count) continue;
      const here = sign * k;
      const value = shareOf(at(here));
      values.set(here, value);
      const before = values.get(here - sign)!;
      if (value === 0 || value > 0 !== before > 0) found.push(findZero(shareOf, at(here - sign), at(here), before, value));
      else {
        const turn = turningPoint(shareOf, values, at, here, sign);
        if (turn !== null) found.push(turn);
      }
      yield values.size / (total + 1);
    }
    if (found.length > 0) {
      const distance = (x: number): number => Math.abs(x - Math.log(centre));
      return Math.exp(found.reduce((a, b) => (distance(b) < distance(a) ? b : a)));
    }
  }
  const shares = [...values.values()].map((v) => (goal > 0.5 ? 1 - (v + wanted) : v + wanted));
  throw new Problem("goalNotReached", { goal, lowest: Math.min(...shares), highest: Math.max(...shares) }, "noAnswer");
}

/** Where the last three points bend towards the goal: a zero just beside the turning point, if it crosses. */
function turningPoint(
  f: (x: number) => number, values: ReadonlyMap<number, number>, at: (k: number) => number, here: number, sign: 1 | -1,
): number | null {
  const middle = values.get(here - sign);
  const before = values.get(here - 2 * sign);
  const last = values.get(here);
  if (middle === undefined || before === undefined || last === undefined) return null;
  const size = Math.abs(middle);
  if (!(size * (1 + 1e-9) < Math.abs(before) && size * (1 + 1e-9) < Math.abs(last))) return null;
  let a = at(here - 2 * sign);
  let b = at(here);
  const golden = (Math.sqrt(5) - 1) / 2;
  for (let round = 0; round < 60; round++) {
    const left = b - golden * (b - a);
    const right = a + golden * (b - a);
    const [fl, fr] = [f(left), f(right)];
    if (fl > 0 !== middle > 0) return findZero(f, at(here - 2 * sign), left, before, fl);
    if (fr > 0 !== middle > 0) return findZero(f, at(here - 2 * sign), right, before, fr);
    if (Math.abs(fl) < Math.abs(fr)) b = right;
    else a = left;
  }
  return null;
}

function withRate(generator: Generator, from: number, to: number, rate: number): Generator {
  const arrows: Arrow[] = [];
  for (const arrow of generator.arrows()) if (arrow[0] !== from || arrow[1] !== to) arrows.push(arrow);
  arrows.push([from, to, rate]);
  return Generator.fromArrows(generator.size, arrows);
}
