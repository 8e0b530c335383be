/** The licence texts of the packages whose code is in the built site, as one file beside it. */
import { readFileSync, readdirSync } from "node:fs";
import path from "node:path";
import { ROOT } from "./paths.mjs";

export function licences() {
  const read = (/** @type {string} */ file) => JSON.parse(readFileSync(file, "utf8"));
  const seen = new Map();
  const visit = (/** @type {string} */ name) => {
    if (seen.has(name)) return;
    const folder = path.join(ROOT, "node_modules", name);
    const { version, license: declared, dependencies = {} } = read(path.join(folder, "package.json"));
    const file = readdirSync(folder).find((one) => /^licen[cs]e/i.test(one));
    const license = declared ?? "licence below";
    const text = file ? readFileSync(path.join(folder, file), "utf8").trim() : `Licence: ${license}`;
    seen.set(name, `${name} ${version} (${license})\n\n${text}\n`);
    for (const one of Object.keys(dependencies)) visit(one);
  };
  for (const name of Object.keys(read(path.join(ROOT, "package.json")).dependencies)) visit(name);
  const own = readFileSync(path.join(ROOT, "LICENSE"), "utf8").trim();
  return [`Stayrate\n\n${own}\n`, ...[...seen.keys()].sort().map((name) => seen.get(name))].join(`\n${"-".repeat(78)}\n\n`);
}
