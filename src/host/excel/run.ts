/** One conversation with the host: every call to Excel goes through here. */

/** A refusal that a person can read; the pane shows its message as it is. */
export class HostRefusal extends Error {
  constructor(sentence: string, options?: ErrorOptions) {
    super(sentence, options);
    this.name = "HostRefusal";
  }
}

/** What the host's error codes mean to the person at the sheet. */
const SENTENCES: Readonly<Record<string, string>> = {
  AccessDenied: "Excel does not allow this change: the sheet or the workbook is protected, or it is open for reading only.",
  InvalidOperationInCellEditMode: "A cell is being edited. Press Enter or Escape there, then try again.",
  ItemNotFound: "The sheet or the cells are no longer there. Refresh, then try again.",
  InvalidSelection: "Cells are needed here: select a range first.",
  InsertDeleteConflict: "The cells moved while this ran. Refresh, then try again.",
  RangeExceedsLimit: "The range is too large for one step. Select a smaller one.",
  RequestPayloadSizeLimitExceeded: "That is too much for one step. Take a smaller range.",
  ResponsePayloadSizeLimitExceeded: "The range is too large to read in one step. Select a smaller one.",
  Timeout: "Excel did not answer in time. Try again when it has finished calculating.",
  RequestAborted: "Excel stopped this step. Try again.",
  ActivityLimitReached: "Excel is busy. Try again in a moment.",
};

/** The sentence for whatever was thrown. A host's code that is not known here is named, so that it can be looked up. */
export function sentenceOf(error: unknown): string {
  if (error instanceof HostRefusal) return error.message;
  const { code, message } = (typeof error === "object" && error !== null ? error : {}) as { code?: unknown; message?: unknown };
  const text = typeof message === "string" ? message : String(error);
  if (typeof code !== "string") return text;
  return SENTENCES[code] ?? `Excel refused this step: ${text.replace(/\.?$/, ".")} (${code})`;
}

/**
 * Runs one batch. A cell that is being edited delays it instead of failing it; whatever goes wrong comes back
 * as a sentence. All that a batch changes before its last synchronisation is one step for the host's undo.
 */
export async function run<T>(batch: (context: Excel.RequestContext) => Promise<T>): Promise<T> {
  try {
    return await Excel.run({ delayForCellEdit: true }, batch);
  } catch (error) {
    throw error instanceof HostRefusal ? error : new HostRefusal(sentenceOf(error), { cause: error });
  }
}

/** Whether the host has a set of features of its object model. */
export const has = (version: string): boolean => Office.context.requirements.isSetSupported("ExcelApi", version);
