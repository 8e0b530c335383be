import { entrySpan, stateName, type Context, type Rule } from "../context";
import { plainWords, meansMeanTime, meansProbability, meansRate, saysRate } from "../words";
import { stationaryShares } from "../../chain/stationary";
import { communicatingClasses } from "../../chain/classes";

/**
 * What only a person knows (mistakes 4, 7 and 11): is the row the state that is left, is the number a rate? Asked once a
 * table, with its largest arrow as a sentence, and only where neither a given diagonal nor a label tells.
 */
export const largestArrow: Rule = (context) => {
  const { body, kind, reading, options, chain, captions } = context;
  const { answers } = options;
  if (answers === undefined || answers.largestArrow !== undefined || kind !== "rates" || !reading.table || chain.arrowCount === 0) return [];
  const doubts = doubtsAbout(context);
  if (doubts.length === 0 || captions.some((text) => (meansMeanTime(text) && !meansRate(text)) || (meansProbability(text) && !saysRate(text)))) return [];
  let [from, to, rate] = [0, 0, 0];
  for (const arrow of chain.arrows()) if (arrow[2] > rate) [from, to, rate] = arrow;
  return [
    {
      code: "largestArrow",
      severity: "note",
      asks: true,
      span: entrySpan(context, from, to),
      details: {
        question: "largestArrow",
        from,
        to,
        fromName: stateName(context, from),
        toName: stateName(context, to),
        rate,
        orientation: doubts.includes("orientation"),
        probability: body.exits.every((exit) => exit <= 1) && doubts.includes("amount"),
        meanTime: doubts.includes("meanTime") || doubts.includes("amount"),
        firstShare: doubts.includes("meanTime"),
      },
    },
  ];
};

/** The long run of more states would take too long for a question asked at every change. */
const MOST_STATES = 300;

type Doubt = "orientation" | "amount" | "meanTime";

function doubtsAbout({ body, layout, captions, chain }: Context): Doubt[] {
  const doubts: Doubt[] = [];
  const given = Array.from({ length: body.size }, (_, i) => body.values[i * body.size + i]).some((value) => value < 0);
  if (given) return doubts; // a diagonal that agrees with the rows settles all three
  const ordered = layout.form === "list" || captions.some((text) => /\bfrom\b.*\bto\b/u.test(plainWords(text)));
  if (!ordered && !symmetric(body.values, body.size)) doubts.push("orientation");
  if (captions.some((text) => meansRate(text) && !meansProbability(text))) return doubts;
  if (doubts.length > 0) doubts.push("amount");
  if (body.size > 1 && body.size <= MOST_STATES && communicatingClasses(chain).classes.length === 1 && stationaryShares(chain)[0] < 0.5 && body.exits[0] > 1) doubts.push("meanTime");
  return doubts;
}

function symmetric(values: Float64Array, n: number): boolean {
  for (let i = 0; i < n; i++) for (let j = 0; j < i; j++) if (values[i * n + j] !== values[j * n + i]) return false;
  return true;
}
