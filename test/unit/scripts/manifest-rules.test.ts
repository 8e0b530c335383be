import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { OfficeAddinManifest } from "office-addin-manifest";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { manifestFaults } from "../../../scripts/manifest-rules.mjs";
import { ROOT } from "../../../scripts/paths.mjs";

const source = readFileSync(path.join(ROOT, "manifest.xml"), "utf8");
let site: string;

beforeAll(() => {
  site = mkdtempSync(path.join(tmpdir(), "stayrate-site-"));
  mkdirSync(path.join(site, "icons"));
  cpSync(path.join(ROOT, "assets/icons"), path.join(site, "icons"), { recursive: true });
  for (const page of ["pane.html", "support.html"]) writeFileSync(path.join(site, page), "");
  writeFileSync(path.join(site, "functions.json"), JSON.stringify({ functions: [{ id: "TRANSITION" }] }));
  writeFileSync(path.join(site, "functions.js"), 'CustomFunctions.associate("TRANSITION",f)');
});
afterAll(() => rmSync(site, { recursive: true, force: true }));

/** The manifest with one thing changed; the change must find its place. */
function broken(from: string | RegExp, to: string): string {
  const text = source.replace(from, to);
  expect(text).not.toBe(source);
  return text;
}
const swap = (first: string, second: string): string => broken(`${first}\n${second}`, `${second}\n${first}`);

