/** What the formula bar offers while a function's name is typed, and says while its arguments are. */
import type { CustomFunctionHost } from "./custom-functions";
import { ordinaryDescriptions } from "./functions/library";

export interface FunctionHelp {
  /** As typed, such as "CTMC.TRANSITION" or "SUM". */
  readonly name: string;
  readonly arguments: readonly { readonly name: string; readonly optional: boolean; readonly text: string }[];
  readonly description: string;
  readonly custom: boolean;
}

/** Every function that a formula can call: the add-in's first, then the ordinary ones, each group by name. */
export function functionList(host: CustomFunctionHost | null): FunctionHelp[] {
  const custom = (host?.functions() ?? []).map(({ name, metadata }): FunctionHelp => ({
    name,
    arguments: metadata.parameters.map((entry) => ({ name: entry.name, optional: entry.optional === true, text: entry.description ?? "" })),
    description: metadata.description ?? "",
    custom: true,
  }));
  const byName = (a: FunctionHelp, b: FunctionHelp) => (a.name < b.name ? -1 : 1);
  return [...custom.sort(byName), ...ordinaryDescriptions().sort(byName)];
}
