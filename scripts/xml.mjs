/** A document as a tree that keeps the order of its elements. Comments and blank text are left out. */
import sax from "sax";

/** @typedef {{ name: string, attributes: Record<string, string>, children: Element[], text: string, line: number }} Element */

/**
 * @param {string} source
 * @returns {Element} the root element
 * @throws where the document is not well formed, with the line
 */
export function parseXml(source) {
  const parser = sax.parser(true);
  /** @type {Element[]} */
  const open = [];
  /** @type {Element | null} */
  let root = null;
  parser.onerror = (error) => {
    throw new Error(`Line ${parser.line + 1}: ${error.message.split("\n")[0]}`);
  };
  parser.onopentag = ({ name, attributes }) => {
    const element = { name, attributes, children: [], text: "", line: parser.line + 1 };
    if (open.length > 0) open[open.length - 1].children.push(element);
    else root = element;
    open.push(element);
  };
  parser.ontext = (text) => {
    if (open.length > 0) open[open.length - 1].text += text.trim();
  };
  parser.onclosetag = () => {
    open.pop();
  };
  parser.write(source).close();
  if (!root) throw new Error("The document is empty.");
  return root;
}

/** Every element below and including this one. @param {Element} element @returns {Generator<Element>} */
export function* everyElement(element) {
  yield element;
  for (const child of element.children) yield* everyElement(child);
}
