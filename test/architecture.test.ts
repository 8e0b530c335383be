import { readdirSync, readFileSync } from "node:fs";
import path from "node:path";
import ts from "typescript";
import { describe, expect, it } from "vitest";

/** Which layer may import which, as the contributor's guide draws it. A layer may always import itself. */
const ARROWS: Record<string, readonly string[]> = {
  numerics: [],
  chain: ["numerics"],
  table: ["chain"],
  audit: ["table", "chain"],
  cells: ["table", "chain", "audit (types)"],
  functions: ["cells", "audit", "table", "chain"],
  pane: ["cells", "audit", "table", "chain"],
  "host/excel": ["numerics", "chain", "table", "audit", "cells", "functions", "pane"],
  "host/practice": ["numerics", "chain", "table", "audit", "cells", "functions", "pane"],
};

/** Packages that a layer's own code may stand on. */
const PACKAGES: Record<string, readonly string[]> = {
  numerics: ["ml-matrix"],
  "host/practice": ["@borgar/fx", "@formulajs/formulajs", "@e965/xlsx", "ml-matrix"],
};

/** Names that belong to one place. */
const HOST_NAMES: Record<string, readonly string[]> = {
  Office: ["src/host/excel/"],
  Excel: ["src/host/excel/"],
  // The practice workbook stands in for the host, so it supplies what the boundary asks for.
  CustomFunctions: ["src/functions/boundary.ts", "src/host/practice/"],
};

/** Names of the document object model and of the browser's storage. Layers below pane and host do without. */
const DOM_NAMES =
  /^(document|window|self|navigator|location|history|localStorage|sessionStorage|indexedDB|requestAnimationFrame|getComputedStyle|customElements|matchMedia|DOMParser|XMLSerializer|MutationObserver|ResizeObserver|IntersectionObserver|Element|Node|NodeList|Document|ShadowRoot|CSSStyleSheet|Image|fetch|XMLHttpRequest|(HTML|SVG)\w*Element|\w*(Mouse|Keyboard|Pointer|Clipboard|Drag)Event)$/;

/** A worker is started from the address of the script that starts it, which only the page's script element tells. */
const DOM_EXCEPTIONS: Record<string, readonly string[]> = { document: ["src/functions/aside.ts"] };

interface Import {
  readonly specifier: string;
  readonly typeOnly: boolean;
}

const ROOT = path.resolve(import.meta.dirname, "..");

function sources(folder: string): string[] {
  return readdirSync(path.join(ROOT, folder), { recursive: true, encoding: "utf8" })
    .filter((file) => /\.ts$/.test(file))
    .map((file) => path.posix.join(folder, file.split(path.sep).join("/")))
    .sort();
}

const parse = (file: string, text: string) => ts.createSourceFile(file, text, ts.ScriptTarget.ES2022, true);

function layerOf(file: string): string {
  const [, first, second] = file.split("/");
  return first === "host" ? `host/${second}` : first;
}

function importsOf(source: ts.SourceFile): Import[] {
  const found: Import[] = [];
  const visit = (node: ts.Node): void => {
    if (ts.isImportDeclaration(node) && ts.isStringLiteral(node.moduleSpecifier)) {
      const clause = node.importClause;
      const named = clause?.namedBindings && ts.isNamedImports(clause.namedBindings) ? clause.namedBindings.elements : [];
      const typeOnly = clause !== undefined && (clause.isTypeOnly || (!clause.name && named.length > 0 && named.every((one) => one.isTypeOnly)));
      found.push({ specifier: node.moduleSpecifier.text, typeOnly });
    } else if (ts.isExportDeclaration(node) && node.moduleSpecifier && ts.isStringLiteral(node.moduleSpecifier)) {
      found.push({ specifier: node.moduleSpecifier.text, typeOnly: node.isTypeOnly });
    } else if (ts.isCallExpression(node) && node.expression.kind === ts.SyntaxKind.ImportKeyword && ts.isStringLiteralLike(node.arguments[0])) {
      found.push({ specifier: node.arguments[0].text, typeOnly: false });
    } else if (ts.isImportTypeNode(node) && ts.isLiteralTypeNode(node.argument) && ts.isStringLiteral(node.argument.literal)) {
      found.push({ specifier: node.argument.literal.text, typeOnly: true });
    }
    ts.forEachChild(node, visit);
  };
  visit(source);
  return found;
}

