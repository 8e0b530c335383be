import { communicatingClasses } from "../chain/classes";
import { settle, type Steps, within } from "../chain/steps";
import { settlingTimeSteps } from "../chain/settling";
import { stationarySharesSteps } from "../chain/stationary";
import type { RateTable } from "../table/rate-table";

/** Within 1 % of the limit, in total variation: the default of `SETTLING`. */
export const SETTLED = 0.01;
/** Beyond this many states the settling time would keep the pane busy for long; it is then left out. */
const LARGEST_SETTLING = 200;

/** What a reviewer asks of a table, state by state and as a whole. */
export interface ReviewFacts {
  /** Row sums with a given diagonal: exits plus diagonal. null where the diagonal is worked out. */
  readonly residuals: readonly (number | null)[];
  readonly exitRates: Float64Array;
  /** Number of each state's class, from 1 in order of the first state, and what it is. */
  readonly classes: readonly { readonly number: number; readonly kind: "transient" | "closed" | "absorbing" }[];
  /** null where several closed classes make them depend on the start. */
  readonly shares: Float64Array | null;
  /** Flow in minus flow out of each state in the long run; null without shares. */
  readonly imbalance: Float64Array | null;
  readonly slowest: ReviewArrow | null;
  readonly fastest: ReviewArrow | null;
  /** null where it does not exist or the table is too large for it. */
  readonly settling: number | null;
}

export interface ReviewArrow {
  readonly from: number;
  readonly to: number;
  readonly rate: number;
}

/** Works the facts out in slices that leave the pane responsive. */
export async function reviewFacts(table: RateTable): Promise<ReviewFacts> {
  return settle(reviewSteps(table), { budgetMs: 20, sliceMs: 20 });
}

function* reviewSteps(table: RateTable): Steps<ReviewFacts> {
  const { generator, givenDiagonal, size } = table;
  const { classOf, closed } = communicatingClasses(generator);
  const kindOf = (state: number): "transient" | "closed" | "absorbing" => {
    const at = classOf[state];
    if (!closed[at]) return "transient";
    return generator.exitRate[state] === 0 ? "absorbing" : "closed";
  };
  const single = closed.filter(Boolean).length === 1;
  const shares = single ? yield* within(stationarySharesSteps(generator), 0, 0.3) : null;
  const settling = size <= LARGEST_SETTLING ? yield* within(settlingTimeSteps(generator, SETTLED), 0.3, 1) : null;
  let slowest: ReviewArrow | null = null;
  let fastest: ReviewArrow | null = null;
  for (const [from, to, rate] of generator.arrows()) {
    if (!slowest || rate < slowest.rate) slowest = { from, to, rate };
    if (!fastest || rate > fastest.rate) fastest = { from, to, rate };
  }
  return {
    residuals: Array.from({ length: size }, (_, state) => {
      const given = givenDiagonal[state];
      return typeof given === "number" ? generator.exitRate[state] + given : null;
    }),
    exitRates: generator.exitRate,
    classes: Array.from({ length: size }, (_, state) => ({ number: classOf[state] + 1, kind: kindOf(state) })),
    shares,
    imbalance: shares ? imbalanceOf(table, shares) : null,
    slowest,
    fastest,
    settling: settling !== null && Number.isFinite(settling) ? settling : null,
  };
}

function imbalanceOf({ generator }: RateTable, shares: Float64Array): Float64Array {
  const difference = Float64Array.from(shares, (share, state) => -share * generator.exitRate[state]);
  for (const [from, to, rate] of generator.arrows()) difference[to] += shares[from] * rate;
  return difference;
}
