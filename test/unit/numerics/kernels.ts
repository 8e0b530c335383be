import { jsKernel } from "../../../src/numerics/js-kernel";
import type { MatrixKernel } from "../../../src/numerics/matrix-kernel";
import { wasmKernel } from "../../../src/numerics/wasm-kernel";

const wasm = wasmKernel();
if (!wasm) throw new Error("This runtime has no WebAssembly SIMD; the kernels cannot be compared.");

/** Both dense kernels, for suites that run over each. */
export const kernels: readonly MatrixKernel[] = [jsKernel, wasm];

/** Numbers in [0, 1) that are the same at every run (Park & Miller 1988). */
export function repeatable(seed: number): () => number {
  let state = seed;
  return () => (state = (state * 48271) % 2147483647) / 2147483647;
}
