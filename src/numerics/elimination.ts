import { eliminateDense } from "./dense-elimination";
import type { Elimination, LeakSystem, Pausable } from "./leak-system";
import { eliminateSparse, planElimination } from "./sparse-elimination";

/** Up to here a full matrix is always as quick as planning a sparse elimination. */
export const ALWAYS_DENSE = 200;
/** A planned sparse multiply-add costs about this many dense ones (indirect addressing). */
export const SPARSE_COST = 6;
/** A full matrix of this many states takes 128 MB. */
export const LARGEST_DENSE = 4000;
/** Multiply-adds beyond which an elimination would take minutes. */
export const LARGEST_WORK = 6e10;

/**
 * The elimination of a leak system, on a full matrix or in sparse form, whichever is expected to be quicker.
 * `null` where either would take minutes: thousands of states without local structure.
 */
export function* eliminate(system: LeakSystem): Pausable<Elimination | null> {
  const n = system.size;
  const denseWork = n ** 3 / 3;
  if (n <= ALWAYS_DENSE || system.rate.length > (n * n) / 8 && n <= LARGEST_DENSE) return yield* eliminateDense(system);
  const limit = n <= LARGEST_DENSE ? Math.min(denseWork / SPARSE_COST, LARGEST_WORK) : LARGEST_WORK;
  const plan = yield* planElimination(system, limit);
  if (plan) return yield* eliminateSparse(system, plan);
  return n <= LARGEST_DENSE ? yield* eliminateDense(system) : null;
}
