import { communicatingClasses } from "./classes";
import { Generator, type Arrow } from "./generator";
import { nameOf, type Built, type Named } from "./named";
import { Problem } from "./problem";
import { needOneClosedClass, stationaryShares } from "./stationary";

/** States of a group may differ by this much, relative, in their rate into another group. */
export const LUMPABLE = 1e-12;

/**
 * States merged into groups.
 *
 * Exact when every state of a group has the same total rate into each other group (strong lumpability); that rate is then the
 * group's. `approximate` gives the average rate, weighted by the long-run shares of the states in the group.
 *
 * @param chain - the table, n states
 * @param groups - n group names; upper and lower case and outer spaces do not matter
 * @param approximate - whether unequal states may be merged
 * @returns groups in the order of first appearance, each spelt as it first appears
 * @throws `groupsNotOnePerState` {groups, states}; `groupMissing` {state}; `notLumpable` {state, other, group, rate,
 *   otherRate, disagreement}, the largest disagreement; with `approximate` as `stationaryShares`
 *
 * *Method*: sums over groups compared directly (Kemeny & Snell 1960, theorem 6.3.2 [from memory]; Derisavi, Hermanns &
 * Sanders 2003 for refinement, which is not needed for given groups). A group whose states have no long-run share is weighted
 * equally. *Cost*: arrows + n × groups.
 *
 * @example lump({ generator: queue(1, 2, 1, 2).generator, names: null }, ["idle", "busy", "busy"], true).names // ["idle", "busy"]
 */
export function lump(chain: Named, groups: readonly string[], approximate = false): Built {
  const { generator } = chain;
  const n = generator.size;
  if (groups.length !== n) throw new Problem("groupsNotOnePerState", { groups: groups.length, states: n });
  const names: string[] = [];
  const numberOf = new Map<string, number>();
  const groupOf = Int32Array.from(groups, (text, state) => {
    const name = text.trim();
    if (name === "") throw new Problem("groupMissing", { state, name: nameOf(chain.names, state) });
    const key = name.toLowerCase();
    if (!numberOf.has(key)) numberOf.set(key, names.push(name) - 1);
    return numberOf.get(key)!;
  });
  const k = names.length;
  const into = rateIntoGroups(generator, groupOf, k);
  const members: number[][] = names.map(() => []);
  groupOf.forEach((group, state) => members[group].push(state));
  if (!approximate) refuseUnequal(chain, members, names, into);

  if (approximate) needOneClosedClass(communicatingClasses(generator), "none");
  const shares = approximate ? stationaryShares(generator) : null;
  const arrows: Arrow[] = [];
  members.forEach((states, from) => {
    let total = 0;
    if (shares) for (const state of states) total += shares[state];
    for (let to = 0; to < k; to++) {
      if (to === from) continue;
      let rate = 0;
      for (const state of states)
        rate += into[state * k + to] * (shares && total > 0 ? shares[state] / total : 1 / states.length);
      arrows.push([from, to, shares ? rate : into[states[0] * k + to]]);
    }
  });
  return { generator: Generator.fromArrows(k, arrows), names };
}

/** n × k: rate of each state into each group. */
function rateIntoGroups(generator: Generator, groupOf: Int32Array, k: number): Float64Array {
  const into = new Float64Array(generator.size * k);
  for (let i = 0; i < generator.size; i++)
    for (let p = generator.rowStart[i]; p < generator.rowStart[i + 1]; p++)
      into[i * k + groupOf[generator.toState[p]]] += generator.rate[p];
  return into;
}

function refuseUnequal(chain: Named, members: readonly number[][], names: readonly string[], into: Float64Array): void {
  const k = names.length;
  let worst = LUMPABLE;
  let problem: Problem | null = null;
  members.forEach((states, from) => {
    for (let to = 0; to < k; to++) {
      if (to === from) continue;
      let [lowest, highest] = [states[0], states[0]];
      for (const state of states) {
        if (into[state * k + to] < into[lowest * k + to]) lowest = state;
        if (into[state * k + to] > into[highest * k + to]) highest = state;
      }
      const [rate, otherRate] = [into[lowest * k + to], into[highest * k + to]];
      const disagreement = rate === otherRate ? 0 : (otherRate - rate) / otherRate;
      if (disagreement <= worst) continue;
      worst = disagreement;
      problem = new Problem("notLumpable", {
        state: lowest, stateName: nameOf(chain.names, lowest), other: highest, otherName: nameOf(chain.names, highest),
        group: names[to], rate, otherRate, disagreement,
      });
    }
  });
  if (problem) throw problem as Problem;
}
