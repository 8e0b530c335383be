/** The host's events, joined: many in a row are told once, when they pause. */
import { type WorkbookEvent } from "../../pane/workbook";
import { has, run } from "./run";

type Handler = OfficeExtension.EventHandlerResult<unknown>;

/** A pause of this length ends a run of events; a run longer than the second figure is told in between. In ms. */
const PAUSE: Readonly<Record<WorkbookEvent, readonly [pause: number, longest: number]>> = {
  selection: [80, 400],
  change: [200, 1000],
  sheets: [200, 1000],
};

export class Events {
  private readonly listeners = new Map<WorkbookEvent, Set<() => void>>();
  private readonly handlers = new Map<WorkbookEvent, Promise<readonly Handler[]>>();
  private readonly timers = new Map<WorkbookEvent, { first: number; timer: ReturnType<typeof setTimeout> }>();

  /** Calls the listener after each run of events; the function returned ends that. */
  on(event: WorkbookEvent, listener: () => void): () => void {
    const set = this.listeners.get(event) ?? new Set();
    this.listeners.set(event, set);
    set.add(listener);
    if (!this.handlers.has(event)) {
      const registered = register(event, () => this.heard(event));
      // Without the event the pane still works: its Refresh reads again.
      registered.catch(() => undefined);
      this.handlers.set(event, registered);
    }
    return () => {
      set.delete(listener);
      if (set.size === 0) this.release(event);
    };
  }

  private heard(event: WorkbookEvent): void {
    const [pause, longest] = PAUSE[event];
    const now = Date.now();
    const running = this.timers.get(event);
    if (running) clearTimeout(running.timer);
    const first = running?.first ?? now;
    const wait = Math.max(0, Math.min(pause, first + longest - now));
    const timer = setTimeout(() => {
      this.timers.delete(event);
      for (const listener of [...(this.listeners.get(event) ?? [])]) listener();
    }, wait);
    this.timers.set(event, { first, timer });
  }

  private release(event: WorkbookEvent): void {
    const running = this.timers.get(event);
    if (running) clearTimeout(running.timer);
    this.timers.delete(event);
    const handlers = this.handlers.get(event);
    this.handlers.delete(event);
    void handlers?.then(remove).catch(() => undefined);
  }
}

function register(event: WorkbookEvent, heard: () => void): Promise<readonly Handler[]> {
  const tell = (): Promise<void> => {
    heard();
    return Promise.resolve();
  };
  return run(async (context) => {
    const { workbook } = context;
    const sheets = workbook.worksheets;
    const sources: Record<WorkbookEvent, () => Handler[]> = {
      selection: () => [workbook.onSelectionChanged.add(tell), sheets.onActivated.add(tell)],
      // Recalculated cells raise no change of their own (reported), hence the second; the third is for filters and hiding.
      change: () => [sheets.onChanged.add(tell), sheets.onCalculated.add(tell), ...(has("1.11") ? [sheets.onRowHiddenChanged.add(tell)] : [])],
      sheets: () => [
        sheets.onAdded.add(tell),
        sheets.onDeleted.add(tell),
        ...(has("1.17") ? [sheets.onNameChanged.add(tell), sheets.onVisibilityChanged.add(tell), sheets.onMoved.add(tell)] : []),
      ],
    };
    const handlers = sources[event]();
    await context.sync();
    return handlers;
  });
}

async function remove(handlers: readonly Handler[]): Promise<void> {
  if (handlers.length === 0) return;
  // A handler is removed in the context that added it.
  await Excel.run(handlers[0].context as Excel.RequestContext, async (context) => {
    for (const handler of handlers) handler.remove();
    await context.sync();
  });
}
