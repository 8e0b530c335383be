/** The tree of a formula as the evaluator reads it. */
import type { Rect } from "./address";
import type { Scalar } from "./value";

export type BinaryOperator = "+" | "-" | "*" | "/" | "^" | "&" | "=" | "<>" | "<" | ">" | "<=" | ">=" | ":" | " " | ",";

export type Expression =
  | { readonly kind: "literal"; readonly value: Scalar }
  | { readonly kind: "array"; readonly rows: readonly (readonly Scalar[])[] }
  | { readonly kind: "reference"; readonly sheetName: string | null; readonly rect: Rect | null; readonly text: string }
  | { readonly kind: "name"; readonly name: string }
  | { readonly kind: "unary"; readonly operator: "+" | "-" | "%" | "#" | "@"; readonly operand: Expression }
  | { readonly kind: "binary"; readonly operator: BinaryOperator; readonly left: Expression; readonly right: Expression }
  | { readonly kind: "call"; readonly name: string; readonly parameters: readonly (Expression | null)[] }
  | { readonly kind: "apply"; readonly callee: Expression; readonly parameters: readonly (Expression | null)[] }
  | { readonly kind: "let"; readonly names: readonly string[]; readonly values: readonly (Expression | null)[]; readonly body: Expression }
  | { readonly kind: "lambda"; readonly parameters: readonly string[]; readonly body: Expression };
