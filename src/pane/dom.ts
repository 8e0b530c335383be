/**
 * State to DOM: views return plain descriptions of elements, `patch` brings the page in line with them and keeps what
 * stays (so focus, scroll position, open details and half-typed text survive a re-render). Text only, never markup.
 */

export interface Props {
  readonly key?: string;
  readonly on?: Readonly<Record<string, (event: Event) => void>>;
  /** Attributes; true is an empty attribute, false, null and undefined leave it out. */
  readonly [attribute: string]: unknown;
}

export interface VElement {
  readonly tag: string;
  readonly props: Props;
  readonly children: readonly VNode[];
}

export type VNode = VElement | string;
export type Child = VNode | null | undefined | false | readonly Child[];

export function h(tag: string, props: Props | null, ...children: Child[]): VElement {
  return { tag, props: props ?? {}, children: flatten(children) };
}

function flatten(children: readonly Child[]): VNode[] {
  const flat: VNode[] = [];
  for (const child of children) {
    if (child === null || child === undefined || child === false) continue;
    if (typeof child === "string" || "tag" in child) flat.push(child as VNode);
    else flat.push(...flatten(child));
  }
  return flat;
}

interface Bound {
  props: Props;
  readonly types: Set<string>;
}

const bound = new WeakMap<Node, Bound>();

/** Makes the children of `parent` those described, reusing nodes of the same key and tag. */
export function patch(parent: Element, children: readonly Child[]): void {
  const wanted = flatten(children);
  const take = reusable(parent);
  const nodes = wanted.map((vnode) => take(vnode) ?? create(vnode, parent.ownerDocument));
  // What goes leaves first: then a node that stays is never moved, and a focused one never blurred, by removals before it.
  const staying = new Set<ChildNode>(nodes);
  for (const node of Array.from(parent.childNodes)) if (!staying.has(node)) node.remove();
  let position: ChildNode | null = parent.firstChild;
  nodes.forEach((node, at) => {
    if (node === position) position = position.nextSibling;
    else parent.insertBefore(node, position);
    const vnode = wanted[at];
    if (typeof vnode !== "string") update(node as unknown as Element, vnode);
    else if (node.nodeValue !== vnode) node.nodeValue = vnode;
  });
}

/** Hands out the present children: keyed ones by key, the others by node name in order. */
function reusable(parent: Element): (vnode: VNode) => ChildNode | undefined {
  const keyed = new Map<string, ChildNode>();
  const unkeyed = new Map<string, ChildNode[]>();
  for (const node of Array.from(parent.childNodes)) {
    const key = bound.get(node)?.props.key;
    if (key !== undefined) keyed.set(`${node.nodeName} ${key}`, node);
    else if (unkeyed.has(node.nodeName)) unkeyed.get(node.nodeName)!.push(node);
    else unkeyed.set(node.nodeName, [node]);
  }
  return (vnode) => {
    if (typeof vnode === "string") return unkeyed.get("#text")?.shift();
    const name = vnode.tag.toUpperCase();
    if (vnode.props.key === undefined) return unkeyed.get(name)?.shift();
    const node = keyed.get(`${name} ${vnode.props.key}`);
    keyed.delete(`${name} ${vnode.props.key}`);
    return node;
  };
}

function create(vnode: VNode, document: Document): ChildNode {
  if (typeof vnode === "string") return document.createTextNode(vnode);
  const element = document.createElement(vnode.tag);
  bound.set(element, { props: {}, types: new Set() });
  return element;
}

function update(element: Element, vnode: VElement): void {
  const state = bound.get(element)!;
  const before = state.props;
  const after = vnode.props;
  state.props = after;
  for (const name of Object.keys(before)) if (!(name in after)) setAttribute(element, name, undefined);
  for (const name of Object.keys(after)) if (after[name] !== before[name]) setAttribute(element, name, after[name]);
  for (const type of Object.keys(after.on ?? {})) {
    if (state.types.has(type)) continue;
    state.types.add(type);
    element.addEventListener(type, (event) => state.props.on?.[type]?.(event));
  }
  patch(element, vnode.children);
}

function setAttribute(element: Element, name: string, value: unknown): void {
  if (name === "key" || name === "on") return;
  if (value === undefined || value === null || value === false) element.removeAttribute(name);
  else element.setAttribute(name, value === true ? "" : String(value));
}

/**
 * Runs `render` and, should the focused element vanish in it, puts the focus on the element of the selector `first`, else
 * on the stand-in of its area: `data-home="x"` stands in for what vanished under `data-home-area="x"`.
 */
export function keepingFocus(root: HTMLElement, render: () => void, first: string | null = null): void {
  const active = root.ownerDocument.activeElement;
  const held = active instanceof HTMLElement && active !== root && root.contains(active);
  const home = held ? (active.closest<HTMLElement>("[data-home-area]")?.dataset.homeArea ?? "view") : "";
  render();
  if (!held || root.contains(active)) return;
  const find = (selector: string): HTMLElement | null => root.querySelector<HTMLElement>(selector);
  ((first && find(first)) || find(`[data-home="${home}"]`) || find("[data-home]"))?.focus();
}
