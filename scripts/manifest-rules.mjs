/**
 * Our own check of manifest.xml, for what the official reader does not look at and its validator asks an online service about:
 * order of elements, dangling and unused resource ids, lengths, addresses, icon files and their sizes, agreement with functions.json.
 * The orders and limits are those of the platform's public manifest reference (add-in-only XML, task pane, version overrides 1.0).
 */
import { existsSync, readFileSync } from "node:fs";
import path from "node:path";
import { everyElement, parseXml } from "./xml.mjs";

/** @typedef {import("./xml.mjs").Element} Element */

/** For each element, its children in the order that the schema asks for. "*" behind a name: may repeat; "?": may be absent. */
const ORDER = {
  OfficeApp:
    "Id AlternateId? Version ProviderName DefaultLocale DisplayName Description IconUrl HighResolutionIconUrl? SupportUrl AppDomains? Hosts Requirements? DefaultSettings Permissions VersionOverrides?",
  "OfficeApp/Hosts": "Host*",
  Requirements: "Sets",
  Sets: "Set*",
  DefaultSettings: "SourceLocation RequestedWidth? RequestedHeight?",
  VersionOverrides: "Description? Requirements? Hosts Resources WebApplicationInfo? EquivalentAddins? VersionOverrides?",
  "VersionOverrides/Hosts": "Host*",
  "Hosts/Host": "Runtimes? AllFormFactors? DesktopFormFactor",
  Runtimes: "Runtime*",
  AllFormFactors: "ExtensionPoint*",
  DesktopFormFactor: "GetStarted? FunctionFile ExtensionPoint*",
  GetStarted: "Title Description LearnMoreUrl",
  "AllFormFactors/ExtensionPoint": "Script Page Metadata Namespace",
  "DesktopFormFactor/ExtensionPoint": "OfficeTab*",
  OfficeTab: "Group*",
  Group: "Label Icon Control*",
  Control: "Label Supertip Icon Action",
  Supertip: "Title Description",
  Icon: "bt:Image*",
  Action: "SourceLocation? FunctionName? Title?",
  Resources: "bt:Images bt:Urls bt:ShortStrings bt:LongStrings",
  "bt:Images": "bt:Image*",
  "bt:Urls": "bt:Url*",
  "bt:ShortStrings": "bt:String*",
  "bt:LongStrings": "bt:String*",
};

/** Where a resid must lead: the kind of resource that an element of this name takes. */
const KIND = {
  "bt:Image": "bt:Images",
  SourceLocation: "bt:Urls",
  Runtime: "bt:Urls",
  FunctionFile: "bt:Urls",
  LearnMoreUrl: "bt:Urls",
  Namespace: "bt:ShortStrings",
  Label: "bt:ShortStrings",
  Title: "bt:ShortStrings",
  Description: "bt:LongStrings",
};

