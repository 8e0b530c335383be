import type { FormulaPlace, FrozenFormula, Outcome, SharedWorkbook } from "./workbook";

/** How the workbook stands for people with and without the add-in; null where the host has no such notion. */
export interface Sharing {
  readonly calculation: "automatic" | "manual";
  readonly unlinked: readonly FormulaPlace[];
  readonly frozen: readonly FrozenFormula[];
}

export async function sharingOf(shared: SharedWorkbook): Promise<Sharing> {
  const [calculation, unlinked, frozen] = [await shared.calculation(), await shared.unlinked(), await shared.frozen()];
  return { calculation, unlinked, frozen };
}

export type SharingAct = "recalculate" | "relink" | "freeze" | "thaw";

/** Does one of the acts and says in a sentence what came of it, what was refused included. */
export async function act(shared: SharedWorkbook, name: SharingAct, now: Date): Promise<string> {
  switch (name) {
    case "recalculate":
      await shared.recalculate();
      return "Recalculated.";
    case "relink":
      return outcomeWords(await shared.relink(), "relinked");
    case "thaw":
      return outcomeWords(await shared.thaw(), "put back");
    case "freeze": {
      const outcome = await shared.freeze(now);
      return outcomeWords(outcome, "frozen") + (outcome.sheet ? ` They are listed on the sheet ${outcome.sheet}.` : "");
    }
  }
}

function outcomeWords({ done, refused }: Outcome, did: string): string {
  return [`${done} ${done === 1 ? "formula" : "formulas"} ${did}.`, ...refused].join(" ");
}