/** The names a file uses that it neither declares nor writes as a property. */
function freeNames(source: ts.SourceFile): Map<string, number> {
  const used = new Map<string, number>();
  const declared = new Set<string>();
  const visit = (node: ts.Node): void => {
    if (ts.isIdentifier(node)) {
      const parent = node.parent;
      const named = parent as ts.NamedDeclaration;
      const isProperty =
        (ts.isPropertyAccessExpression(parent) && parent.name === node) ||
        (ts.isQualifiedName(parent) && parent.right === node) ||
        ((ts.isPropertyAssignment(parent) || ts.isPropertySignature(parent) || ts.isPropertyDeclaration(parent) || ts.isMethodDeclaration(parent) || ts.isMethodSignature(parent)) &&
          parent.name === node) ||
        (ts.isBindingElement(parent) && parent.propertyName === node);
      const isDeclaration =
        named.name === node &&
        !isProperty &&
        (ts.isVariableDeclaration(parent) ||
          ts.isParameter(parent) ||
          ts.isFunctionDeclaration(parent) ||
          ts.isFunctionExpression(parent) ||
          ts.isBindingElement(parent) ||
          ts.isImportSpecifier(parent) ||
          ts.isImportClause(parent) ||
          ts.isNamespaceImport(parent) ||
          ts.isTypeAliasDeclaration(parent) ||
          ts.isInterfaceDeclaration(parent) ||
          ts.isClassDeclaration(parent) ||
          ts.isTypeParameterDeclaration(parent));
      if (isDeclaration) declared.add(node.text);
      else if (!isProperty && !used.has(node.text)) used.set(node.text, source.getLineAndCharacterOfPosition(node.getStart()).line + 1);
    }
    ts.forEachChild(node, visit);
  };
  visit(source);
  for (const name of declared) used.delete(name);
  return used;
}

/** What breaks the layering in one file, as sentences. */
function faultsOf(file: string, text: string): string[] {
  const source = parse(file, text);
  const layer = layerOf(file);
  const faults: string[] = [];
  const allowed = ARROWS[layer];
  if (!allowed) return [`${file}: no layer of this name.`];
  if (file.split("/").some((part) => /^utils?(\.ts)?$/.test(part))) faults.push(`${file}: "utils" names no idea.`);
  for (const { specifier, typeOnly } of importsOf(source)) {
    if (specifier.startsWith(".")) {
      const target = path.posix.join(path.posix.dirname(file), specifier);
      if (!target.startsWith("src/")) {
        faults.push(`${file}: imports ${specifier}, outside src.`);
        continue;
      }
      const other = layerOf(target);
      if (other !== layer && !allowed.includes(other) && !(typeOnly && allowed.includes(`${other} (types)`))) {
        faults.push(`${file}: ${layer} may not import ${other} (${specifier}).`);
      }
    } else {
      const name = specifier.split("/").slice(0, specifier.startsWith("@") ? 2 : 1).join("/");
      if (!(PACKAGES[layer] ?? []).includes(name)) faults.push(`${file}: ${layer} may not stand on the package ${name}.`);
    }
  }
  for (const [name, line] of freeNames(source)) {
    const places = HOST_NAMES[name];
    if (places && !places.some((place) => file.startsWith(place))) faults.push(`${file}:${line}: names ${name}; only ${places.join(", ")} may.`);
    if (layer !== "pane" && !layer.startsWith("host/") && DOM_NAMES.test(name) && !DOM_EXCEPTIONS[name]?.includes(file)) faults.push(`${file}:${line}: names ${name}; only pane and host know the page.`);
  }
  return faults;
}

