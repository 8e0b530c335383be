import { wholeNumber } from "./argument";
import { Generator, type Arrow } from "./generator";
import { nameOf, namesOf, type Built, type Named } from "./named";
import { Problem } from "./problem";

/**
 * A stay that is less variable than exponential: one state replaced by equal stages in a row.
 *
 * With k stages and exit rate q, each stage is left at k·q: the stay is Erlang distributed with the same mean 1/q and 1/k of
 * the variance. Arrows in go to stage 1; exits leave from the last stage at k times their rate.
 *
 * @param chain - the table
 * @param state - the state to replace, from 0
 * @param count - number of stages, 1 or more
 * @returns the stages stand where the state stood: "Repair (1 of 3)" …
 * @throws `stateWithoutExits` {state, name}; `notWholeNumber`
 *
 * *Method*: the method of stages, Erlang 1917 (common practice).
 *
 * @example stages({ generator: Generator.fromArrows(2, [[0, 1, 2]]), names: ["Repair", "Up"] }, 0, 3).names[0] // "Repair (1 of 3)"
 */
export function stages(chain: Named, state: number, count: number): Built {
  wholeNumber("stages", count, 1);
  const { generator } = chain;
  const name = nameOf(chain.names, state);
  if (generator.exitRate[state] === 0) throw new Problem("stateWithoutExits", { state, name });
  const place = (s: number): number => (s > state ? s + count - 1 : s);
  const last = state + count - 1;
  const arrows: Arrow[] = [];
  for (const [from, to, rate] of generator.arrows())
    arrows.push(from === state ? [last, place(to), count * rate] : [place(from), place(to), rate]);
  for (let k = state; k < last; k++) arrows.push([k, k + 1, count * generator.exitRate[state]]);
  const names = [...namesOf(chain)];
  names.splice(state, 1, ...Array.from({ length: count }, (_, k) => `${name} (${k + 1} of ${count})`));
  return { generator: Generator.fromArrows(generator.size + count - 1, arrows), names };
}
