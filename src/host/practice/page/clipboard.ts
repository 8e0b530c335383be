/**
 * Copy, cut and paste. Other programs get tab-separated text; between cells of this page, also in another tab, formulas
 * travel under a type of our own.
 */
import { EditRefused, areaText, cellText, copy, move, paste, type Clip } from "../engine";
import type { Editor } from "./editor";
import type { Grid } from "./grid";
import type { Outlines } from "./outlines";
import { over } from "./selection";
import type { Session } from "./session";

const OWN = "application/x-stayrate-cells";

export function listenToClipboard(session: Session, grid: Grid, outlines: Outlines, editor: Editor): void {
  let cut: Clip | null = null;
  /** Text selected elsewhere on the page, in the pane say, is copied as such. */
  const textSelected = (): boolean => {
    const selection = window.getSelection();
    return selection !== null && !selection.isCollapsed && !grid.element.contains(selection.anchorNode);
  };
  const ours = (event: Event): boolean => !editor.open && (event.target === grid.element || event.target === document.body || (event.target instanceof Node && grid.element.contains(event.target)));

  const take = (event: ClipboardEvent, isCut: boolean): void => {
    if (!ours(event) || textSelected() || !event.clipboardData) return;
    event.preventDefault();
    let clip: Clip;
    try {
      clip = copy(session.book, session.area);
    } catch (error) {
      if (!(error instanceof EditRefused)) throw error;
      session.say(error.message);
      return;
    }
    event.clipboardData.setData("text/plain", clip.text);
    event.clipboardData.setData(OWN, JSON.stringify(clip));
    cut = isCut && session.readOnly === null ? clip : null;
    outlines.copy(clip.area);
    session.say(`${areaText(clip.area)} ${isCut ? "is cut; paste moves it" : "is copied"}.`);
  };

  document.addEventListener("copy", (event) => take(event, false));
  document.addEventListener("cut", (event) => take(event, true));
  document.addEventListener("paste", (event) => {
    if (!ours(event) || !event.clipboardData) return;
    event.preventDefault();
    const text = event.clipboardData.getData("text/plain");
    const own = read(event.clipboardData.getData(OWN));
    const at = session.area;
    const label = `pasting at ${cellText(at.row, at.column)}`;
    session.attempt(() => {
      let pasted = at;
      if (cut && own && cut.text === text) {
        pasted = move(session.book, cut.area, at, label);
        cut = null;
        outlines.copy(null);
      } else if (own || text !== "") pasted = paste(session.book, own ?? text, at, label);
      else {
        session.say("The clipboard holds no text.");
        return;
      }
      session.select(over(pasted));
      session.say(`Pasted into ${areaText(pasted)}.`);
    });
  });
}

function read(json: string): Clip | null {
  try {
    const clip: unknown = JSON.parse(json);
    return typeof clip === "object" && clip !== null && "area" in clip && "text" in clip ? (clip as Clip) : null;
  } catch {
    return null;
  }
}
