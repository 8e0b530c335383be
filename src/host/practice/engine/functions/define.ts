/** How an ordinary function is described: name, parameters, what it does, and how its values are taken. */
import { numberInText } from "../entry";
import { type Evaluation, type OrdinaryFunction } from "../evaluate";
import type { Expression } from "../expression";
import { lift, textOf } from "../operators";
import { Fault, isFaultCode, isGrid, Lambda, Reference, toLogical, toNumber, type Grid, type Scalar, type Value } from "../value";
import { serialOfMoment } from "../dates";

export interface Parameter {
  readonly name: string;
  readonly optional: boolean;
  /** The last parameter may come again and again. */
  readonly repeats: boolean;
}

export interface Definition {
  readonly name: string;
  readonly parameters: readonly Parameter[];
  readonly description: string;
  readonly body: OrdinaryFunction;
}

/** Reads "number, [digits], more..." */
function parametersOf(signature: string): Parameter[] {
  if (signature === "") return [];
  return signature.split(", ").map((part) => {
    const repeats = part.endsWith("...");
    const bare = repeats ? part.slice(0, -3) : part;
    const optional = bare.startsWith("[");
    return { name: optional ? bare.slice(1, -1) : bare, optional, repeats };
  });
}

function bounds(parameters: readonly Parameter[]): { least: number; most: number } {
  return {
    least: parameters.filter((entry) => !entry.optional).length,
    most: parameters.some((entry) => entry.repeats) ? Infinity : parameters.length,
  };
}

/** A function that takes its values as they come. */
export function define(name: string, signature: string, description: string, run: (values: readonly Value[], evaluation: Evaluation) => Value): Definition {
  const parameters = parametersOf(signature);
  return { name, parameters, description, body: { kind: "eager", ...bounds(parameters), run } };
}

/** A function that decides itself which of its parameters are evaluated. */
export function defineLazy(name: string, signature: string, description: string, run: (parameters: readonly (Expression | null)[], evaluation: Evaluation) => Value): Definition {
  const parameters = parametersOf(signature);
  return { name, parameters, description, body: { kind: "lazy", ...bounds(parameters), run } };
}

/** What a parameter of a lifted function is taken for: number, text, logical, or the value itself (errors too, when "e"). */
export type Taking = "n" | "t" | "l" | "v" | "e";

/**
 * A function of single values; given a table it works entry by entry. `takings` has a letter for each parameter, the
 * last standing for all that follow. A parameter left out reaches `run` as undefined.
 */
export function defineLifted<Taken extends readonly unknown[]>(
  name: string,
  signature: string,
  takings: string,
  description: string,
  run: (values: Taken, evaluation: Evaluation) => unknown,
): Definition {
  return define(name, signature, description, (values, evaluation) => {
    const contents = values.map((value) => evaluation.read(value));
    return lift(contents, (...scalars) => {
      const taken: unknown[] = [];
      for (const [index, scalar] of scalars.entries()) {
        const value = take(scalar, (takings[index] ?? takings.at(-1)) as Taking, evaluation);
        if (value instanceof Fault && !(scalar instanceof Fault && takings[index] === "e")) return value;
        taken.push(value);
      }
      return fromLibrary(run(taken as unknown as Taken, evaluation));
    });
  });
}

export function take(scalar: Scalar, taking: Taking, evaluation: Evaluation): Scalar {
  if (taking === "e") return scalar;
  if (scalar instanceof Fault || taking === "v") return scalar;
  if (taking === "n") return toNumber(scalar, (text) => numberInText(text, evaluation.sight.locale));
  return taking === "l" ? toLogical(scalar) : textOf(scalar, evaluation.sight.locale);
}

/** A value of the function library as a cell value: its errors, dates and non-numbers get their spreadsheet form. */
export function fromLibrary(result: unknown): Scalar {
  switch (typeof result) {
    case "number": return Number.isFinite(result) ? result : new Fault("#NUM!");
    case "string":
    case "boolean": return result;
    case "object":
      if (result === null || result instanceof Fault) return result;
      if (result instanceof Date) return serialOfMoment(result);
      if (result instanceof Error) return isFaultCode(result.message) ? new Fault(result.message) : new Fault("#VALUE!");
      return new Fault("#VALUE!");
    default: return new Fault("#VALUE!");
  }
}

export const asGrid = (value: Scalar | Grid): Grid => (isGrid(value) ? value : [[value]]);

/** The first error in a table, or null. */
export function firstFault(grid: Grid): Fault | null {
  for (const row of grid) for (const entry of row) if (entry instanceof Fault) return entry;
  return null;
}

/**
 * The numbers of the values, as the functions of many numbers take them: from cells and tables only what is a number;
 * a value written into the formula itself is made one. The first error ends it.
 */
export function numbersIn(values: readonly Value[], evaluation: Evaluation): number[] | Fault {
  const numbers: number[] = [];
  for (const value of values) {
    if (value instanceof Reference || isGrid(value)) {
      for (const row of asGrid(evaluation.read(value))) {
        for (const entry of row) {
          if (typeof entry === "number") numbers.push(entry);
          else if (entry instanceof Fault) return entry;
        }
      }
    } else {
      const number = value instanceof Lambda ? new Fault("#VALUE!") : take(value, "n", evaluation);
      if (typeof number !== "number") return number as Fault;
      numbers.push(number);
    }
  }
  return numbers;
}

/** One number from a parameter; undefined where it was left out. */
export function numberFrom(value: Value | undefined, evaluation: Evaluation, otherwise: number): number | Fault {
  if (value === undefined) return otherwise;
  const content = evaluation.read(value);
  const single = isGrid(content) ? content[0]![0]! : content;
  return take(single, "n", evaluation) as number | Fault;
}
