import type { Answer, AnswerCell, Refusal } from "../cells/answer";
import type { Argument } from "../cells/argument";
import type { Stop } from "./stop";

/** What crosses between the page and its worker. */
export interface Order {
  readonly number: number;
  readonly id: string;
  readonly args: readonly Argument[];
}
export interface Delivery {
  readonly number: number;
  readonly answer?: Answer | AnswerCell;
  readonly refusal?: Refusal;
}

declare const importScripts: unknown;

/** The address of this very script; only a page knows it, and only while it loads the script. */
const OWN_ADDRESS = typeof document === "object" && document.currentScript && "src" in document.currentScript ? document.currentScript.src : "";

/** Whether this script runs as the page's worker: then it answers orders and registers nothing. */
export const IS_WORKER = typeof importScripts === "function" && typeof postMessage === "function";

/** The worker cannot be had: the work is to be done here. */
export class AsideFailed extends Error {}

interface Waiting extends Order {
  readonly resolve: (delivery: Delivery) => void;
  readonly reject: (reason: unknown) => void;
}

/**
 * One worker that runs this same script and works out long answers one after another, so that the sheet stays alive.
 * Cancelling the order in work ends the worker; the next order starts a new one.
 */
export class Aside {
  private worker: Worker | null = null;
  private broken = false;
  private current: Waiting | null = null;
  private readonly queue: Waiting[] = [];
  private orders = 0;

  constructor(private readonly address: string = OWN_ADDRESS) {}

  /** False in a runtime without workers, or once one could not be started. */
  get available(): boolean {
    return !this.broken && this.address !== "" && typeof Worker === "function";
  }

  /** Rejects with `AsideFailed` when the worker fails, with the stop's reason when stopped. */
  order(id: string, args: readonly Argument[], stop: Stop): Promise<Delivery> {
    return new Promise((resolve, reject) => {
      const waiting: Waiting = { number: ++this.orders, id, args, resolve, reject };
      stop.onRequest(() => this.cancel(waiting, stop.reason));
      this.queue.push(waiting);
      this.next();
    });
  }

  private next(): void {
    const waiting = this.current ? undefined : this.queue.shift();
    if (!waiting) return;
    this.current = waiting;
    try {
      this.worker ??= this.start();
      this.worker.postMessage({ number: waiting.number, id: waiting.id, args: waiting.args } satisfies Order);
    } catch {
      this.fail();
    }
  }

  private start(): Worker {
    const worker = new Worker(this.address);
    worker.onmessage = (event: MessageEvent<Delivery>) => {
      const done = this.current;
      if (!done || done.number !== event.data.number) return;
      this.current = null;
      done.resolve(event.data);
      this.next();
    };
    worker.onerror = () => this.fail();
    return worker;
  }

  /** Everything that waits goes back to whoever ordered it. */
  private fail(): void {
    this.broken = true;
    this.stop();
    const waiting = this.current ? [this.current, ...this.queue] : [...this.queue];
    this.current = null;
    this.queue.length = 0;
    for (const one of waiting) one.reject(new AsideFailed());
  }

  private cancel(waiting: Waiting, reason: unknown): void {
    waiting.reject(reason);
    const at = this.queue.indexOf(waiting);
    if (at >= 0) this.queue.splice(at, 1);
    if (this.current !== waiting) return;
    this.stop();
    this.current = null;
    this.next();
  }

  private stop(): void {
    this.worker?.terminate();
    this.worker = null;
  }
}

/** In the worker: answers orders by `work`. */
export function answerOrders(work: (order: Order) => Delivery): void {
  addEventListener("message", (event: MessageEvent<Order>) => postMessage(work(event.data)));
}
