/** The small changes that a mutation check makes to a source text. */
import ts from "typescript";

const SWAPS = new Map([
  [ts.SyntaxKind.LessThanToken, "<="],
  [ts.SyntaxKind.LessThanEqualsToken, "<"],
  [ts.SyntaxKind.GreaterThanToken, ">="],
  [ts.SyntaxKind.GreaterThanEqualsToken, ">"],
  [ts.SyntaxKind.EqualsEqualsEqualsToken, "!=="],
  [ts.SyntaxKind.ExclamationEqualsEqualsToken, "==="],
  [ts.SyntaxKind.AmpersandAmpersandToken, "||"],
  [ts.SyntaxKind.BarBarToken, "&&"],
  [ts.SyntaxKind.PlusToken, "-"],
  [ts.SyntaxKind.MinusToken, "+"],
  [ts.SyntaxKind.AsteriskToken, "/"],
  [ts.SyntaxKind.SlashToken, "*"],
  [ts.SyntaxKind.PlusEqualsToken, "-="],
  [ts.SyntaxKind.MinusEqualsToken, "+="],
]);

/**
 * @typedef {{ line: number, start: number, end: number, from: string, to: string }} Mutant
 *
 * Every change that could be made to a source text: comparisons, sums, products and logic turned round, numbers off by one,
 * truth values and negations the other way. Types, imports and text joined by "+" are left alone.
 * @param {string} text
 * @returns {Mutant[]}
 */
export function mutants(text) {
  const source = ts.createSourceFile("x.ts", text, ts.ScriptTarget.ES2022, true);
  /** @type {Mutant[]} */
  const found = [];
  const add = (/** @type {ts.Node} */ node, /** @type {string} */ to, start = node.getStart(source), end = node.getEnd()) => {
    found.push({ line: source.getLineAndCharacterOfPosition(start).line + 1, start, end, from: text.slice(start, end), to });
  };
  const isText = (/** @type {ts.Node} */ node) => ts.isStringLiteralLike(node) || ts.isTemplateExpression(node);
  const visit = (/** @type {ts.Node} */ node) => {
    if (ts.isTypeNode(node) || ts.isInterfaceDeclaration(node) || ts.isTypeAliasDeclaration(node) || ts.isImportDeclaration(node)) return;
    if (ts.isBinaryExpression(node)) {
      const to = SWAPS.get(node.operatorToken.kind);
      if (to && !(isText(node.left) || isText(node.right))) add(node.operatorToken, to);
    } else if (ts.isNumericLiteral(node) && !ts.isPropertyAssignment(node.parent) && Number.isSafeInteger(Number(node.text))) {
      add(node, String(Number(node.text) + 1));
    } else if (node.kind === ts.SyntaxKind.TrueKeyword) add(node, "false");
    else if (node.kind === ts.SyntaxKind.FalseKeyword) add(node, "true");
    else if (ts.isPrefixUnaryExpression(node) && node.operator === ts.SyntaxKind.ExclamationToken) add(node, "", node.getStart(source), node.operand.getStart(source));
    ts.forEachChild(node, visit);
  };
  visit(source);
  return found;
}
