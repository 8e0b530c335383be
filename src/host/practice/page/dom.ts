/** Short hand for building elements: `el("button", { class: "word" }, "Undo")`. */
type Child = Node | string | null | undefined;

export function el<K extends keyof HTMLElementTagNameMap>(
  tag: K,
  attributes: Readonly<Record<string, string | number | boolean | null | undefined>> = {},
  ...children: readonly Child[]
): HTMLElementTagNameMap[K] {
  const element = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) set(element, name, value);
  for (const child of children) if (child !== null && child !== undefined) element.append(child);
  return element;
}

/** Sets or, for null, false and undefined, removes an attribute; writes nothing that already stands. */
export function set(element: Element, name: string, value: string | number | boolean | null | undefined): void {
  if (value === null || value === undefined || value === false) {
    if (element.hasAttribute(name)) element.removeAttribute(name);
    return;
  }
  const text = value === true ? "" : String(value);
  if (element.getAttribute(name) !== text) element.setAttribute(name, text);
}

/** A button that is a word. */
export function word(text: string, act: () => void, attributes: Readonly<Record<string, string | boolean>> = {}): HTMLButtonElement {
  const button = el("button", { type: "button", class: "word", ...attributes }, text);
  button.addEventListener("click", act);
  return button;
}
