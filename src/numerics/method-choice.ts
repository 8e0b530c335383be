import type { MatrixKernel } from "./matrix-kernel";
import { jsKernel } from "./js-kernel";
import { wasmKernel } from "./wasm-kernel";

/** How one row is taken through time: jump by jump, or through the matrix of all rows. */
export type Method = "row" | "matrix";

/** Below this order the plain kernel is faster: calls and copies outweigh the arithmetic. Measured, `test/bench`. */
export const WASM_FROM = 4;

/** The faster kernel for matrices of this order. */
export function kernelFor(size: number): MatrixKernel {
  return (size >= WASM_FROM ? wasmKernel() : null) ?? jsKernel;
}

/** Nanoseconds of one arrow or state in a jump, and of one multiply-add of the matrix kernel. Measured; only ratios matter. */
const JUMP_COST = 1.5;
const PRODUCT_COST = 0.2;

/**
 * The cheaper method for one start and the given times, by measured cost: a jump touches every arrow and state, a squaring
 * costs n³. For full tables the two cross near Λt = n.
 *
 * @param size states
 * @param arrows arrows
 * @param jumps Λt of the longest time
 * @param times number of times
 */
export function cheaperMethod(size: number, arrows: number, jumps: number, times: number): Method {
  const walked = jumps + 8 * Math.sqrt(jumps) + 20;
  const row = walked * (arrows + size * (1 + times)) * JUMP_COST;
  const squarings = 8 + Math.max(0, Math.log2(jumps));
  const matrix = squarings * size * size * (size * PRODUCT_COST + 4) + times * squarings * size * size;
  return row <= matrix ? "row" : "matrix";
}
