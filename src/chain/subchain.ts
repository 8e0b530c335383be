import { eliminate } from "../numerics/elimination";
import type { Elimination, LeakSystem } from "../numerics/leak-system";
import type { StateSet } from "./classes";
import type { Generator } from "./generator";
import { Problem } from "./problem";
import type { Steps } from "./steps";

/** The states that a question is really about, as a leak system, with the way back to the whole chain. */
export interface Subchain {
  readonly members: Int32Array;
  /** Position of each state in `members`, −1 where it is none. */
  readonly position: Int32Array;
  readonly system: LeakSystem;
}

/** The chain watched in `members` (ascending) only; every rate out of them, and `extraLeak` (a discount), is leak. */
export function subchain(generator: Generator, members: Int32Array, extraLeak = 0): Subchain {
  const position = new Int32Array(generator.size).fill(-1);
  members.forEach((state, at) => (position[state] = at));
  if (members.length === generator.size) {
    const { size, rowStart, toState, rate } = generator;
    return { members, position, system: { size, rowStart, toState, rate, leak: new Float64Array(size).fill(extraLeak) } };
  }
  const rowStart = new Int32Array(members.length + 1);
  const leak = new Float64Array(members.length).fill(extraLeak);
  let count = 0;
  for (let a = 0; a < members.length; a++) {
    for (let p = generator.rowStart[members[a]]; p < generator.rowStart[members[a] + 1]; p++)
      if (position[generator.toState[p]] < 0) leak[a] += generator.rate[p];
      else count++;
    rowStart[a + 1] = count;
  }
  const toState = new Int32Array(count);
  const rate = new Float64Array(count);
  count = 0;
  for (const state of members)
    for (let p = generator.rowStart[state]; p < generator.rowStart[state + 1]; p++) {
      const to = position[generator.toState[p]];
      if (to < 0) continue;
      toState[count] = to;
      rate[count++] = generator.rate[p];
    }
  return { members, position, system: { size: members.length, rowStart, toState, rate, leak } };
}

/** Rate from each member straight into `set`. */
export function rateInto(generator: Generator, members: Int32Array, set: StateSet): Float64Array {
  const rates = new Float64Array(members.length);
  for (let a = 0; a < members.length; a++)
    for (let p = generator.rowStart[members[a]]; p < generator.rowStart[members[a] + 1]; p++)
      if (set[generator.toState[p]]) rates[a] += generator.rate[p];
  return rates;
}

/** The states whose mask entry equals `value`. */
export function membersOf(set: StateSet, value = 1): Int32Array {
  let count = 0;
  for (const entry of set) if (entry === value) count++;
  const members = new Int32Array(count);
  count = 0;
  for (let i = 0; i < set.length; i++) if (set[i] === value) members[count++] = i;
  return members;
}

/**
 * Eliminates a subchain.
 * @throws `tooManyStates` where it would take minutes, `ratesTooFarApart` where products of rates leave the double range.
 */
export function* eliminated(chain: Subchain): Steps<Elimination> {
  const elimination = yield* eliminate(chain.system);
  if (!elimination) throw new Problem("tooManyStates", { states: chain.members.length });
  if (!elimination.sound) throw new Problem("ratesTooFarApart", {}, "noAnswer");
  return elimination;
}
