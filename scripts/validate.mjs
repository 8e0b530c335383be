/** `npm run validate`: reads the built manifest with the official reader, then with our own rules. `--site FOLDER` for a packaged one. */
import { existsSync, readFileSync } from "node:fs";
import path from "node:path";
import { OfficeAddinManifest } from "office-addin-manifest";
import { buildIfStale } from "./build.mjs";
import { manifestFaults } from "./manifest-rules.mjs";
import { metadataFaults } from "./metadata.mjs";
import { DIST } from "./paths.mjs";

const at = process.argv.indexOf("--site");
const site = at > 0 ? path.resolve(process.argv[at + 1] ?? "") : DIST;
if (site === DIST) await buildIfStale();

const manifest = path.join(site, "manifest.xml");
if (!existsSync(manifest)) {
  console.error(`There is no manifest.xml in ${site}.`);
  process.exit(1);
}
const faults = [];
try {
  const read = await OfficeAddinManifest.readManifestFile(manifest);
  console.log(`${read.displayName} ${read.version}, ${read.id}, for ${read.hosts?.join(", ")}: ${read.defaultSettings?.sourceLocation}`);
} catch (error) {
  faults.push(`The official reader refuses it: ${error instanceof Error ? error.message : error}`);
}
faults.push(...manifestFaults(readFileSync(manifest, "utf8"), site));
const metadata = path.join(site, "functions.json");
if (existsSync(metadata)) faults.push(...metadataFaults(JSON.parse(readFileSync(metadata, "utf8"))));
for (const fault of faults) console.error(fault);
console.log(faults.length === 0 ? "The manifest is in order." : `${faults.length} ${faults.length === 1 ? "fault" : "faults"}.`);
process.exitCode = faults.length === 0 ? 0 : 1;
