import { strongComponents } from "../numerics/strong-components";
import type { Generator } from "./generator";

/** A set of states as a mask of length n: 1 = in the set. */
export type StateSet = Uint8Array;

export interface Classes {
  /** Class of each state; classes are numbered from 0 in the order of their first states. */
  readonly classOf: Int32Array;
  /** States of each class, ascending. */
  readonly classes: readonly Int32Array[];
  /** Whether the chain stays in the class for good once there. */
  readonly closed: readonly boolean[];
}

/**
 * Which states can reach each other, and which groups are never left?
 *
 * Two states share a class when each can be reached from the other. A class is closed when no arrow leaves it; a closed
 * class of one state is an absorbing state; states of classes that are not closed are transient.
 *
 * @param generator - the chain
 * @param ended - states whose arrows are ignored, as if they were absorbing; none when omitted
 * @returns the classes, numbered by their first states
 *
 * *Method*: strongly connected components, Tarjan 1972. *Cost*: states + arrows. Exact: no rate is compared with anything.
 *
 * @example communicatingClasses(Generator.fromArrows(2, [[0, 1, 3]])).closed // [false, true]
 */
export function communicatingClasses(generator: Generator, ended?: StateSet): Classes {
  const { size, rowStart, toState } = generator;
  if (!ended && size > 0 && generator.arrowCount === size * (size - 1))
    return { classOf: new Int32Array(size), classes: [Int32Array.from({ length: size }, (_, i) => i)], closed: [true] };
  const { component, count } = strongComponents(size, rowStart, toState, ended);
  const numberOf = new Int32Array(count).fill(-1);
  const sizes: number[] = [];
  const classOf = new Int32Array(size);
  for (let i = 0; i < size; i++) {
    let c = numberOf[component[i]];
    if (c < 0) {
      c = numberOf[component[i]] = sizes.length;
      sizes.push(0);
    }
    classOf[i] = c;
    sizes[c]++;
  }
  const classes = sizes.map((length) => new Int32Array(length));
  const filled = new Int32Array(sizes.length);
  const closed = sizes.map(() => true);
  for (let i = 0; i < size; i++) {
    const c = classOf[i];
    classes[c][filled[c]++] = i;
    if (ended?.[i]) continue;
    for (let p = rowStart[i]; p < rowStart[i + 1]; p++) if (classOf[toState[p]] !== c) closed[c] = false;
  }
  return { classOf, classes, closed };
}

/** The states without exits. */
export function absorbingStates(generator: Generator): StateSet {
  return Uint8Array.from({ length: generator.size }, (_, i) =>
    generator.rowStart[i] === generator.rowStart[i + 1] ? 1 : 0);
}

/**
 * The states from which some state of `goal` can be reached, `goal` included, where paths end at a state of `ended`.
 */
export function statesReaching(generator: Generator, goal: StateSet, ended?: StateSet): StateSet {
  const { size, rowStart, toState } = generator;
  const inStart = new Int32Array(size + 1);
  for (const j of toState) inStart[j + 1]++;
  for (let i = 0; i < size; i++) inStart[i + 1] += inStart[i];
  const next = inStart.slice(0, size);
  const from = new Int32Array(toState.length);
  for (let i = 0; i < size; i++) for (let p = rowStart[i]; p < rowStart[i + 1]; p++) from[next[toState[p]]++] = i;
  const reaching = goal.slice();
  const open: number[] = [];
  for (let i = 0; i < size; i++) if (goal[i]) open.push(i);
  for (let j = open.pop(); j !== undefined; j = open.pop())
    for (let p = inStart[j]; p < inStart[j + 1]; p++) {
      const i = from[p];
      if (reaching[i] || ended?.[i]) continue;
      reaching[i] = 1;
      open.push(i);
    }
  return reaching;
}

/** The states that can be reached from `begin`, `begin` included, where paths end at a state of `ended`. */
export function statesReached(generator: Generator, begin: StateSet, ended?: StateSet): StateSet {
  const { size, rowStart, toState } = generator;
  const reached = begin.slice();
  const open: number[] = [];
  for (let i = 0; i < size; i++) if (begin[i]) open.push(i);
  for (let i = open.pop(); i !== undefined; i = open.pop()) {
    if (ended?.[i]) continue;
    for (let p = rowStart[i]; p < rowStart[i + 1]; p++) {
      const j = toState[p];
      if (reached[j]) continue;
      reached[j] = 1;
      open.push(j);
    }
  }
  return reached;
}
