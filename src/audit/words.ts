/**
 * What labels say: the words a planner's headings use for totals, final states, probabilities, mean times and units.
 * All lists are common practice, English; a label that none of them knows is never held against a table.
 */

/** Letters and figures only, lower case, single spaces: "Out_of-Service " → "out of service". */
export function plainWords(text: string): string {
  return text
    .normalize("NFKC")
    .toLowerCase()
    .replace(/[^\p{L}\p{N}%]+/gu, " ")
    .trim();
}

const TOTAL = /^(grand |row |column |col )?(totals?|sums?|sum of (row|column|rates|exits)|total (exits?|rate|out|in)|all|check|row sums?|column sums?|σ|Σ)( (out|exit|exits|rate|check))?$/u;

export function meansTotal(text: string): boolean {
  const words = plainWords(text);
  return words !== "all" && TOTAL.test(words);
}

/** Words of states that are meant to be final. */
const FINAL =
  /\b(dead|death|die[ds]?|deceased|fatal(ity)?|fail|fails|failed|failures?|defaults?|defaulted|scrap|scrapped|retired?|retirement|left|leaver|done|closed?|closure|lost|loss|end|ended|exit|exited|final|finished|complete[d]?|completion|gone|cancell?ed|withdrawn|withdrew|withdrawal|dropped|dropout|discharged?|disposed|disposal|decommissioned|written off|write off|destroyed|collapsed?|expired?|lapsed?|surrender(ed)?|matured?|maturity|repaid|prepaid|paid|settled|sold|churned?|quit|resigned|terminated|terminal|bankrupt|insolvent|absorbed|absorbing|removed|censored|resolved|rejected|cured|recovered|accident|hazard(ous)?|dangerous|unsafe|safe (state|failure|shutdown)|fail(ed)? safe|trip(ped)?|shutdown|shut down|ruin(ed)?|flooded|sunk|burnt?( out| down)?|burned|wrecked|crash(ed)?|exploded|explosion|breach(ed)?|meltdown|extinct|not rated|nr|wr|worn out|broken for good|replaced|renewed|end of life|eol)\b/u;

export function meansFinal(text: string): boolean {
  return FINAL.test(plainWords(text));
}

/** As `meansFinal`, with the other states' names at hand: "D" is default among the letters of a rating scale. */
export function meansFinalAmong(text: string, names: readonly string[]): boolean {
  return meansFinal(text) || (/^d$/iu.test(text.trim()) && names.filter((name) => /^(a{1,3}|b{1,3}|c{1,3})[+-]?\d?$/iu.test(name.trim())).length >= 2);
}

/** Words of states in which things begin. */
export function meansBeginning(text: string): boolean {
  return /\b(new|start|started|begin|initial|entry|entered|fresh|healthy|well|good as new|unused|intact|sound|undamaged|fault free|born|arrival|arrived|enrolled|hired|opened|installed|commissioned|origin)\b/u.test(plainWords(text));
}

