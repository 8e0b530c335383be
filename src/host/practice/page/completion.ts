import type { FunctionHelp } from "../engine";

const MOST = 40;

/**
 * The functions a person may mean by the letters typed so far, best first: those that begin with them, then those whose
 * own name does (`surv` for `CTMC.SURVIVAL`), then those that hold them somewhere.
 */
export function matches(functions: readonly FunctionHelp[], word: string): FunctionHelp[] {
  const wanted = word.toUpperCase();
  const rank = (entry: FunctionHelp): number => {
    const name = entry.name.toUpperCase();
    const own = name.slice(name.lastIndexOf(".") + 1);
    if (name.startsWith(wanted)) return entry.custom ? 0 : 1;
    if (own.startsWith(wanted)) return 0.5;
    return wanted.length > 2 && name.includes(wanted) ? 2 : Number.NaN;
  };
  return functions
    .map((entry) => ({ entry, rank: rank(entry) }))
    .filter(({ rank: r }) => !Number.isNaN(r))
    .sort((a, b) => a.rank - b.rank || a.entry.name.localeCompare(b.entry.name))
    .slice(0, MOST)
    .map(({ entry }) => entry);
}

/** Index of the argument that the caret is in; the last one repeats where a function takes any number of them. */
export function argumentIndex(entry: FunctionHelp, argument: number): number {
  return Math.min(argument, entry.arguments.length - 1);
}
