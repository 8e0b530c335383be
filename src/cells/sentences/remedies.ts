import type { Remedy } from "../../audit/remedies";
import { plural } from "./figure";

export interface RemedyTexts {
  /** Words of the button. */
  readonly label: string;
  /** What was done, once it is. */
  readonly done: string;
}

/** Button words and closing words of a remedy. */
export function remedyTexts(remedy: Remedy): RemedyTexts {
  const cells = remedy.kind === "cells" ? plural(remedy.changes.length, "cell") : "";
  const texts: Readonly<Record<string, RemedyTexts>> = {
    fillDiagonal: { label: "Fill the diagonal", done: `Diagonal filled in ${cells}.` },
    clearDiagonal: { label: "Clear the diagonal", done: `Diagonal cleared in ${cells}.` },
    convertText: { label: "Read the text as numbers", done: `Numbers entered in ${cells}.` },
    dividePercent: { label: "Divide by 100", done: `Divided by 100 in ${cells}.` },
    rescaleRows: { label: "Divide each row by its sum", done: `Rows rescaled in ${cells}.` },
    transposeCopy: { label: "Make a transposed copy", done: "Transposed copy written." },
    convertProbability: { label: "Convert to rates beside it", done: "Table of rates written." },
    invertMeanTimes: { label: "Make a table of rates beside it", done: "Table of rates written, one over each mean time." },
    narrowSelection: { label: "Select the table alone", done: "Selection narrowed." },
    widenSelection: { label: "Select the whole table", done: "Selection widened." },
  };
  const found = texts[remedy.code];
  if (!found) throw new RangeError(`No words for remedy ${remedy.code}.`);
  return found;
}
