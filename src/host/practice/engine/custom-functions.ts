/**
 * Calls the add-in's functions the way a spreadsheet host calls them, faults included: what the host would turn into
 * 0 or lose on its way is turned into 0 or lost here too, so that a mistake in a function shows before it is shipped.
 */
import type { CustomParameter } from "./evaluate";
import { Fault, isFaultCode, isGrid, toNumber, type Grid, type Scalar, type Value } from "./value";

export interface ParameterMetadata {
  readonly name: string;
  readonly description?: string;
  readonly type?: string;
  readonly dimensionality?: "scalar" | "matrix";
  readonly optional?: boolean;
}

export interface FunctionMetadata {
  readonly id: string;
  readonly name: string;
  readonly description?: string;
  readonly parameters: readonly ParameterMetadata[];
  readonly options?: { readonly requiresAddress?: boolean; readonly cancelable?: boolean };
}

export interface FunctionsFile {
  readonly allowErrorForDataTypeAny?: boolean;
  readonly functions: readonly FunctionMetadata[];
}

/** How hosts differ: what a blank cell arrives as, and whether a single cell comes bare where a table is declared. */
export interface Conventions {
  readonly blanks: "zero" | "empty" | "null";
  readonly singles: "matrix" | "scalar";
}

export type CustomOutcome =
  | { readonly kind: "answer"; readonly value: Value }
  | { readonly kind: "late"; readonly answer: Promise<Value>; readonly cancel: () => void };

/** The host's codes by the names under which it offers them. */
const ERROR_CODE = {
  divisionByZero: "#DIV/0!",
  invalidName: "#NAME?",
  invalidNumber: "#NUM!",
  invalidReference: "#REF!",
  invalidValue: "#VALUE!",
  notAvailable: "#N/A",
  nullReference: "#NULL!",
} as const;

class HostError {
  constructor(
    readonly code: string,
    readonly message?: string,
  ) {}
}

type Callable = (...parameters: unknown[]) => unknown;

export class CustomFunctionHost {
  /** What the script sees as the global `CustomFunctions`. */
  readonly standIn: {
    associate(id: string | Record<string, Callable>, call?: Callable): void;
    readonly Error: typeof HostError;
    readonly ErrorCode: typeof ERROR_CODE;
  };
  readonly conventions: Conventions;
  private readonly calls = new Map<string, Callable>();
  private readonly byName = new Map<string, FunctionMetadata>();
  private metadata: FunctionsFile = { functions: [] };
  private readonly listeners = new Set<() => void>();
  private announcing = false;

  constructor(
    conventions: Partial<Conventions> = {},
    private readonly namespace = "CTMC",
  ) {
    this.conventions = { blanks: "zero", singles: "matrix", ...conventions };
    this.standIn = {
      associate: (id, call) => {
        if (typeof id === "string") {
          if (call) this.calls.set(id.toUpperCase(), call);
        } else for (const [name, body] of Object.entries(id)) this.calls.set(name.toUpperCase(), body);
        this.announceSoon();
      },
      Error: HostError,
      ErrorCode: ERROR_CODE,
    };
  }

  /** Runs the script with the stand-in as its only host global, as a plain runtime would. Not for pages, whose policy forbids it. */
  load(script: string, metadata: FunctionsFile): void {
    // The script is the project's own build; a function body gives it a global name that no other script sees.
     
    (new Function("CustomFunctions", script) as (standIn: unknown) => void)(this.standIn);
    this.useMetadata(metadata);
  }

  /** For pages: puts the stand-in where the script, loaded by its element, will look for it. */
  install(target: object): void {
    Object.defineProperty(target, "CustomFunctions", { value: this.standIn, configurable: true });
  }

  useMetadata(metadata: FunctionsFile): void {
    this.metadata = metadata;
    this.byName.clear();
    for (const entry of metadata.functions) this.byName.set(`${this.namespace}.${entry.name}`.toUpperCase(), entry);
    this.announce();
  }

  /** Every function that is described and has been registered. */
  functions(): { name: string; metadata: FunctionMetadata }[] {
    return [...this.byName].filter(([, entry]) => this.calls.has(entry.id.toUpperCase())).map(([name, metadata]) => ({ name, metadata }));
  }

  onChange(listener: () => void): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  /** Once for the many registrations of one script. */
  private announceSoon(): void {
    if (this.announcing) return;
    this.announcing = true;
    queueMicrotask(() => {
      if (this.announcing) this.announce();
    });
  }

  private announce(): void {
    this.announcing = false;
    this.listeners.forEach((listener) => listener());
  }

