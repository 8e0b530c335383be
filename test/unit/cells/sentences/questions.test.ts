import { expect, it } from "vitest";
import { questionOf } from "../../../../src/cells/sentences/questions";
import { findingOf, headed } from "../../audit/table";

it("asks with the largest arrow, and offers only what can be", () => {
  const rates = headed("", ["Running", "Failed"], [[null, 0.02], [0.5, null]]);
  const asked = questionOf(findingOf(rates, "largestArrow", { answers: {} })!, "h");
  expect(asked.question).toBe("Largest arrow: Failed → Running, 0.5 per h, about once in 2 h. Is that meant?");
  expect(asked.choices.map((choice) => choice.answer)).toEqual(["right", "columns", "meanTime", "probability"]);

  const list = [["From", "To", "Rate per h"], ["Running", "Failed", 40], ["Failed", "Running", 30]];
  expect(findingOf(list, "largestArrow", { answers: {} })).toBeUndefined();
  const unsaid = [["Running", "Failed", 40], ["Failed", "Running", 30]];
  expect(questionOf(findingOf(unsaid, "largestArrow", { answers: {} })!, null).choices.map((choice) => choice.answer)).toEqual(["right", "meanTime"]);
});
