/** The range that a formula of ours takes for its rate table: its first argument, where that is a plain range. */

export interface TableReference {
  /** Null: the formula's own sheet. */
  readonly sheet: string | null;
  readonly address: string;
  /** Written with "#": all that the formula at the address fills. */
  readonly spill: boolean;
}

const FIRST_ARGUMENT = /(?:^|[^A-Za-z0-9_.])CTMC\.[A-Za-z0-9_]+\s*\(\s*((?:'(?:[^']|'')+'|[\p{L}\p{N}_.]+)!)?(\$?[A-Z]{1,3}\$?\d+(?::\$?[A-Z]{1,3}\$?\d+)?)(#?)\s*[,)]/iu;

export function tableReference(formula: string): TableReference | null {
  // Only text arguments hold double quotation marks; a first argument in them is a name, not a range.
  const match = FIRST_ARGUMENT.exec(formula.replace(/"(?:[^"]|"")*"/g, '""'));
  if (!match) return null;
  const [, sheet, address, spill] = match;
  const name = sheet?.slice(0, -1);
  return {
    sheet: name === undefined ? null : name.startsWith("'") ? name.slice(1, -1).replace(/''/g, "'") : name,
    address: address.replace(/\$/g, ""),
    spill: spill === "#",
  };
}
