/**
 * What the pane keeps, inside the file: a custom XML part (ECMA-376 part 1, 15.2.4 and 22.5), which programs carry
 * along unread. In Excel the add-in itself keeps the same JSON in its document settings; the part is what lets a
 * workbook go from one to the other without showing up among the sheets.
 */
const NAMESPACE = "urn:stayrate:store:1";
const PART_TYPE = "http://schemas.openxmlformats.org/officeDocument/2006/relationships/customXml";
const PROPERTIES_TYPE = "http://schemas.openxmlformats.org/officeDocument/2006/relationships/customXmlProps";
const PROPERTIES_CONTENT = "application/vnd.openxmlformats-officedocument.customXmlProperties+xml";
const ID = "{7D2F5C0A-61B4-4E0B-9C3E-5A1B8E6F4D21}";
const HEADER = '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n';
const RELATIONSHIPS = "http://schemas.openxmlformats.org/package/2006/relationships";

const escape = (text: string): string =>
  text.replace(/[&<>"\r]/g, (mark) => ({ "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;", "\r": "&#13;" })[mark]!);

const unescape = (text: string): string =>
  text.replace(/&(amp|lt|gt|quot|apos|#(\d+)|#x([\da-f]+));/gi, (_, name: string, decimal?: string, hex?: string) => {
    if (decimal !== undefined) return String.fromCodePoint(Number(decimal));
    if (hex !== undefined) return String.fromCodePoint(parseInt(hex, 16));
    return { amp: "&", lt: "<", gt: ">", quot: '"', apos: "'" }[name.toLowerCase()]!;
  });

const text = (content: Uint8Array | undefined): string => (content ? new TextDecoder().decode(content) : "");
const bytes = (content: string): Uint8Array => new TextEncoder().encode(content);

/** Adds the store to the parts of a workbook file. JSON keeps control characters as escapes, so that XML can hold them. */
export function addStore(parts: Map<string, Uint8Array>, store: Readonly<Record<string, unknown>>): void {
  const entries = Object.entries(store).filter(([, value]) => value !== undefined);
  if (entries.length === 0) return;
  const body = entries.map(([key, value]) => `<entry key="${escape(key)}">${escape(JSON.stringify(value))}</entry>`).join("");
  parts.set("customXml/item1.xml", bytes(`${HEADER}<store xmlns="${NAMESPACE}">${body}</store>`));
  parts.set(
    "customXml/itemProps1.xml",
    bytes(
      `${HEADER}<ds:datastoreItem ds:itemID="${ID}" xmlns:ds="http://schemas.openxmlformats.org/officeDocument/2006/customXml">` +
        `<ds:schemaRefs><ds:schemaRef ds:uri="${NAMESPACE}"/></ds:schemaRefs></ds:datastoreItem>`,
    ),
  );
  parts.set("customXml/_rels/item1.xml.rels", bytes(`${HEADER}<Relationships xmlns="${RELATIONSHIPS}"><Relationship Id="rId1" Type="${PROPERTIES_TYPE}" Target="itemProps1.xml"/></Relationships>`));
  const types = text(parts.get("[Content_Types].xml"));
  parts.set("[Content_Types].xml", bytes(types.replace("</Types>", `<Override PartName="/customXml/itemProps1.xml" ContentType="${PROPERTIES_CONTENT}"/></Types>`)));
  const relations = text(parts.get("xl/_rels/workbook.xml.rels"));
  parts.set("xl/_rels/workbook.xml.rels", bytes(relations.replace("</Relationships>", `<Relationship Id="rIdStore" Type="${PART_TYPE}" Target="../customXml/item1.xml"/></Relationships>`)));
}

/** The store in a workbook file; entries that cannot be read are left out. */
export function readStore(parts: ReadonlyMap<string, Uint8Array>): Record<string, unknown> {
  const store: Record<string, unknown> = {};
  for (const [name, content] of parts) {
    if (!/^customXml\/item\d+\.xml$/i.test(name)) continue;
    const xml = text(content);
    if (!xml.includes(NAMESPACE)) continue;
    for (const match of xml.matchAll(/<(?:\w+:)?entry\s+key="([^"]*)"\s*>([^<]*)<\/(?:\w+:)?entry>/g)) {
      const key = unescape(match[1]!);
      if (key === "__proto__") continue;
      try {
        store[key] = JSON.parse(unescape(match[2]!)) as unknown;
      } catch {
        continue;
      }
    }
  }
  return store;
}
