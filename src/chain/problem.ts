/**
 * A question that cannot be answered, as data: a code and the facts its sentence needs.
 *
 * The only catalogue of sentences lives in `cells/sentences`; nothing below `cells` words a message.
 * `kind` decides the cell error: "input" becomes `#VALUE!`, "noAnswer" becomes `#N/A`.
 */
export type ProblemKind = "input" | "noAnswer";

/** A fact a sentence may print: numbers are formatted by the catalogue, state numbers count from 0 here. */
export type Detail = number | string | boolean | null | readonly Detail[];

export class Problem extends Error {
  readonly code: string;
  readonly kind: ProblemKind;
  readonly details: Readonly<Record<string, Detail>>;

  constructor(code: string, details: Readonly<Record<string, Detail>> = {}, kind: ProblemKind = "input") {
    super(code);
    this.name = "Problem";
    this.code = code;
    this.kind = kind;
    this.details = details;
  }
}
