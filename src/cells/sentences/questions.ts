import type { Finding } from "../../audit/finding";
import { arrowClaim, durationWords } from "./arrows";

export interface Choice {
  /** What is remembered with the table. */
  readonly answer: string;
  readonly label: string;
}

export interface Question {
  readonly question: string;
  readonly choices: readonly Choice[];
}

/**
 * The question of a finding that only a person can decide, asked with the largest arrow as a sentence.
 * Answers belong under `answers[finding.details.question]`.
 *
 * @param unit - the table's unit word, "" or null where none is set
 */
export function questionOf(finding: Finding, unit: string | null): Question {
  const { fromName, toName, orientation, probability, meanTime } = finding.details;
  const rate = Number(finding.details.rate);
  const from = String(fromName);
  const to = String(toName);
  const word = unit ?? "";
  const choices: Choice[] = [{ answer: "right", label: "Yes, that is meant" }];
  if (orientation) choices.push({ answer: "columns", label: `No, it is ${to} → ${from}: columns are from` });
  if (meanTime) choices.push({ answer: "meanTime", label: `No, it takes ${durationWords(rate, word)}: a mean time` });
  if (probability) choices.push({ answer: "probability", label: "No, it is a probability" });
  return { question: `Largest arrow: ${from} → ${to}, ${arrowClaim(rate, word)}. Is that meant?`, choices };
}
