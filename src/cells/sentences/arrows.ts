/**
 * Rates, stays and units as words: "0.02 a day, about once in 50 days".
 *
 * A table's unit is a word of its user ("day", "h", "per 1e6 h"); nothing is ever converted by it. Where the word is one
 * of the common time units, long and short stays are repeated in a unit that a person can feel ("about 11 years").
 */

interface KnownUnit {
  readonly word: string;
  readonly article: "a" | "an";
  readonly seconds: number;
  readonly short: readonly string[];
}

/** A year is 365.25 days here: it only serves the rounded figure in brackets. */
const KNOWN_UNITS: readonly KnownUnit[] = [
  { word: "second", article: "a", seconds: 1, short: ["s", "sec"] },
  { word: "minute", article: "a", seconds: 60, short: ["min"] },
  { word: "hour", article: "an", seconds: 3600, short: ["h", "hr"] },
  { word: "day", article: "a", seconds: 86400, short: ["d"] },
  { word: "week", article: "a", seconds: 604800, short: ["wk"] },
  { word: "month", article: "a", seconds: 2629800, short: ["mo"] },
  { word: "quarter", article: "a", seconds: 7889400, short: [] },
  { word: "year", article: "a", seconds: 31557600, short: ["a", "y", "yr"] },
];

const BRACKET_UNITS = ["second", "minute", "hour", "day", "year"];

/** The unit word as kept: outer spaces, a leading "per", "/" or "1/" dropped, "hours" made "hour"; else the user's own word. */
export function plainUnit(typed: string): string {
  const bare = typed.trim().replace(/\s+/g, " ").replace(/^(per\b ?|1?\/ ?)/i, "").trim();
  return KNOWN_UNITS.find((unit) => `${unit.word}s` === bare.toLowerCase())?.word ?? bare;
}

/** "per day"; "" without a unit. */
export function perUnit(unit: string): string {
  return unit === "" ? "" : `per ${unit}`;
}

/** "0.02 a day", "0.02 per h", "0.02 per 1e6 h", "0.02 per time unit". */
export function rateWords(rate: number, unit: string): string {
  const article = KNOWN_UNITS.find(({ word }) => word === unit.toLowerCase())?.article;
  return article ? `${shortFigure(rate)} ${article} ${unit}` : `${shortFigure(rate)} per ${unit === "" ? "time unit" : unit}`;
}

/** "50 days", "1 day", "50 h", "100 000 hours (about 11 years)", "50 time units". */
export function durationWords(duration: number, unit: string): string {
  const figure = roundFigure(duration);
  const inOwn = `${shortFigure(figure)} ${plural(unit === "" ? "time unit" : unit, figure)}`;
  const found = known(unit);
  if (!found || (duration >= 0.1 && duration < 1000)) return inOwn;
  const felt = feltUnit(duration * found.seconds);
  if (felt.word === found.word) return inOwn;
  const rounded = roundFigure((duration * found.seconds) / felt.seconds);
  return `${inOwn} (about ${shortFigure(rounded)} ${plural(felt.word, rounded)})`;
}

/** What one arrow claims: "0.02 a day, about once in 50 days". */
export function arrowClaim(rate: number, unit: string): string {
  return `${rateWords(rate, unit)}, about once in ${durationWords(1 / rate, unit)}`;
}

/**
 * A number as short plain text: at most six significant digits, digits from 10 000 on in groups of three, powers of ten
 * only below 1e-6 and from 1e9 on, a true minus sign.
 */
export function shortFigure(value: number): string {
  if (!Number.isFinite(value)) return "–";
  const size = Math.abs(Number(value.toPrecision(6)));
  const sign = value < 0 && size > 0 ? "−" : "";
  if (size !== 0 && (size < 1e-6 || size >= 1e9)) return sign + size.toExponential().replace("e+", "e").replace("e-", "e−");
  const plain = size < 1e-4 ? size.toFixed(12).replace(/0+$/, "") : String(size);
  const [whole, fraction] = plain.split(".");
  const grouped = whole.length > 4 ? whole.replace(/\B(?=(\d{3})+$)/g, "\u202f") : whole;
  return sign + grouped + (fraction ? `.${fraction}` : "");
}

/** Two significant digits below 100, three from there on: a mean stay is an order of size, not a measurement. */
function roundFigure(value: number): number {
  return Number(value.toPrecision(Math.abs(value) >= 99.5 ? 3 : 2));
}

function known(unit: string): KnownUnit | undefined {
  const lower = unit.toLowerCase();
  return KNOWN_UNITS.find(({ word, short }) => word === lower || short.includes(lower));
}

function feltUnit(seconds: number): KnownUnit {
  const candidates = KNOWN_UNITS.filter((candidate) => BRACKET_UNITS.includes(candidate.word));
  return candidates.filter((candidate) => seconds >= candidate.seconds).pop() ?? candidates[0];
}

/** Words get an "s", abbreviations do not; a unit with a figure in it ("1e6 h") is kept and multiplied. */
function plural(unit: string, figure: number): string {
  if (/^[^\p{L}]|\d/u.test(unit)) return `× ${unit}`;
  const abbreviation = unit.length < 4 && unit.toLowerCase() !== "day";
  return figure === 1 || abbreviation || /s$/i.test(unit) ? unit : `${unit}s`;
}