const PROBABILITY = /(\bprob(s|ability|abilities|\.)?\b|\brisks?\b|\bchances?\b|\blikelihood\b|%|\bper ?cent\b|\bp\s*\()/iu;

export function meansProbability(text: string): boolean {
  return PROBABILITY.test(text);
}

export function meansPercent(text: string): boolean {
  return /%|\bper ?cent\b/iu.test(text);
}

const MEAN_TIME = /(\bm\.?t\.?b\.?f\b|\bm\.?t\.?t\.?[rf]f?\b|\bm\.?d\.?t\b|\bmut\b|\bmean (time|stay|life|duration|down ?time|up ?time|repair|delay|wait)|\baverage (time|stay|life|duration|repair)|\bmean\b.*\bbetween\b|\bdwell\b|\bmean sojourn\b|\btime to (repair|failure|fail)\b|\brepair time\b|\bhandling time\b|\bservice time\b)/iu;

export function meansMeanTime(text: string): boolean {
  return MEAN_TIME.test(text);
}

/** Says "rate" outright. "Probability per year" does not. */
export function saysRate(text: string): boolean {
  return /(\brates?\b|\bintensit(y|ies)\b|λ|μ|\bgenerator\b|\bhazard\b|\bfits?\b)/iu.test(text);
}

/** Says "rate", or names a unit that only rates have: "per h", "1/MTBF". */
export function meansRate(text: string): boolean {
  return saysRate(text) || /\bper (second|minute|hour|day|week|month|quarter|year|h|d|yr|annum)\b|\b1\s*\//iu.test(text);
}

export function meansCount(text: string): boolean {
  return /\b(counts?|events?|observed|number of|no\.? of|#|jumps seen|failures seen|n)\b/iu.test(text) && !meansRate(text);
}

export function meansExposure(text: string): boolean {
  return /\b(exposure|time in state|time observed|time at risk|person years?|unit (hours|days|years)|operating (hours|time)|(hours|days|years) (in state|observed|at risk|run)|hours run)\b/iu.test(text);
}

/** "Hours", "Time (h)": a time, if the column stands beside counts. */
export function meansTime(text: string): boolean {
  return /^(total )?(time|hours|days|years|h|duration)( [\p{L}\d ]+)?$/iu.test(plainWords(text));
}

/** A figure of each state that people keep beside its rates. */
export function meansFigure(text: string): boolean {
  return /\b(costs?|price|rewards?|utilit(y|ies)|value|mean stay|stay|share|availability|income|penalty|weight|target)\b/iu.test(text);
}

export function meansFrom(text: string): boolean {
  return /^(from|from state|state from|start|source state|origin|old state|leaving|present state|current state|before)$/u.test(plainWords(text));
}

export function meansTo(text: string): boolean {
  return /^(to|to state|state to|next|next state|target|target state|destination|new state|entering|after)$/u.test(plainWords(text));
}

export function meansNote(text: string): boolean {
  return /\b(notes?|comments?|remarks?|sources?|references?|refs?|owner|date|status|units?|basis|low|high|lower|upper|min|max)\b/iu.test(text);
}

/** Time units by their seconds; a scaled hour ("per 1e6 h", "FIT") is a unit of its own. */
const UNITS: readonly (readonly [name: string, pattern: RegExp])[] = [
  ["1e9 hours", /(1e-?0?9|10\^-?9|10-9|10⁹|10⁻⁹|billion)\s*\/?\s*(h|hr|hrs|hours?)\b|\bfits?\b/iu],
  ["1e6 hours", /(1e-?0?6|10\^-?6|10-6|10⁶|10⁻⁶|million|\bm)\s*\/?\s*(h|hr|hrs|hours?)\b|\bfpmh\b/iu],
  ["seconds", /\b(s|sec|secs|seconds?)\b/iu],
  ["minutes", /\b(min|mins|minutes?)\b/iu],
  ["half hours", /\bhalf[ -]hours?\b/iu],
  ["hours", /\b(h|hr|hrs|hours?|hourly)\b/iu],
  ["days", /\b(d|days?|daily)\b/iu],
  ["weeks", /\b(wk|wks|weeks?|weekly)\b/iu],
  ["months", /\b(mo|months?|monthly)\b/iu],
  ["quarters", /\b(quarters?|quarterly)\b/iu],
  ["years", /\b(y|yr|yrs|years?|yearly|annual|annum|p\.?a)\b/iu],
];

/** The time units that a label names as units: "MTBF (years)", "per h", "1/yr", "h". Plain mentions inside a sentence do not count. */
export function timeUnits(text: string): string[] {
  const named: string[] = [];
  const parts = [...text.matchAll(/\(([^)]*)\)|\[([^\]]*)\]|\b(?:per|in|each)\s+([^,;()[\]]+)|\/\s*([^,;()[\]]+)/giu)].map((m) => m[1] ?? m[2] ?? m[3] ?? m[4]);
  if (text.trim().split(/\s+/u).length <= 2) parts.push(text);
  for (const part of parts) {
    const unit = UNITS.find(([, pattern]) => pattern.test(part));
    if (unit && !named.includes(unit[0])) named.push(unit[0]);
  }
  return named;
}

/** How many units a state label says are down (or up), with which it speaks: "2 down" → { down: true, count: 2 }. */
export function unitsIn(label: string): { readonly down: boolean; readonly count: number } | null {
  const words = plainWords(label);
  const match = /\b(\d{1,3}|no|none|one|two|three|four|five|six|all)\b(?: (?:units?|pumps?|machines?|of \d+|sets?|lines?|engines?|trucks?|servers?|\p{L}+s))?(?: (?:are|is))? (down|failed|broken|out|up|working|running|ok|good|available)\b/u.exec(words);
  if (!match) return null;
  const named = ["no", "one", "two", "three", "four", "five", "six"].indexOf(match[1]);
  const count = match[1] === "none" ? 0 : match[1] === "all" ? Infinity : named >= 0 ? named : Number(match[1]);
  return { down: /down|failed|broken|out/u.test(match[2]), count };
}

/** "1,250" may be a thousand and a quarter or one and a quarter: the audit says so instead of choosing. */
export function ambiguousNumber(text: string): boolean {
  return /^[+-]?[1-9]\d{0,2}[.,]\d{3}$/u.test(text.trim());
}
