/** Text results of formulas, which the file library points into the shared texts, where programs expect only typed text. */

/** Writes the text of a formula's result beside the formula (ECMA-376 part 1, 18.18.11: type "str"). */
export function finishStrings(parts: Map<string, Uint8Array>): void {
  const shared = parts.get("xl/sharedStrings.xml");
  if (!shared) return;
  const texts = [...new TextDecoder().decode(shared).matchAll(/<si>(?:<t[^>]*>([^<]*)<\/t>|<t\/>)<\/si>/g)].map((match) => match[1] ?? "");
  for (const [name, content] of parts) {
    if (!name.startsWith("xl/worksheets/")) continue;
    const xml = new TextDecoder().decode(content);
    const finished = xml.replace(/(<c [^>]*)t="s"([^>]*>)(<f[^>]*>[^<]*<\/f>)<v>(\d+)<\/v>/g, (_, before: string, after: string, formula: string, index: string) =>
      `${before}t="str"${after}${formula}<v>${texts[Number(index)] ?? ""}</v>`,
    );
    if (finished !== xml) parts.set(name, new TextEncoder().encode(finished));
  }
}
