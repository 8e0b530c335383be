/** Makes functions.json, the description of the custom functions that the host reads. */
import { readdirSync } from "node:fs";
import path from "node:path";
import { generateCustomFunctionsMetadata } from "custom-functions-metadata";
import { ROOT } from "./paths.mjs";

/** The host's strictest documented limits. */
export const LIMITS = { id: 64, shortest: 3, description: 1024, parameterText: 512, bytes: 1_000_000 };
const ID = /^[A-Za-z][A-Za-z0-9._]*$/;

/**
 * The files of src/functions that may declare functions, in the catalogue's order (their names begin with a section's letter).
 * @param {string} [root]
 */
export function functionFiles(root = ROOT) {
  const folder = path.join(root, "src/functions");
  return readdirSync(folder)
    .filter((name) => /^[a-z]-.*\.ts$/.test(name))
    .sort()
    .map((name) => path.join(folder, name));
}

/**
 * The generator cannot write `allowErrorForDataTypeAny`, without which error cells never reach a function, and
 * always writes `allowCustomDataForDataTypeAny`, which is reported to crash Excel 2021 LTSC.
 * @param {string} generated the generator's JSON
 * @returns {Metadata}
 */
export function postProcess(generated) {
  const metadata = JSON.parse(generated);
  delete metadata.allowCustomDataForDataTypeAny;
  for (const one of metadata.functions) if (one.options) delete one.options.allowCustomDataForDataTypeAny;
  const { $schema, functions, enums, ...rest } = metadata;
  return {
    ...($schema ? { $schema } : {}),
    allowErrorForDataTypeAny: true,
    ...rest,
    functions,
    ...(enums?.length ? { enums } : {}),
  };
}

/**
 * @typedef {{ id: string, name: string, description?: string, parameters: { name: string, description?: string,
 *   type?: string, dimensionality?: string, optional?: boolean, repeating?: boolean }[],
 *   result?: { type?: string, dimensionality?: string }, options?: Record<string, unknown> }} FunctionEntry
 * @typedef {{ $schema?: string, allowErrorForDataTypeAny?: boolean, allowCustomDataForDataTypeAny?: boolean,
 *   functions: FunctionEntry[], enums?: unknown[] }} Metadata
 */

/**
 * What is wrong with a metadata file, as sentences; empty when it is in order.
 * @param {Metadata} metadata
 */
export function metadataFaults(metadata) {
  const faults = [];
  if (metadata.allowErrorForDataTypeAny !== true) faults.push("functions.json: allowErrorForDataTypeAny must be true at the top level.");
  if ("allowCustomDataForDataTypeAny" in metadata) faults.push("functions.json: allowCustomDataForDataTypeAny must not be there.");
  const bytes = Buffer.byteLength(JSON.stringify(metadata));
  if (bytes >= LIMITS.bytes) faults.push(`functions.json: ${bytes} bytes; less than ${LIMITS.bytes} are allowed.`);
  const seen = new Set();
  for (const one of metadata.functions) {
    const where = `functions.json, ${one.id}`;
    if (seen.has(one.id)) faults.push(`${where}: the id is given twice.`);
    seen.add(one.id);
    for (const word of [one.id, one.name]) {
      if (!ID.test(word) || word.length < LIMITS.shortest || word.length > LIMITS.id) {
        faults.push(`${where}: "${word}" is no valid id or name (a letter, then letters, digits, dots, underscores; ${LIMITS.shortest} to ${LIMITS.id} in all).`);
      }
    }
    checkText(where, one.description, LIMITS.description, faults);
    let optionalSeen = false;
    for (const parameter of one.parameters) {
      checkText(`${where}, ${parameter.name}`, parameter.description, LIMITS.parameterText, faults);
      if (optionalSeen && !parameter.optional) faults.push(`${where}, ${parameter.name}: a required parameter follows an optional one.`);
      optionalSeen ||= parameter.optional === true;
    }
  }
  return faults;
}

/**
 * @param {string} where
 * @param {string | undefined} text
 * @param {number} limit
 * @param {string[]} faults
 */
function checkText(where, text, limit, faults) {
  if (!text) faults.push(`${where}: no description.`);
  else if (text.length > limit) faults.push(`${where}: the description has ${text.length} characters; at most ${limit} are allowed.`);
  else if (/[\r\n]/.test(text)) faults.push(`${where}: the description has a line break.`);
}

/**
 * The finished metadata of the functions in src/functions.
 * @param {string} [root]
 * @returns {Promise<Metadata>}
 * @throws when the generator or the check finds a fault
 */
export async function functionsMetadata(root = ROOT) {
  const files = functionFiles(root);
  const { metadataJson, errors } = await generateCustomFunctionsMetadata(files);
  if (errors.length > 0) throw new Error(`functions.json cannot be made:\n${errors.join("\n")}`);
  const metadata = postProcess(metadataJson || '{"functions":[]}');
  const faults = metadataFaults(metadata);
  if (faults.length > 0) throw new Error(faults.join("\n"));
  return metadata;
}
