/**
 * Long computations that give way.
 *
 * A question whose cost can exceed about 0.3 s is written as a generator function that yields its progress between
 * pieces of work of at most some 20 ms (one matrix squaring in blocks, a batch of jumps). The same code then serves a call
 * that must answer now (`finish`) and one that may answer later without holding the thread (`settle`).
 */

/** A computation that can be paused: yields its progress from 0 to 1, returns its answer. */
export type Steps<T> = globalThis.Generator<number, T, void>;

export interface SettleOptions {
  /** How long to work before the first return to the caller, in milliseconds. */
  readonly budgetMs: number;
  /** How long each later slice may hold the thread, in milliseconds. */
  readonly sliceMs: number;
  /** Stops the work between two slices; the promise then rejects with the signal's reason. */
  readonly signal?: Pick<AbortSignal, "aborted" | "reason">;
  /** Told the progress, 0 to 1, at the end of each slice. */
  readonly onProgress?: (progress: number) => void;
}

/** Runs the computation to its end now. */
export function finish<T>(steps: Steps<T>): T {
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
  }
}

/**
 * Runs the computation for `budgetMs`; an answer found by then is returned as it is, a `Problem` thrown as it is. Otherwise
 * a promise is returned and the work goes on in slices of `sliceMs`, each a task of its own, so that a host can paint and
 * take input in between. Where a runtime offers no timer, nothing could run in between, and the work is finished at once.
 */
export function settle<T>(steps: Steps<T>, options: SettleOptions): T | Promise<T> {
  const { budgetMs, sliceMs, signal, onProgress } = options;
  if (signal?.aborted) {
    steps.return(undefined as never);
    throw reasonOf(signal);
  }
  const first = slice(steps, budgetMs);
  if (first.done) return first.value;
  onProgress?.(first.value);
  if (typeof setTimeout !== "function") return finish(steps);
  return new Promise<T>((resolve, reject) => {
    const next = (): void => {
      try {
        if (signal?.aborted) {
          steps.return(undefined as never);
          reject(reasonOf(signal));
          return;
        }
        const step = slice(steps, sliceMs);
        if (step.done) {
          resolve(step.value);
          return;
        }
        onProgress?.(step.value);
        setTimeout(next, 0);
      } catch (problem) {
        reject(problem);
      }
    };
    setTimeout(next, 0);
  });
}

/** Runs one computation inside another, its progress mapped onto `from .. to` of the whole. */
export function* within<T>(steps: Steps<T>, from: number, to: number): Steps<T> {
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
    yield from + (to - from) * step.value;
  }
}

function slice<T>(steps: Steps<T>, milliseconds: number): IteratorResult<number, T> {
  const end = now() + milliseconds;
  for (;;) {
    const step = steps.next();
    if (step.done || now() >= end) return step;
  }
}

function now(): number {
  return typeof performance === "object" ? performance.now() : Date.now();
}

function reasonOf(signal: Pick<AbortSignal, "aborted" | "reason">): Error {
  if (signal.reason instanceof Error) return signal.reason;
  const error = new Error("The computation was cancelled.");
  error.name = "AbortError";
  return error;
}
