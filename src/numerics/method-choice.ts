import type { MatrixKernel } from "./matrix-kernel";
import { jsKernel } from "./js-kernel";
import { wasmKernel } from "./wasm-kernel";

/** How one row is taken through time: jump by jump, or through the matrix of all rows. */
export type Method = "row" | "matrix";

/** The faster kernel of those that this runtime has. */
export function denseKernel(): MatrixKernel {
  return wasmKernel() ?? jsKernel;
}

/** Nanoseconds of one arrow or state in a jump, and of one multiply-add of the matrix kernel. Measured; only ratios matter. */
const JUMP_COST = 1.5;
const PRODUCT_COST = 0.1;

/** Full matrices of more states, and a list of their squarings, would fill the memory. */
export const LARGEST_MATRIX = 1000;

/** Arrows and states that a walk may touch before a question is given up: some minutes. */
export const LARGEST_WALK = 1e11;

/** Chains up to this size go through the matrix whenever jumps are many: it costs little there. */
export const SMALL = 300;
const FEW_JUMPS = 32;

/**
 * The method for one start and the given times: the cheaper one by measured cost, where a jump touches every arrow and state and
 * a squaring costs n³; for full tables the two cross near Λt = n. A small chain is walked for at most n jumps (and 32):
 * thousands of jumps add up more roundings than a few squarings do (3e-15 against 5e-16 measured at 100 to 600 jumps).
 *
 * @param size states
 * @param arrows arrows
 * @param jumps Λt of the longest time
 * @param times number of times
 */
export function chooseMethod(size: number, arrows: number, jumps: number, times: number): Method {
  if (size > LARGEST_MATRIX) return "row";
  if (size <= SMALL && jumps > Math.max(size, FEW_JUMPS)) return "matrix";
  const walked = jumps + 8 * Math.sqrt(jumps) + 20;
  const row = walked * (arrows + size * (1 + times)) * JUMP_COST;
  const squarings = 8 + Math.max(0, Math.log2(jumps));
  const matrix = squarings * size * size * (size * PRODUCT_COST + 4) + times * squarings * size * size;
  return row <= matrix ? "row" : "matrix";
}
