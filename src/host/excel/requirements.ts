/** What this add-in needs of the host, and the page shown where it is missing. */

const NEEDED: readonly (readonly [set: string, version: string, gives: string])[] = [
  ["SharedRuntime", "1.1", "formulas and pane in one place"],
  ["CustomFunctionsRuntime", "1.3", "formulas of add-ins, with error texts"],
  ["ExcelApi", "1.12", "answers that fill several cells"],
];

/** What the host lacks, as lines for a person; empty when nothing is missing. */
export const missingSets = (isSupported: (set: string, version: string) => boolean): string[] =>
  NEEDED.filter(([set, version]) => !isSupported(set, version)).map(([set, version, gives]) => `${gives} (${set} ${version})`);

/** A plain page in place of the pane. */
export function showNotice(root: HTMLElement, heading: string, lines: readonly string[], list: readonly string[] = []): void {
  const title = document.createElement("h1");
  title.textContent = heading;
  const parts: HTMLElement[] = [title];
  for (const line of lines) {
    const paragraph = document.createElement("p");
    paragraph.textContent = line;
    parts.push(paragraph);
  }
  if (list.length > 0) {
    const items = document.createElement("ul");
    for (const one of list) items.append(Object.assign(document.createElement("li"), { textContent: one }));
    parts.splice(2, 0, items);
  }
  root.className = "notice";
  root.replaceChildren(...parts);
}
