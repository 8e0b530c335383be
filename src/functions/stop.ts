/** A request to stop work: what `AbortSignal` is, for runtimes that may lack it. */
export class Stop {
  aborted = false;
  reason: Error | null = null;
  private readonly listeners: (() => void)[] = [];

  request(reason: Error): void {
    if (this.aborted) return;
    this.aborted = true;
    this.reason = reason;
    for (const listener of this.listeners) listener();
  }

  onRequest(listener: () => void): void {
    this.listeners.push(listener);
  }
}
