import { KERNEL_HEX } from "./kernel-bytes";
import type { MatrixBlock, MatrixKernel } from "./matrix-kernel";

/** What `kernel.wat` exports. */
interface KernelExports {
  readonly memory: WebAssembly.Memory;
  multiply(c: number, a: number, b: number, packed: number, stride: number, width: number, first: number, end: number): void;
  combine(target: number, bytes: number, terms: number, termsEnd: number): void;
  addRows(at: number, end: number, shift: number, stride: number, factors: number): void;
  repair(row: number, rows: number, stride: number): void;
}

/** Terms of a combination: at most a matrix a product and the first. */
const TERMS = 16;
const PAGE = 65536;
/** An instance whose memory has grown beyond this is not kept for the next computation. */
const KEPT_BYTES = 16 * 2 ** 20;

let compiled: WebAssembly.Module | null | undefined;
/** Blocks not in use, each with an instance of its own: a computation that is paused keeps its block while others run. */
const free: WasmBlock[] = [];

/**
 * The dense kernel in WebAssembly SIMD, or null where the runtime has none. Compiled at first use, synchronously: the
 * module has some 2 kB, and nothing is awaited.
 */
export function wasmKernel(): MatrixKernel | null {
  if (compiled === undefined) compiled = compile();
  return compiled ? kernel : null;
}

const kernel: MatrixKernel = {
  name: "wasm",
  open(size, count) {
    const block = free.pop() ?? new WasmBlock(instantiate());
    block.layOut(size, count);
    return block;
  },
};

class WasmBlock implements MatrixBlock {
  size = 0;
  stride = 0;
  slots: readonly Float64Array[] = [];
  private open = false;
  /** Two views of the same place: the terms of a combination. */
  private factors = new Float64Array(0);
  private pointers = new Int32Array(0);

  constructor(private readonly kernel: KernelExports) {}

  layOut(size: number, count: number): void {
    this.open = true;
    if (size === this.size && count === this.slots.length) return;
    const stride = (size + 1) & ~1;
    const doubles = stride * stride;
    const { memory } = this.kernel;
    const termsAt = (count * doubles + 4 * stride) * 8;
    const missing = termsAt + 16 * TERMS - memory.buffer.byteLength;
    if (missing > 0) memory.grow(Math.ceil(missing / PAGE));
    // Padding must be zero whatever ran here before; the other entries are written before they are read.
    if (stride !== size) new Float64Array(memory.buffer, 0, count * doubles).fill(0);
    this.size = size;
    this.stride = stride;
    this.factors = new Float64Array(memory.buffer, termsAt, 2 * TERMS);
    this.pointers = new Int32Array(memory.buffer, termsAt, 4 * TERMS);
    this.slots = Array.from({ length: count }, (_, slot) => new Float64Array(memory.buffer, slot * doubles * 8, doubles));
  }

  multiply(target: number, left: number, right: number, firstRow: number, endRow: number): void {
    const { stride } = this;
    const doubles = stride * stride;
    const packed = this.slots.length * doubles * 8;
    const end = (endRow + 1) & ~1;
    this.kernel.multiply(this.at(target), this.at(left), this.at(right), packed, stride * 8, stride, firstRow, end);
  }

  combine(target: number, constant: number, coefficients: readonly number[], sources: readonly number[]): void {
    const { stride, size, factors, pointers } = this;
    for (let k = 0; k < sources.length; k++) {
      factors[2 * k] = coefficients[k];
      pointers[4 * k + 2] = this.at(sources[k]);
    }
    const terms = factors.byteOffset;
    this.kernel.combine(this.at(target), stride * stride * 8, terms, terms + 16 * sources.length);
    if (constant !== 0) {
      const slot = this.slots[target];
      for (let i = 0; i < size; i++) slot[i * stride + i] += constant;
    }
  }

  addRows(target: number, row: number, pivot: number, from: number, factors: Float64Array): void {
    const stride = this.stride * 8;
    const start = this.at(target) + row * stride;
    this.factors.set(factors);
    this.kernel.addRows(start + from * 8, start + stride, (pivot - row) * stride, stride, this.factors.byteOffset);
  }

  repair(target: number): void {
    this.kernel.repair(this.at(target), this.size, this.stride * 8);
  }

  close(): void {
    if (this.open && this.kernel.memory.buffer.byteLength <= KEPT_BYTES) free.push(this);
    this.open = false;
  }

  private at(slot: number): number {
    return slot * this.stride * this.stride * 8;
  }
}

function instantiate(): KernelExports {
  return new WebAssembly.Instance(compiled as WebAssembly.Module).exports as unknown as KernelExports;
}

/** Null where there is no WebAssembly, no SIMD, or a policy that forbids it. */
function compile(): WebAssembly.Module | null {
  if (typeof WebAssembly !== "object") return null;
  try {
    const bytes = Uint8Array.from({ length: KERNEL_HEX.length / 2 }, (_, k) => parseInt(KERNEL_HEX.slice(2 * k, 2 * k + 2), 16));
    return WebAssembly.validate(bytes) ? new WebAssembly.Module(bytes) : null;
  } catch {
    return null;
  }
}
