/** Bold in a file's styles part, which the file library neither writes nor reads (ECMA-376 part 1, 18.8). */

/** Ends the format codes of bold cells on their way through the library; no file ever holds it. */
export const BOLD_MARK = "[$-stayrate-bold]";

const text = (content: Uint8Array | undefined): string => (content ? new TextDecoder().decode(content) : "");

/** Turns the marked formats into plain formats with a bold font. */
export function finishStyles(parts: Map<string, Uint8Array>): void {
  const name = "xl/styles.xml";
  let xml = text(parts.get(name));
  if (!xml.includes(BOLD_MARK)) return;
  const bold = new Map<string, string>();
  xml = xml.replace(/<numFmt numFmtId="(\d+)" formatCode="([^"]*)"\/>/g, (whole, id: string, code: string) => {
    if (!code.endsWith(BOLD_MARK)) return whole;
    const plain = code.slice(0, -BOLD_MARK.length);
    bold.set(id, plain === "General" ? "0" : id);
    return plain === "General" ? "" : `<numFmt numFmtId="${id}" formatCode="${plain}"/>`;
  });
  xml = xml.replace(/<numFmts count="\d+">([^]*?)<\/numFmts>/, (_, inside: string) => {
    const count = inside.match(/<numFmt /g)?.length ?? 0;
    return count === 0 ? "" : `<numFmts count="${count}">${inside}</numFmts>`;
  });
  xml = xml.replace(/<fonts count="1">(<font>)([^]*?)<\/font><\/fonts>/, (_, open: string, font: string) => `<fonts count="2">${open}${font}</font>${open}<b/>${font}</font></fonts>`);
  xml = xml.replace(/<cellXfs[^]*?<\/cellXfs>/, (all) =>
    all.replace(/<xf numFmtId="(\d+)" fontId="0"/g, (whole, id: string) => (bold.has(id) ? `<xf numFmtId="${bold.get(id)}" fontId="1" applyFont="1"` : whole)),
  );
  parts.set(name, new TextEncoder().encode(xml));
}

/** The numbers of the cell styles whose font is bold. */
export function boldStyles(parts: ReadonlyMap<string, Uint8Array>): ReadonlySet<number> {
  const xml = text(parts.get("xl/styles.xml"));
  const section = (tag: string) => new RegExp(`<(?:\\w+:)?${tag}[ >]([^]*?)</(?:\\w+:)?${tag}>`).exec(xml)?.[1] ?? "";
  const fonts = [...section("fonts").matchAll(/<(?:\w+:)?font(?:\s*\/>|>([^]*?)<\/(?:\w+:)?font>)/g)];
  const bold = new Set<number>();
  fonts.forEach((font, index) => {
    const mark = /<(?:\w+:)?b(?:\s+val="([^"]*)")?\s*\/>/.exec(font[1] ?? "");
    if (mark && mark[1] !== "0" && mark[1] !== "false") bold.add(index);
  });
  const styles = new Set<number>();
  [...section("cellXfs").matchAll(/<(?:\w+:)?xf\s([^>]*)>/g)].forEach((style, index) => {
    const font = /fontId="(\d+)"/.exec(style[1]!);
    if (font && bold.has(Number(font[1]))) styles.add(index);
  });
  return styles;
}

/** Cells of a sheet part with one of the styles, as [row, column text] pairs would be; addresses such as "B3". */
export function cellsWithStyles(sheetXml: string, styles: ReadonlySet<number>): string[] {
  const found: string[] = [];
  if (styles.size === 0) return found;
  for (const match of sheetXml.matchAll(/<(?:\w+:)?c\s([^>]*)>/g)) {
    const style = /(?:^|\s)s="(\d+)"/.exec(match[1]!);
    const place = /(?:^|\s)r="([A-Z]+\d+)"/.exec(match[1]!);
    if (style && place && styles.has(Number(style[1]))) found.push(place[1]!);
  }
  return found;
}
