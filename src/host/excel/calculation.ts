/** Whether the workbook recalculates by itself, and doing it. */
import { run } from "./run";

export const calculation = (): Promise<"automatic" | "manual"> =>
  run(async (context) => {
    const application = context.workbook.application.load("calculationMode");
    await context.sync();
    return application.calculationMode === "Manual" ? "manual" : "automatic";
  });

/** All formulas of the open workbook, also those whose inputs did not change. */
export const recalculate = (): Promise<void> =>
  run(async (context) => {
    context.workbook.application.calculate("Full" as Excel.CalculationType);
    await context.sync();
  });
