/** The value of a formula's expression, given a view of the workbook. */
import { contains, enclosing, overlap, type Area } from "./address";
import type { Expression } from "./expression";
import { readFormula } from "./formula";
import type { Locale } from "./locale";
import { binary, unary } from "./operators";
import { Fault, isGrid, Lambda, Reference, type Grid, type Scalar, type Scope, type Value } from "./value";

/** What an evaluation sees of the workbook. The readers may throw a `Wait`: the calculation then comes back later. */
export interface Sight {
  readonly here: Area;
  readonly locale: Locale;
  sheetId(name: string): string | null;
  cell(sheet: string, row: number, column: number): Scalar;
  /** The values of an area; whole rows and columns are cut to the part in use. */
  grid(area: Area): Grid;
  /** The area that the formula in this cell fills; null when it fills none. */
  spill(sheet: string, row: number, column: number): Area | null;
  /** The formula that a name of the workbook stands for. */
  named(name: string): string | null;
  /** The ordinary function of that name. */
  ordinary(name: string): OrdinaryFunction | null;
  /** Calls a custom function; null when there is none of that name. */
  custom(name: string, parameters: readonly CustomParameter[]): Value | null;
  now(): Date;
  random(): number;
}

/** A parameter of a custom function: left out, or a value in which null is a blank cell. */
export type CustomParameter = { readonly given: false } | { readonly given: true; readonly value: Scalar | Grid };

export type OrdinaryFunction =
  | { readonly kind: "eager"; readonly least: number; readonly most: number; run(values: readonly Value[], evaluation: Evaluation): Value }
  | { readonly kind: "lazy"; readonly least: number; readonly most: number; run(parameters: readonly (Expression | null)[], evaluation: Evaluation): Value };

const LAMBDA_DEPTH_LIMIT = 200;

export class Evaluation {
  private depth = 0;

  constructor(
    readonly sight: Sight,
    private readonly scope: Scope = new Map(),
  ) {}

  /** The value as it comes; a reference stays one. */
  value(expression: Expression | null): Value {
    if (expression === null) return null;
    switch (expression.kind) {
      case "literal": return expression.value;
      case "array": return expression.rows;
      case "reference": return this.reference(expression);
      case "name": return this.scope.get(expression.name) ?? this.named(expression.name);
      case "unary": return this.unary(expression.operator, expression.operand);
      case "binary": return this.binary(expression);
      case "call": return this.call(expression.name, expression.parameters);
      case "apply": return this.apply(this.value(expression.callee), expression.parameters.map((entry) => this.value(entry)));
      case "lambda": return new Lambda(expression.parameters, expression.body, this.scope);
      case "let": {
        const scope = new Map(this.scope);
        expression.names.forEach((name, index) => scope.set(name, this.within(scope).value(expression.values[index]!)));
        return this.within(scope).value(expression.body);
      }
    }
  }

  /** The value with references read. */
  contents(expression: Expression | null): Scalar | Grid {
    return this.read(this.value(expression));
  }

  read(value: Value): Scalar | Grid {
    if (value instanceof Reference) {
      const { area } = value;
      return area.rows === 1 && area.columns === 1 ? this.sight.cell(area.sheet, area.row, area.column) : this.sight.grid(area);
    }
    return value instanceof Lambda ? new Fault("#CALC!", "A LAMBDA stands where a value is needed; give it its arguments.") : value;
  }

  apply(callee: Value, values: readonly Value[]): Value {
    if (callee instanceof Fault) return callee;
    if (!(callee instanceof Lambda)) return new Fault("#VALUE!", "Only a LAMBDA can be given arguments.");
    if (values.length !== callee.parameters.length) {
      return new Fault("#VALUE!", `The LAMBDA takes ${callee.parameters.length} arguments and got ${values.length}.`);
    }
    if (this.depth >= LAMBDA_DEPTH_LIMIT) return new Fault("#NUM!", "The LAMBDA calls itself too many times.");
    const scope = new Map(callee.scope);
    callee.parameters.forEach((name, index) => scope.set(name, values[index]!));
    return this.within(scope, 1).value(callee.body);
  }

  private within(scope: Scope, deeper = 0): Evaluation {
    const evaluation = new Evaluation(this.sight, scope);
    evaluation.depth = this.depth + deeper;
    return evaluation;
  }

