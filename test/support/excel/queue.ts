/** What a batch asks for, carried out in order at its next synchronisation. A step that fails ends the batch, as in the host. */
export class RequestQueue {
  private waiting: (() => unknown)[] = [];

  add(step: () => unknown): void {
    this.waiting.push(step);
  }

  async flush(): Promise<void> {
    const steps = this.waiting;
    this.waiting = [];
    for (let i = 0; i < steps.length; i++) {
      await steps[i]();
      // A step may ask for more (the properties of a collection's items): still part of this synchronisation.
      steps.push(...this.waiting);
      this.waiting = [];
    }
  }
}

/** An error as the host raises it. */
export class HostError extends Error {
  constructor(
    readonly code: string,
    message = code,
  ) {
    super(message);
  }
}
