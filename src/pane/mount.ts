import { keepingFocus, patch, h, type Child } from "./dom";
import "./pane.css";
import { Session } from "./session";
import { openedName, type Opened, type View } from "./state";
import { bookView } from "./views/book";
import { checkView } from "./views/check";
import { foot } from "./views/foot";
import { head, tabs } from "./views/head";
import { notices } from "./views/notices";
import type { Workbook } from "./workbook";

export interface PaneOptions {
  /** The host's theme; without it the reader's own preference decides. */
  readonly theme?: "light" | "dark";
  now?(): Date;
}

export interface Pane {
  refresh(): Promise<void>;
  show(view: View): void;
  setTheme(theme: "light" | "dark" | null): void;
  dispose(): void;
}

/** Puts the pane into `root`, an empty block of definite height, and keeps it in step with the workbook. */
export function mountPane(root: HTMLElement, workbook: Workbook, options: PaneOptions = {}): Pane {
  const session = new Session(workbook, options);
  let shown: View | null = null;
  let opened: Opened | null = null;

  const render = (): void => {
    const before = opened;
    const { view } = session.state;
    opened = session.state.opened;
    const closing = before && !opened ? `[data-opens="${CSS.escape(openedName(before))}"]` : null;
    keepingFocus(root, () => patch(root, page(session)), closing);
    const panel = root.querySelector<HTMLElement>("#sr-panel");
    if (shown !== view && panel) panel.scrollTop = 0;
    shown = view;
    // A form or preview that has just opened takes the focus.
    if (!opened || (before && openedName(before) === openedName(opened))) return;
    const first = root.querySelector<HTMLElement>("[data-autofocus]");
    first?.focus();
    if (first instanceof HTMLInputElement) first.select();
  };

  const setTheme = (theme: "light" | "dark" | null): void => {
    if (theme) root.dataset.theme = theme;
    else delete root.dataset.theme;
  };

  root.classList.add("sr-pane");
  setTheme(options.theme ?? null);
  session.subscribe(render);
  render();
  void session.start();

  return {
    refresh: () => session.refresh(),
    show: (view) => session.show(view),
    setTheme,
    dispose() {
      session.dispose();
      patch(root, []);
      root.classList.remove("sr-pane");
      setTheme(null);
    },
  };
}

function page(session: Session): Child[] {
  const { view } = session.state;
  return [
    head(session),
    tabs(session),
    h(
      "div",
      { id: "sr-panel", class: "sr-panel", role: "tabpanel", "aria-labelledby": `sr-tab-${view}`, "aria-busy": session.state.busy ? "true" : "false" },
      notices(session),
      view === "check" ? checkView(session) : bookView(session),
    ),
    foot(),
  ];
}