  private reference(expression: Extract<Expression, { kind: "reference" }>): Value {
    if (!expression.rect) return new Fault("#REF!", `${expression.text} is off the sheet.`);
    const sheet = expression.sheetName === null ? this.sight.here.sheet : this.sight.sheetId(expression.sheetName);
    if (sheet === null) return new Fault("#REF!", `There is no sheet named "${expression.sheetName}".`);
    return new Reference({ sheet, ...expression.rect });
  }

  private named(name: string): Value {
    const formula = this.sight.named(name);
    if (formula === null) return new Fault("#NAME?", `The name ${name} is not known.`);
    if (this.depth >= LAMBDA_DEPTH_LIMIT) return new Fault("#REF!", `The name ${name} stands for itself.`);
    const { expression, problem } = readFormula(formula);
    return expression ? this.within(new Map(), 1).value(expression) : new Fault("#NAME?", problem ?? undefined);
  }

  private unary(operator: "+" | "-" | "%" | "#" | "@", operand: Expression): Value {
    const value = this.value(operand);
    if (operator === "#") return this.spilled(value);
    if (operator === "@") return this.single(value);
    return operator === "+" ? value : unary(operator, this.read(value), this.sight.locale);
  }

  private spilled(value: Value): Value {
    if (value instanceof Fault) return value;
    if (!(value instanceof Reference)) return new Fault("#REF!", "The # mark must follow a cell.");
    const { sheet, row, column } = value.area;
    const head = this.sight.cell(sheet, row, column);
    const area = this.sight.spill(sheet, row, column);
    if (area) return new Reference(area);
    return head instanceof Fault ? head : new Fault("#REF!", "The # mark must follow a cell whose formula gives a table.");
  }

  /** The one cell of a range that is level with the formula. */
  private single(value: Value): Value {
    if (isGrid(value)) return value[0]![0]!;
    if (!(value instanceof Reference)) return value;
    const { area } = value;
    const { here } = this.sight;
    if (area.rows === 1 && area.columns === 1) return value;
    const row = area.rows === 1 ? area.row : here.row;
    const column = area.columns === 1 ? area.column : here.column;
    if (!contains(area, row, column)) return new Fault("#VALUE!", "The formula is not level with the range after @.");
    return new Reference({ sheet: area.sheet, row, column, rows: 1, columns: 1 });
  }

  private binary(expression: Extract<Expression, { kind: "binary" }>): Value {
    const { operator } = expression;
    if (operator === ":" || operator === " " || operator === ",") {
      const left = this.value(expression.left);
      if (left instanceof Fault) return left;
      const right = this.value(expression.right);
      if (right instanceof Fault) return right;
      if (!(left instanceof Reference) || !(right instanceof Reference)) return new Fault("#VALUE!", "A range must be made of cells.");
      if (operator === ",") return new Fault("#VALUE!", "Several ranges in one are not supported here; use each on its own.");
      if (left.area.sheet !== right.area.sheet) return new Fault("#VALUE!", "A range cannot reach across sheets.");
      const rect = operator === ":" ? enclosing(left.area, right.area) : overlap(left.area, right.area);
      return rect ? new Reference({ sheet: left.area.sheet, ...rect }) : new Fault("#NULL!");
    }
    const left = this.contents(expression.left);
    return binary(operator, left, this.contents(expression.right), this.sight.locale);
  }

  private call(name: string, parameters: readonly (Expression | null)[]): Value {
    const local = this.scope.get(name);
    if (local instanceof Lambda) return this.apply(local, parameters.map((entry) => this.value(entry)));
    const ordinary = this.sight.ordinary(name);
    if (ordinary) {
      if (parameters.length < ordinary.least || parameters.length > ordinary.most) return new Fault("#VALUE!", countSentence(name, ordinary, parameters.length));
      return ordinary.kind === "lazy" ? ordinary.run(parameters, this) : ordinary.run(parameters.map((entry) => this.value(entry)), this);
    }
    const given = parameters.map((entry): CustomParameter => (entry === null ? { given: false } : { given: true, value: this.contents(entry) }));
    return this.sight.custom(name, given) ?? new Fault("#NAME?", `There is no function ${name}.`);
  }
}

function countSentence(name: string, { least, most }: OrdinaryFunction, given: number): string {
  const wanted = least === most ? `${least}` : most === Infinity ? `${least} or more` : `${least} to ${most}`;
  return `${name} takes ${wanted} argument${wanted === "1" ? "" : "s"} and got ${given}.`;
}