const LIMITS = { resid: 32, "bt:ShortStrings": 125, "bt:LongStrings": 250, DisplayName: 125, ProviderName: 125, Description: 250, namespace: 32 };
const GUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[1-5][0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/i;
const ICON_SIZES = [16, 20, 24, 32, 40, 48, 64, 80];
const REQUIRED_SETS = { SharedRuntime: "1.1", CustomFunctionsRuntime: "1.3", ExcelApi: "1.12" };

/**
 * What is wrong with a manifest, as sentences; empty when it is in order.
 * @param {string} source the manifest's text
 * @param {string} site the folder of the built site that its addresses lead to
 * @returns {string[]}
 */
export function manifestFaults(source, site) {
  /** @type {Element} */
  let root;
  try {
    root = parseXml(source);
  } catch (error) {
    return [`The manifest is not well-formed XML. ${/** @type {Error} */ (error).message}`];
  }
  if (root.name !== "OfficeApp" || root.attributes["xsi:type"] !== "TaskPaneApp") return ['The manifest\'s root must be OfficeApp with xsi:type="TaskPaneApp".'];
  return [
    ...orderFaults(root),
    ...headFaults(root),
    ...resourceFaults(root),
    ...runtimeFaults(root),
    ...iconFaults(root, site),
    ...addressFaults(root, site),
    ...functionFaults(root, site),
  ];
}

/** @param {Element} element @param {string} name @returns {Element | undefined} */
const child = (element, name) => element.children.find((one) => one.name === name);
/** @param {Element} root @param {string} name */
const all = (root, name) => [...everyElement(root)].filter((one) => one.name === name);
/** @param {Element} root @returns {Map<string, { value: string, group: string, line: number }>} */
function resources(root) {
  const found = new Map();
  for (const group of all(root, "Resources").flatMap((one) => one.children)) {
    for (const one of group.children) found.set(one.attributes.id, { value: one.attributes.DefaultValue ?? "", group: group.name, line: one.line });
  }
  return found;
}

/** @param {Element} root */
function orderFaults(root) {
  /** @type {string[]} */
  const faults = [];
  const visit = (/** @type {Element} */ element, /** @type {string} */ parent) => {
    const rule = ORDER[/** @type {keyof typeof ORDER} */ (`${parent}/${element.name}`)] ?? ORDER[/** @type {keyof typeof ORDER} */ (element.name)];
    if (rule && !(element.name === "Host" && parent !== "Hosts")) {
      const slots = rule.split(" ").map((word) => ({ name: word.replace(/[*?]$/, ""), many: word.endsWith("*"), optional: word.endsWith("?") }));
      let at = 0;
      for (const one of element.children) {
        const slot = slots.findIndex((each) => each.name === one.name);
        if (slot < 0) faults.push(`Line ${one.line}: ${one.name} does not belong in ${element.name}.`);
        else if (slot < at) faults.push(`Line ${one.line}: ${one.name} must come before ${slots[at].name} in ${element.name}.`);
        else {
          const before = element.children.filter((each) => each.name === one.name).indexOf(one);
          if (before > 0 && !slots[slot].many) faults.push(`Line ${one.line}: ${one.name} stands twice in ${element.name}.`);
          at = slot;
        }
      }
      // The host entry of the base manifest names its host in an attribute and has no children.
      const isBaseHost = element.name === "Host" && element.attributes.Name !== undefined;
      for (const slot of slots) {
        if (!slot.optional && !isBaseHost && !child(element, slot.name)) faults.push(`Line ${element.line}: ${element.name} lacks ${slot.name}.`);
      }
    }
    for (const one of element.children) visit(one, element.name);
  };
  visit(root, "");
  return faults;
}

/** @param {Element} root */
function headFaults(root) {
  const faults = [];
  const id = child(root, "Id")?.text ?? "";
  if (!GUID.test(id)) faults.push(`Id: "${id}" is no GUID.`);
  const version = child(root, "Version")?.text ?? "";
  if (!/^\d{1,5}(\.\d{1,5}){1,3}$/.test(version)) faults.push(`Version: "${version}" must be two to four numbers with dots between.`);
  for (const name of /** @type {const} */ (["DisplayName", "Description"])) {
    const text = child(root, name)?.attributes.DefaultValue ?? "";
    if (text.length === 0 || text.length > LIMITS[name]) faults.push(`${name}: ${text.length} characters; 1 to ${LIMITS[name]} are allowed.`);
  }
  const provider = child(root, "ProviderName")?.text ?? "";
  if (provider.length === 0 || provider.length > LIMITS.ProviderName) faults.push(`ProviderName: ${provider.length} characters; 1 to ${LIMITS.ProviderName} are allowed.`);
  const permissions = child(root, "Permissions")?.text;
  if (permissions !== "ReadWriteDocument") faults.push(`Permissions: "${permissions}" is not enough; the pane writes formulas, so ReadWriteDocument is needed.`);
  const hosts = all(root, "Host").map((one) => one.attributes.Name ?? one.attributes["xsi:type"]);
  if (hosts.some((one) => one !== "Workbook")) faults.push(`Host: "${hosts.join(", ")}"; only Workbook is served.`);
  const sets = new Map(all(root, "Set").map((one) => [one.attributes.Name, one.attributes.MinVersion]));
  for (const [name, version] of Object.entries(REQUIRED_SETS)) {
    if (sets.get(name) !== version) faults.push(`Requirements: ${name} ${version} is needed; found ${sets.get(name) ?? "nothing"}.`);
  }
  return faults;
}

/** @param {Element} root */
function resourceFaults(root) {
  const faults = [];
  const known = resources(root);
  const ids = all(root, "Resources").flatMap((one) => one.children.flatMap((group) => group.children.map((each) => each.attributes.id)));
  for (const id of new Set(ids)) if (ids.filter((one) => one === id).length > 1) faults.push(`Resources: the id ${id} is given twice.`);
  const used = new Set();
  for (const element of everyElement(root)) {
    const id = element.attributes.resid;
    if (id === undefined) continue;
    used.add(id);
    const resource = known.get(id);
    const kind = KIND[/** @type {keyof typeof KIND} */ (element.name)];
    if (!resource) faults.push(`Line ${element.line}: ${element.name} points at ${id}, which is not among the resources.`);
    else if (kind && resource.group !== kind) faults.push(`Line ${element.line}: ${element.name} points at ${id}, which is in ${resource.group}; ${kind} is needed.`);
  }
  for (const [id, { value, group, line }] of known) {
    if (!used.has(id)) faults.push(`Line ${line}: nothing uses the resource ${id}.`);
    if (id.length > LIMITS.resid) faults.push(`Line ${line}: the id ${id} has ${id.length} characters; at most ${LIMITS.resid} are allowed.`);
    const limit = group === "bt:ShortStrings" || group === "bt:LongStrings" ? LIMITS[group] : 2000;
    if (value.length === 0 || value.length > limit) faults.push(`Line ${line}: ${id} has ${value.length} characters; 1 to ${limit} are allowed.`);
  }
  return faults;
}

/** One runtime for formulas and pane: the same resource everywhere, and no id that would open a second pane. @param {Element} root */
function runtimeFaults(root) {
  const faults = [];
  const runtime = all(root, "Runtime")[0];
  const resid = runtime?.attributes.resid;
  if (runtime?.attributes.lifetime !== "long") faults.push('Runtime: lifetime="long" is needed for a shared runtime.');
  const places = [
    ["Page", all(root, "Page")[0] && child(all(root, "Page")[0], "SourceLocation")],
    ["FunctionFile", all(root, "FunctionFile")[0]],
    ...all(root, "Action")
      .filter((one) => one.attributes["xsi:type"] === "ShowTaskpane")
      .map((one) => ["Action", child(one, "SourceLocation")]),
  ];
  for (const [name, element] of /** @type {[string, Element | undefined][]} */ (places)) {
    if (element?.attributes.resid !== resid) faults.push(`${name}: must point at the runtime's page ${resid}; found ${element?.attributes.resid ?? "nothing"}.`);
  }
  const base = child(child(root, "DefaultSettings") ?? root, "SourceLocation")?.attributes.DefaultValue;
  const page = resid === undefined ? undefined : resources(root).get(resid)?.value;
  if (base !== page) faults.push(`DefaultSettings: SourceLocation ${base} is not the runtime's page ${page}.`);
  if (all(root, "TaskpaneId").length > 0) faults.push("TaskpaneId: must be absent, or the pane gets a runtime of its own.");
  return faults;
}

/** @param {Element} root @param {string} site */
function iconFaults(root, site) {
  const faults = [];
  const known = resources(root);
  for (const icon of all(root, "Icon")) {
    const sizes = icon.children.map((one) => Number(one.attributes.size));
    for (const size of ICON_SIZES) if (!sizes.includes(size)) faults.push(`Line ${icon.line}: Icon lacks the size ${size}.`);
    for (const image of icon.children) {
      const address = known.get(image.attributes.resid)?.value;
      if (address) faults.push(...pixelFaults(address, Number(image.attributes.size), site, `Line ${image.line}`));
    }
  }
  for (const [name, size] of /** @type {const} */ ([["IconUrl", 32], ["HighResolutionIconUrl", 64]])) {
    const address = child(root, name)?.attributes.DefaultValue;
    if (address) faults.push(...pixelFaults(address, size, site, name));
  }
  return [...new Set(faults)];
}

/** @param {string} address @param {number} size @param {string} site @param {string} where */
function pixelFaults(address, size, site, where) {
  const file = fileOf(address, site, 1);
  if (!file || !existsSync(file)) return [`${where}: no icon file for ${address}.`];
  const bytes = readFileSync(file);
  const isPng = bytes.length > 24 && bytes.readUInt32BE(0) === 0x89504e47 && bytes.toString("latin1", 12, 16) === "IHDR";
  if (!isPng) return [`${where}: ${path.basename(file)} is no PNG.`];
  const [width, height] = [bytes.readUInt32BE(16), bytes.readUInt32BE(20)];
  return width === size && height === size ? [] : [`${where}: ${path.basename(file)} is ${width} × ${height} pixels; ${size} × ${size} are needed.`];
}

/** The file of the site that an address leads to: its last parts, `folders` of them before the name. @param {string} address @param {string} site @param {number} folders */
function fileOf(address, site, folders) {
  if (!URL.canParse(address)) return null;
  const parts = new URL(address).pathname.split("/").filter(Boolean);
  return path.join(site, ...parts.slice(-1 - folders));
}

/** @param {Element} root */
function addresses(root) {
  const found = [];
  for (const element of everyElement(root)) {
    const value = element.attributes.DefaultValue;
    if (value !== undefined && (element.name === "bt:Url" || element.name === "bt:Image" || /(Url|SourceLocation)$/.test(element.name))) {
      found.push({ value, name: element.attributes.id ?? element.name, line: element.line, icon: value.endsWith(".png") });
    }
  }
  return found;
}

/** @param {Element} root @param {string} site */
function addressFaults(root, site) {
  const faults = [];
  const bases = new Set();
  for (const { value, name, line, icon } of addresses(root)) {
    if (!URL.canParse(value) || new URL(value).protocol !== "https:") {
      faults.push(`Line ${line}: ${name} "${value}" is no https address.`);
      continue;
    }
    bases.add(new URL(icon ? "../" : "./", value).href);
    const file = fileOf(value, site, icon ? 1 : 0);
    if (!icon && file && !existsSync(file)) faults.push(`Line ${line}: ${name} leads to ${path.basename(file)}, which the built site does not have.`);
  }
  if (bases.size > 1) faults.push(`Addresses lead to different places: ${[...bases].join(", ")}.`);
  return faults;
}

/** @param {Element} root @param {string} site */
function functionFaults(root, site) {
  const faults = [];
  const known = resources(root);
  const point = all(root, "ExtensionPoint").find((one) => one.attributes["xsi:type"] === "CustomFunctions");
  if (!point) return ["CustomFunctions: the extension point is missing."];
  const valueOf = (/** @type {string} */ name) => {
    const element = child(point, name);
    const resid = element?.attributes.resid ?? (element && child(element, "SourceLocation")?.attributes.resid);
    return (resid && known.get(resid)?.value) || "";
  };
  const namespace = valueOf("Namespace");
  if (!/^[A-Za-z][A-Za-z0-9_.]*$/.test(namespace) || namespace.length > LIMITS.namespace) {
    faults.push(`Namespace: "${namespace}" must be letters, digits, dots and underscores, at most ${LIMITS.namespace}.`);
  }
  const [script, metadata] = [fileOf(valueOf("Script"), site, 0), fileOf(valueOf("Metadata"), site, 0)];
  if (!script || !metadata || !existsSync(script) || !existsSync(metadata)) return faults;
  /** @type {{ functions?: { id: string }[] }} */
  let description;
  try {
    description = JSON.parse(readFileSync(metadata, "utf8"));
  } catch {
    return [...faults, "functions.json: is no JSON."];
  }
  const ids = (description.functions ?? []).map((one) => one.id);
  if (ids.length === 0) faults.push("functions.json: describes no function.");
  const code = readFileSync(script, "utf8");
  for (const id of ids) if (!code.includes(`"${id}"`) && !new RegExp(`[{,]${id}:`).test(code)) faults.push(`functions.js: does not name ${id}, which functions.json describes.`);
  return faults;
}