  call(name: string, parameters: readonly CustomParameter[], address: string): CustomOutcome | null {
    const entry = this.byName.get(name);
    const body = entry && this.calls.get(entry.id.toUpperCase());
    if (!entry || !body) return null;
    const sent = this.parametersFor(name, entry, parameters);
    if (sent instanceof Fault) return { kind: "answer", value: sent };
    const invocation: { address?: string; functionName: string; onCanceled?: () => void } = { functionName: entry.id };
    if (entry.options?.requiresAddress) invocation.address = address;
    let result: unknown;
    try {
      result = body(...sent, invocation);
    } catch (error) {
      return { kind: "answer", value: faultFrom(error) };
    }
    if (!isPromise(result)) return { kind: "answer", value: received(result) };
    return { kind: "late", answer: result.then(received, faultFrom), cancel: () => invocation.onCanceled?.() };
  }

  private parametersFor(name: string, entry: FunctionMetadata, given: readonly CustomParameter[]): unknown[] | Fault {
    const declared = entry.parameters;
    if (given.length > declared.length) return new Fault("#VALUE!", `${name} takes at most ${declared.length} arguments and got ${given.length}.`);
    const sent: unknown[] = [];
    for (const [index, parameter] of declared.entries()) {
      const present = given[index];
      if (!present) {
        if (!parameter.optional) return new Fault("#VALUE!", `${name} needs its argument "${parameter.name}".`);
        sent.push(null);
      } else if (!present.given) sent.push(null);
      else {
        const converted = this.convert(present.value, parameter, name);
        if (converted instanceof Fault) return converted;
        sent.push(converted);
      }
    }
    return sent;
  }

  private convert(value: Scalar | Grid, parameter: ParameterMetadata, name: string): unknown {
    const cell = (entry: Scalar) => this.convertScalar(entry, parameter);
    if (parameter.dimensionality === "matrix") {
      if (!isGrid(value)) {
        const single = cell(value);
        return single instanceof Fault || this.conventions.singles === "scalar" ? single : [[single]];
      }
      const matrix: unknown[][] = [];
      for (const row of value) {
        const line: unknown[] = [];
        for (const entry of row) {
          const converted = cell(entry);
          if (converted instanceof Fault) return converted;
          line.push(converted);
        }
        matrix.push(line);
      }
      return matrix;
    }
    if (!isGrid(value)) return cell(value);
    if (value.length === 1 && value[0]!.length === 1) return cell(value[0]![0]!);
    return new Fault("#VALUE!", `The argument "${parameter.name}" of ${name} takes a single cell, not a range.`);
  }

  private convertScalar(value: Scalar, parameter: ParameterMetadata): unknown {
    if (value instanceof Fault) {
      if (!this.metadata.allowErrorForDataTypeAny || (parameter.type ?? "any") !== "any") return value;
      return new HostError(value.code);
    }
    if (value === null) {
      const { blanks } = this.conventions;
      return blanks === "zero" ? 0 : blanks === "empty" ? "" : null;
    }
    switch (parameter.type) {
      case "number": return toNumber(value, (text) => (text.trim() === "" || !Number.isFinite(Number(text)) ? null : Number(text)));
      case "string": return typeof value === "boolean" ? (value ? "TRUE" : "FALSE") : String(value);
      case "boolean": return typeof value === "string" ? new Fault("#VALUE!") : Boolean(value);
      default: return value;
    }
  }
}

const isPromise = (value: unknown): value is Promise<unknown> => typeof value === "object" && value !== null && typeof (value as { then?: unknown }).then === "function";

/** Only #VALUE! and #N/A keep their text on the way to the cell, and only the host's own error object keeps anything. */
function faultFrom(error: unknown): Fault {
  if (!(error instanceof HostError)) return new Fault("#VALUE!", "The function stopped without a reason.");
  const code = isFaultCode(error.code) ? error.code : "#VALUE!";
  const carriesText = (code === "#VALUE!" || code === "#N/A") && error.message !== undefined && error.message !== "";
  return carriesText ? new Fault(code, error.message) : new Fault(code);
}

/** A result as the sheet receives it after its passage as text: what has no spelling there arrives as 0. */
function received(result: unknown): Value {
  if (!Array.isArray(result)) return receivedScalar(result);
  const rows: unknown[] = result;
  const width = Array.isArray(rows[0]) ? rows[0].length : 0;
  if (width === 0 || rows.some((row) => !Array.isArray(row) || row.length !== width)) {
    return new Fault("#VALUE!", "The function gave back a table whose rows are not plain lists of one length.");
  }
  return (rows as unknown[][]).map((row) => Array.from(row, receivedScalar));
}

function receivedScalar(value: unknown): Scalar {
  switch (typeof value) {
    case "number": return Number.isFinite(value) ? value : 0;
    case "string":
    case "boolean": return value;
    case "object":
      if (value === null) return 0;
      return value instanceof HostError ? faultFrom(value) : new Fault("#VALUE!", "The function gave back something that no cell can show.");
    default: return 0;
  }
}