/** Files that import themselves through others, as chains. Type imports leave no trace at run time and do not count. */
function cycles(imports: ReadonlyMap<string, readonly string[]>): string[] {
  const done = new Set<string>();
  const found: string[] = [];
  const visit = (file: string, trail: readonly string[]): void => {
    const at = trail.indexOf(file);
    if (at >= 0) {
      found.push([...trail.slice(at), file].join(" → "));
      return;
    }
    if (done.has(file)) return;
    for (const next of imports.get(file) ?? []) visit(next, [...trail, file]);
    done.add(file);
  };
  for (const file of imports.keys()) visit(file, []);
  return found;
}

describe("the layers of src", () => {
  const files = sources("src").filter((file) => !file.endsWith(".d.ts"));

  it("import only along the arrows of the guide, and name the host and the page only in their places", () => {
    expect(files.length).toBeGreaterThan(4);
    expect(files.flatMap((file) => faultsOf(file, readFileSync(path.join(ROOT, file), "utf8")))).toEqual([]);
  });

  it("import in no circle", () => {
    const known = new Set(files);
    const graph = new Map<string, string[]>();
    for (const file of files) {
      const targets = importsOf(parse(file, readFileSync(path.join(ROOT, file), "utf8")))
        .filter((one) => !one.typeOnly && one.specifier.startsWith("."))
        .map((one) => path.posix.join(path.posix.dirname(file), one.specifier))
        .flatMap((base) => [base, `${base}.ts`, `${base}/index.ts`].filter((one) => known.has(one)));
      graph.set(file, targets);
    }
    expect(cycles(graph)).toEqual([]);
  });

  it("are drawn in the contributor's guide as they are checked here", () => {
    const guide = readFileSync(path.join(ROOT, "DEVELOPERS.md"), "utf8");
    for (const layer of Object.keys(ARROWS)) expect(guide).toContain(`\`src/${layer}/\``);
  });
});

describe("the check itself", () => {
  it.each([
    ["src/chain/a.ts", 'import { x } from "../table/read";', "chain may not import table"],
    ["src/cells/a.ts", 'import { x } from "../audit/audit";', "cells may not import audit"],
    ["src/cells/a.ts", 'import { x } from "../audit/audit"; import type { y } from "../pane/view";', "cells may not import pane"],
    ["src/numerics/a.ts", 'const x = import("../chain/a");', "numerics may not import chain"],
    ["src/chain/a.ts", 'export * from "../cells/seal";', "chain may not import cells"],
    ["src/chain/a.ts", 'import { Matrix } from "ml-matrix";', "may not stand on the package ml-matrix"],
    ["src/chain/a.ts", 'import { x } from "../../scripts/x";', "outside src"],
    ["src/pane/a.ts", "Office.onReady();", "names Office"],
    ["src/functions/a.ts", "new CustomFunctions.Error();", "names CustomFunctions"],
    ["src/table/a.ts", "document.title;", "names document"],
    ["src/audit/a.ts", "let x: HTMLElement;", "names HTMLElement"],
    ["src/table/utils.ts", "", "names no idea"],
    ["src/other/a.ts", "", "no layer"],
  ])("sees %s: %s", (file, text, fault) => {
    expect(faultsOf(file, text).join("\n")).toContain(fault);
  });

  it.each([
    ["src/cells/a.ts", 'import type { Finding } from "../audit/finding";'],
    ["src/cells/a.ts", 'import { type Finding } from "../audit/finding";'],
    ["src/chain/a.ts", "function f(window: number) { return window; }"],
    ["src/chain/a.ts", "const a = { document: 1 }; a.document;"],
    ["src/numerics/a.ts", 'import { Matrix } from "ml-matrix";'],
    ["src/host/excel/a.ts", "Office.onReady(); document.title;"],
  ])("lets %s be: %s", (file, text) => {
    expect(faultsOf(file, text)).toEqual([]);
  });

  it("sees a circle", () => {
    expect(cycles(new Map([["a", ["b"]], ["b", ["c"]], ["c", ["b"]]]))).toEqual(["b → c → b"]);
  });
});