describe("the manifest", () => {
  it("is in order", () => {
    expect(manifestFaults(source, site)).toEqual([]);
  });

  it("is read by the official reader", async () => {
    const read = await OfficeAddinManifest.readManifestFile(path.join(ROOT, "manifest.xml"));
    expect(read).toMatchObject({ displayName: "Stayrate", hosts: ["Workbook"], permissions: "ReadWriteDocument", officeAppType: "TaskPaneApp" });
  });

  it.each<[string, () => string, RegExp]>([
    ["broken XML", () => broken("</Supertip>", ""), /not well-formed XML. Line \d+: Unexpected close tag/],
    ["another root", () => broken('xsi:type="TaskPaneApp"', 'xsi:type="MailApp"'), /root must be OfficeApp/],
    ["wrong order at the top", () => swap('  <DisplayName DefaultValue="Stayrate" />', /.*<Description .*/.exec(source)![0]), /DisplayName must come before Description in OfficeApp/],
    ["wrong order inside", () => swap('            <Page>\n              <SourceLocation resid="Pane.Url" />\n            </Page>', '            <Metadata>\n              <SourceLocation resid="Metadata.Url" />\n            </Metadata>'), /Page must come before Metadata/],
    ["a stranger", () => broken("<Permissions>", "<Colour>red</Colour>\n  <Permissions>"), /Colour does not belong in OfficeApp/],
    ["something twice", () => broken("<Version>1.0.0.0</Version>", "<Version>1.0.0.0</Version><Version>1.0.0.0</Version>"), /Version stands twice/],
    ["something missing", () => broken('<FunctionFile resid="Pane.Url" />', ""), /DesktopFormFactor lacks FunctionFile/],
    ["no GUID", () => broken(/<Id>.*<\/Id>/, "<Id>stayrate</Id>"), /"stayrate" is no GUID/],
    ["no version", () => broken("1.0.0.0", "one"), /"one" must be two to four numbers/],
    ["no name", () => broken('<DisplayName DefaultValue="Stayrate" />', '<DisplayName DefaultValue="" />'), /DisplayName: 0 characters/],
    ["a long description", () => broken(/<Description DefaultValue="[^"]*"/, `<Description DefaultValue="${"x".repeat(251)}"`), /Description: 251 characters/],
    ["a long provider", () => broken("Stayrate contributors", "x".repeat(126)), /ProviderName: 126 characters/],
    ["too little permission", () => broken("ReadWriteDocument", "ReadDocument"), /"ReadDocument" is not enough/],
    ["another host", () => broken('<Host Name="Workbook" />', '<Host Name="Document" />'), /only Workbook is served/],
    ["a requirement set too old", () => broken('Name="ExcelApi" MinVersion="1.12"', 'Name="ExcelApi" MinVersion="1.1"'), /ExcelApi 1.12 is needed; found 1.1/],
    ["a dangling resid", () => broken('<Label resid="Open.Label" />', '<Label resid="Shut.Label" />'), /Label points at Shut.Label, which is not among the resources/],
    ["a resid of the wrong kind", () => broken('<Label resid="Open.Label" />', '<Label resid="Open.Description" />'), /Open.Description, which is in bt:LongStrings; bt:ShortStrings is needed/],
    ["a resource that nothing uses", () => broken("<bt:LongStrings>", '<bt:LongStrings><bt:String id="Spare" DefaultValue="x" />'), /nothing uses the resource Spare/],
    ["an id given twice", () => broken('<bt:String id="Start.Title"', '<bt:String id="Open.Title"'), /the id Open.Title is given twice/],
    ["a long id", () => source.replaceAll("Open.Label", "Open.".padEnd(33, "x")), /has 33 characters; at most 32/],
    ["a long short string", () => broken('id="Open.Title" DefaultValue="Check a rate table"', `id="Open.Title" DefaultValue="${"x".repeat(126)}"`), /Open.Title has 126 characters; 1 to 125/],
    ["a long long string", () => broken(/id="Open.Description" DefaultValue="[^"]*"/, `id="Open.Description" DefaultValue="${"x".repeat(251)}"`), /Open.Description has 251 characters; 1 to 250/],
    ["a runtime that ends with the pane", () => broken('lifetime="long"', 'lifetime="short"'), /lifetime="long" is needed/],
    ["another functions page", () => broken('<FunctionFile resid="Pane.Url" />', '<FunctionFile resid="Support.Url" />'), /FunctionFile: must point at the runtime's page Pane.Url; found Support.Url/],
    ["another start page", () => broken(/(<DefaultSettings>\s*<SourceLocation DefaultValue="[^"]*)pane/, "$1support"), /is not the runtime's page/],
    ["a pane of its own", () => broken('<Action xsi:type="ShowTaskpane">', '<Action xsi:type="ShowTaskpane"><TaskpaneId>p</TaskpaneId>'), /TaskpaneId: must be absent/],
    ["an icon size missing", () => broken('<bt:Image size="40" resid="Icon.40" />', ""), /Icon lacks the size 40/],
    ["an icon of another size", () => broken("icons/stayrate-40.png", "icons/stayrate-48.png"), /stayrate-48.png is 48 × 48 pixels; 40 × 40 are needed/],
    ["no icon file", () => broken("icons/stayrate-40.png", "icons/stayrate-41.png"), /no icon file/],
    ["no PNG", () => broken("icons/stayrate-40.png", "icons/mark.svg"), /mark.svg is no PNG/],
    ["an unsafe address", () => broken("https://localhost:5880/support.html", "http://localhost:5880/support.html"), /is no https address/],
    ["a page that is not there", () => broken('id="Support.Url" DefaultValue="https://localhost:5880/support.html"', 'id="Support.Url" DefaultValue="https://localhost:5880/help.html"'), /leads to help.html, which the built site does not have/],
    ["two places", () => broken("https://localhost:5880/functions.js\"", "https://example.org/functions.js\""), /Addresses lead to different places/],
    ["a namespace with a blank", () => broken('DefaultValue="CTMC"', 'DefaultValue="C TMC"'), /Namespace: "C TMC" must be/],
    ["no functions", () => broken('xsi:type="CustomFunctions"', 'xsi:type="Other"'), /extension point is missing/],
  ])("is refused with %s", (_, change, fault) => {
    expect(manifestFaults(change(), site).join("\n")).toMatch(fault);
  });

  it("is refused when functions.js lacks a function of functions.json", () => {
    writeFileSync(path.join(site, "functions.json"), JSON.stringify({ functions: [{ id: "TRANSITION" }, { id: "MISSING" }] }));
    expect(manifestFaults(source, site)).toEqual(["functions.js: does not name MISSING, which functions.json describes."]);
    writeFileSync(path.join(site, "functions.json"), "{}");
    expect(manifestFaults(source, site)).toEqual(["functions.json: describes no function."]);
    writeFileSync(path.join(site, "functions.json"), "{");
    expect(manifestFaults(source, site)).toEqual(["functions.json: is no JSON."]);
  });
});
