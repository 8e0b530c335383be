/** What is said to the person: in words on the page for a while, and to screen readers as a polite live region. */
import { el } from "./dom";

export class Announcer {
  /** Seen in the foot line, read aloud. */
  readonly element = el("p", { class: "said", role: "status", "aria-live": "polite" });
  /** Only read aloud: what the eye sees elsewhere. */
  readonly unseen = el("p", { class: "unseen", "aria-live": "polite", id: "spoken" });

  say(sentence: string): void {
    // An equal sentence is said again only when the text changes in between.
    this.element.textContent = "";
    this.element.textContent = sentence;
  }

  clear(): void {
    if (this.element.textContent !== "") this.element.textContent = "";
  }

  speak(sentence: string): void {
    if (this.unseen.textContent !== sentence) this.unseen.textContent = sentence;
  }
}
