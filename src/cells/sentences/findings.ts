import type { Finding, Severity } from "../../audit/finding";
import type { Detail } from "../../chain/problem";
import { shortSentence } from "./book";
import { figure, listed, plural } from "./figure";
import { sentenceOf } from "./problems";

/** The four columns of `CHECK`, and what the pane shows. */
export interface FindingTexts {
  readonly severity: Severity;
  /** In states ("row 3 (Degraded), column 1"), or in lines of the range; "table" for the whole. */
  readonly where: string;
  readonly finding: string;
  readonly remedy: string;
}

/** Words of one finding. Where a formula refuses, the sentence is the refusal's own. */
export function findingTexts(finding: Finding): FindingTexts {
  const words = WORDS[finding.code];
  const refusal = finding.problem ? sentenceOf(finding.problem) : null;
  if (!words && refusal === null) throw new RangeError(`No sentence for finding code ${finding.code}.`);
  const also = finding.also && finding.also.length > 0 && refusal !== null ? ` The same at ${plural(finding.also.length, "more place")}.` : "";
  const remedy = finding.details.explained ? "The next finding says why; correct that." : words ? fitting(finding, words.remedy) : "Correct it as the sentence says.";
  return { severity: finding.severity, where: whereOf(finding), finding: refusal ?? fitting(finding, words.finding), remedy: remedy + also };
}

const LONGEST = 120;

/** The sentence with its names cut as far as it takes to stay within the length of a cell's error text. */
function fitting(finding: Finding, sentence: (facts: Facts) => string): string {
  let text = "";
  for (const longestName of [60, 24, 16, 10, 6]) {
    text = sentence(new Facts(finding.details, longestName));
    if (text.length <= LONGEST) break;
  }
  return text;
}

function whereOf({ where }: Finding): string {
  if (!where) return "table";
  const name = (text: string | undefined): string => (text ? ` (${text})` : "");
  const lines = [
    where.row === undefined ? "" : `row ${where.row}${name(where.rowName)}`,
    where.column === undefined ? "" : `column ${where.column}${name(where.columnName)}`,
  ].filter((line) => line !== "");
  if (lines.length === 0) return "table";
  return (where.heading ? "heading of " : "") + lines.join(", ") + (where.inRange ? " of the range" : "");
}

/** A finding's details as the sentences need them. */
class Facts {
  constructor(
    private readonly details: Readonly<Record<string, Detail>>,
    private readonly longestName: number,
  ) {}

  has(key: string): boolean {
    const value = this.details[key];
    return value !== undefined && value !== null && value !== false;
  }

  number(key: string): number {
    return Number(this.details[key]);
  }

  figure(key: string): string {
    return figure(this.number(key));
  }

  text(key: string): string {
    return clip(String(this.details[key] ?? ""), this.longestName);
  }

  list(key: string): readonly Detail[] {
    const value = this.details[key];
    return Array.isArray(value) ? (value as readonly Detail[]) : [];
  }

  names(key: string, most = 3): string {
    return listed(this.list(key).map((name) => clip(String(name), this.longestName)), most);
  }

  /** 'column 5 (Total)' for each of the lines, which are [line, number, label, …]. */
  lines(): string {
    return listed(
      this.list("lines").map((line) => {
        const [kind, number, label] = line as readonly Detail[];
        return `${String(kind)} ${String(number)}${label ? ` (${clip(String(label), this.longestName)})` : ""}`;
      }),
    );
  }

  groups(): string {
    const groups = this.list("classes").map((members) => {
      const names = (members as readonly Detail[]).map((name) => clip(String(name), this.longestName));
      return names.length === 1 ? names[0] : `the group of ${names[0]}`;
    });
    return groups.length === 2 ? `${groups[0]} or ${groups[1]}` : listed(groups);
  }
}

interface Words {
  finding(facts: Facts): string;
  remedy(facts: Facts): string;
}

const CLEAR_DIAGONAL = "Clear the diagonal: it is then worked out as minus the exits.";

const CONVERT = "Do not clear the diagonal: convert the whole table, or enter rates.";

/** Remedies of refusals (their sentence comes from the problem), then the rules' own sentences. */
const WORDS: Readonly<Record<string, Words>> = {
  rangeEmpty: refusal(() => "Select the cells that hold the rates."),
  notSquare: refusal((f) =>
    f.has("name") ? "Leave that line out if it is no state, or add its partner." : "Select the table with its headings and nothing else: no totals, units or notes.",
  ),
  listTooWide: refusal(() => "Select from, to and rate alone."),
  listEmpty: refusal(() => "Enter one row for each arrow."),
  cornerBlank: refusal(() => "Type a word such as From into the corner cell, or enter the diagonal."),
  headingMissing: refusal(() => "Enter the name, or leave the headings out of the selection."),
  headingNotName: refusal(() => "Enter the name as text."),
  headingsDiffer: refusal(() => "Bring rows and columns into the same order under the same names."),
  nameRepeated: refusal(() => "Rename one of the two states in its row and its column."),
  cellFault: refusal(() => "Correct the formula in that cell."),
  rateNotNumber: refusal(() => "Enter the rate as a number; leave the cell blank where there is no arrow."),
  rateIsText: refusal((f) => `Enter it as a number${Number.isFinite(f.number("reading")) ? ` (${f.figure("reading")}?)` : ""}; look for a comma, a blank or an apostrophe in the cell.`),
  rateNegative: refusal(() => "Enter the rate without its minus sign, or move it to the diagonal if it is minus the exits."),
  rateNotFinite: refusal(() => "Enter a finite number, 0 or more."),
  rateOutOfRange: refusal(() => "Use a time unit in which the rates are of ordinary size."),
  diagonalPositive: refusal((f) => (f.has("total") ? CONVERT : f.has("lostMinus") ? `A minus sign got lost. ${CLEAR_DIAGONAL}` : `Diagonals of rate tables are minus the exits. ${CLEAR_DIAGONAL}`)),
  diagonalWithoutExits: refusal((f) => f.has("total") ? CONVERT : "Clear that diagonal cell if the state is final; else enter the rates out of it."),
  rowSum: refusal(() => `Look for a wrong or missing rate in the row first. ${CLEAR_DIAGONAL}`),
  rowSumRounded: refusal(() => `Only the last typed digit is at fault. ${CLEAR_DIAGONAL}`),
  listNameMissing: refusal(() => "Enter both states of that row as text."),
  arrowToItself: refusal(() => "Delete that row: a stay needs no rate."),
  arrowRepeated: refusal(() => "Keep one of the rows; if both are causes of the same move, enter the sum of their rates."),

  columnsSum: {
    finding: (f) =>
      f.has("answered")
        ? "You said that columns are from and rows are to; formulas read rows as from."
        : "Every column sums to 0 and not every row: columns seem to be from, rows to.",
    remedy: () => "Turn the table over (a transposed copy), so that rows are from and columns are to.",
  },
  seemsTransposed: {
    finding: (f) => `${f.text("name")} has exits and nothing leads to it: are columns from and rows to?`,
    remedy: () => "If so, turn the table over (a transposed copy); if not, enter what leads to it.",
  },
  listReversed: {
    finding: (f) => `The headings say "${f.text("first")}", "${f.text("second")}": formulas take the first column as from, the second as to.`,
    remedy: () => "Exchange the two columns: =CTMC.FROMLIST(CHOOSECOLS(list, 2, 1, 3)).",
  },
  probabilityTable: {
    finding: (f) =>
      f.has("short")
        ? "Rows sum to 1 or a little less, stays on the diagonal: this is a table of probabilities, not of rates."
        : "Every row sums to 1 and nothing is negative: this is a table of probabilities, not of rates.",
    remedy: () => "Convert it: =CTMC.FROMPROBABILITY(table, period) gives the rates per unit of the period.",
  },
  probabilitySums: {
    finding: (f) => `${plural(f.number("rows"), "row")} of the probabilities ${f.number("rows") === 1 ? "does" : "do"} not sum to 1; the furthest sums to ${figure6(f.number("sum"))}.`,
    remedy: () => "If rounding is the cause, divide each row by its sum before converting; else look for the missing class.",
  },
  percentTable: {
    finding: (f) => `${f.has("short") ? "Rows sum to 100 or a little less" : "Every row sums to 100"}: these are percentages typed as whole numbers.`,
    remedy: () => "Divide by 100, then convert: =CTMC.FROMPROBABILITY(table, period).",
  },
  percentMixed: {
    finding: (f) => `${plural(f.number("withSign"), "cell")} formatted as percent beside ${f.number("without")} that ${f.number("without") === 1 ? "is" : "are"} not.`,
    remedy: () => "Give all rates one format, and check that 12 and 12 % do not stand for the same thing.",
  },
  closedClasses: {
    finding: (f) => `Long-run shares depend on the start: once in ${f.groups()}, never out again.`, // where it is a note
    remedy: (f) => (f.has("final") ? "Name a start in long-run formulas." : "Enter the missing arrow between the groups, or name a start."),
  },
  noTarget: {
    finding: () => "",
    remedy: (f) => `Asked at ${f.text("where")}: name the target states in CTMC.${f.text("name")}, such as the failed ones.`,
  },
  totalsSelected: {
    finding: (f) => `${capital(f.lines())} ${f.list("lines").length === 1 ? "is a total" : "are totals"}, not a state.`,
    remedy: () => "Leave totals out of the selection.",
  },
  linesAside: {
    finding: (f) => `${capital(f.lines())} ${f.list("lines").length === 1 ? "holds" : "hold"} ${rolesIn(f.list("lines"))}, no rates.`,
    remedy: (f) =>
      f.has("selection")
        ? "Leave it out of the selection; the table itself can be read."
        : "Move it out of the table, or select the rates without headings.",
  },
  listWithMore: {
    finding: (f) => `A list of arrows with more than from, to, rate: ${f.lines()}.`,
    remedy: (f) =>
      f.has("selection")
        ? "Select the three columns from, to, rate alone."
        : `Take the three columns: =CTMC.FROMLIST(CHOOSECOLS(list, ${f.list("columns").join(", ")})).`,
  },
  countsBesideTime: {
    finding: () => "Counts of jumps beside the time in each state, not rates.",
    remedy: (f) =>
      f.text("form") === "list"
        ? "Convert: =CTMC.FROMLIST(HSTACK(from and to, counts / time))."
        : "Convert: =CTMC.FROMCOUNTS(counts, time in state) gives the rates.",
  },
  meanTimes: {
    finding: (f) => (f.has("answered") ? "You said that the cells hold mean times; formulas take rates." : `"${f.text("label")}" speaks of mean times; formulas take rates.`),
    remedy: () => "If they are mean times, use one over each: a new table of rates beside this one.",
  },
  probabilityLabel: {
    finding: (f) => (f.has("answered") ? "You said that the cells hold single probabilities; formulas take rates." : `"${f.text("label")}" speaks of probabilities; formulas take rates.`),
    remedy: (f) =>
      f.has("rate")
        ? `A probability p over one period is a rate of −ln(1 − p): ${f.figure("largest")} is ${f.figure("rate")}. Where exits compete, convert the whole table.`
        : "Add the stays on the diagonal and convert: =CTMC.FROMPROBABILITY(table, period).",
  },
  unreachable: {
    finding: (f) => `${f.has("started") ? "From the start, no path leads" : "No arrow leads"} to ${f.names("names")}.`,
    remedy: (f) => (f.has("started") ? "Enter the missing arrow, or take the state out." : "Enter the missing arrow, or take the state out; fine if it is the start."),
  },
  noExit: {
    finding: (f) => `${f.names("names")} ${f.list("names").length === 1 ? "has" : "have"} no exit: once there, for good.`,
    remedy: (f) => (f.has("named") ? "If it is not final, enter the rate out of it." : "If it is not final, enter the rate out of it; a name such as Failed would say so."),
  },
  noArrows: {
    finding: () => "There is no rate in the table: every state lasts for ever.",
    remedy: () => "Enter the rates; rows are from, columns are to.",
  },
  diagonalBlank: {
    finding: (f) => (f.has("all") ? "The diagonal is blank: it is worked out as minus the exits." : `The diagonal is blank in ${plural(f.number("rows"), "row")}: it is worked out as minus the exits.`),
    remedy: () => "Nothing to do; it can be filled in for readers.",
  },
  competingExits: {
    finding: (f) => `The exits of ${f.text("name")} sum to ${f.figure("sum")}, above 1: each was made a probability by itself.`,
    remedy: () => "Exits compete: enter the rates, and take probabilities from =CTMC.TRANSITION(rates, period).",
  },
  competingFormulas: {
    finding: (f) => `${f.number("cells")} exits of ${f.text("name")} are each 1−EXP(−…): exits that compete take from each other.`,
    remedy: () => "Enter the rates, and take probabilities from =CTMC.TRANSITION(rates, period).",
  },
  exponentialCells: {
    finding: () => "EXP is taken cell by cell: that gives no transition probabilities.",
    remedy: () => "Take them from =CTMC.TRANSITION(rates, time), which works on the table as a whole.",
  },
  exponentialsOverTable: {
    finding: (f) => `EXP is taken over ${f.text("where")} cell by cell: that gives no transition probabilities.`,
    remedy: (f) => `Take them from =CTMC.TRANSITION(${f.text("where")}, time), which works on the table as a whole.`,
  },
  formulaShort: {
    finding: (f) => shortSentence(f.number("rows"), f.number("columns"), f.text("where")),
    remedy: (f) => `Let the formula read ${f.text("where")}.`,
  },
  firstFailureAsBetween: {
    finding: (f) => `"${f.text("label")}" stands at a mean time to the first failure, which is not the time between failures.`,
    remedy: () => "Call it mean time to first failure, or take mean time between failures from =CTMC.UPDOWN(rates, up).",
  },
  linearSteps: {
    finding: () => "Rows sum to 1 but the diagonal goes below 0: I + Q·t is no table of probabilities.",
    remedy: () => "Take probabilities from =CTMC.TRANSITION(rates, time).",
  },
  outsideUnit: {
    finding: (f) => `${f.text("fromName")} → ${f.text("toName")} is ${f.figure("value")}: no probability is below 0 or above 1.`,
    remedy: () => "Take probabilities from =CTMC.TRANSITION(rates, time).",
  },
  cycleLength: {
    finding: (f) =>
      f.text("way") === "divided"
        ? `These are the probabilities at ${f.text("where")} divided by ${f.number("cycles")}; ${f.number("cycles")} such cycles miss them by ${f.figure("gap")}.`
        : `These are roots of the entries at ${f.text("where")}; ${f.number("cycles")} such cycles miss them by ${f.figure("gap")}.`,
    remedy: (f) => `Convert the long table: =CTMC.TRANSITION(CTMC.FROMPROBABILITY(table, ${f.number("cycles")}), 1).`,
  },
  unitsDiffer: {
    finding: (f) => `Labels name more than one time unit: ${f.names("units")}.`,
    remedy: () => "Bring all rates to one unit; convert MTBF or MTTR before taking one over it.",
  },
  rateSpread: {
    finding: (f) =>
      f.has("factor")
        ? `${f.text("fast")} is left ${f.figure("ratio")} times as fast as ${f.text("slow")}: near ${f.figure("factor")}, the ${f.text("words")}.`
        : `${f.text("fast")} is left ${f.figure("ratio")} times as fast as ${f.text("slow")}.`,
    remedy: () => "Right if all rates are per the same unit, such as yearly failures beside repairs in hours.",
  },
  horizonUnit: {
    finding: (f) => `${f.text("where")} asks at time ${f.figure("time")}: ${f.number("jumps") < 1 ? "hardly one jump in a thousand cases" : "over a million jumps"} by then.`,
    remedy: () => "Check that the time is in the unit of the rates.",
  },
  failuresIgnoreUnits: {
    finding: (f) => `Failures come at ${f.figure("rate")} however many units still run.`,
    remedy: (f) => `Right if one unit runs at a time; with n running it is n times the rate${f.has("labelled") ? "" : ", if states count units down"}.`,
  },
  crewsUnlimited: {
    finding: (f) => `Repairs run at ${f.figure("rate")} for each unit down, up to ${f.number("most")}: as many crews as units down.`,
    remedy: () => "With fewer crews the rate stops growing: see CTMC.REPAIRGROUP.",
  },
  repairMendsSeveral: {
    finding: (f) => `${f.text("fromName")} → ${f.text("toName")}: one repair mends several units at once.`,
    remedy: () => "If units are repaired one by one, the arrow leads to one unit fewer down.",
  },
  commonCause: {
    finding: (f) => `No arrow leads from ${f.text("upName")} to ${f.text("downName")}: no shared cause is assumed.`,
    remedy: () => "State that assumption, or enter the rate of the shared cause. Repair is taken as memoryless.",
  },
  longRunNotReached: {
    finding: (f) => `At time ${f.figure("time")} the share of ${f.text("name")} is ${f.figure("then")}, in the long run ${f.figure("last")}.`,
    remedy: (f) => `${f.text("where")} gives long-run figures; for that date use a formula with the time.`,
  },
  zeroEvents: {
    finding: (f) => `${f.text("fromName")} → ${f.text("toName")} is listed with ${f.has("counted") ? "no event" : "rate 0"}${f.number("arrows") > 1 ? `, and ${f.number("arrows") - 1} more` : ""}.`,
    remedy: () => "No event seen is not a rate of 0: =CTMC.RATEINTERVAL(0, exposure) gives its upper bound.",
  },
  blanksAmongZeros: {
    finding: (f) => `${plural(f.number("blanks"), "blank cell")} beside ${plural(f.number("said"), "typed zero or dash", "typed zeros or dashes")}: no arrow, or not known?`,
    remedy: () => "Blank counts as no arrow. Type 0 where that is meant.",
  },
  readAsOther: {
    finding: (f) => `${f.text("where")} reads this range as ${ROLES[f.text("role")]}, not as rates: CTMC.${f.text("name")}.`,
    remedy: () => "It is not judged as a table of rates.",
  },
  shownAsZero: {
    finding: (f) => `${plural(f.number("rates"), "rate")} ${f.number("rates") === 1 ? "is" : "are"} shown as 0 and ${f.number("rates") === 1 ? "is" : "are"} not.`,
    remedy: () => "Show more digits, or a scientific format.",
  },
  hiddenLines: {
    finding: (f) => `${listed([f.number("rows") > 0 ? plural(f.number("rows"), "row") : "", f.number("columns") > 0 ? plural(f.number("columns"), "column") : ""].filter(Boolean))} of the range ${f.number("rows") + f.number("columns") === 1 ? "is" : "are"} hidden or filtered out, and read all the same.`,
    remedy: () => "Show them, or leave them out of the table.",
  },
  mergedCells: {
    finding: (f) => `${plural(f.number("areas"), "merged area")} among the rates: all but the first cell of each reads as blank.`,
    remedy: () => "Unmerge, and enter each rate in its own cell.",
  },
  manualCalculation: {
    finding: () => "The workbook calculates by hand only: figures may be older than the rates.",
    remedy: () => "Recalculate, or set calculation to automatic.",
  },
  pastedConstants: {
    finding: (f) => `${plural(f.number("constants"), "plain number")} among ${f.number("formulas")} rates that are formulas.`,
    remedy: () => "If it was pasted over a formula, it no longer follows: enter the formula again.",
  },
  rangeShort: {
    finding: (f) => `The table goes on outside the range${f.text("name") ? `: ${f.text("name")} is missing` : ""}.`,
    remedy: (f) => `Widen the range by ${listed([f.number("rows") > 0 ? "one row" : "", f.number("columns") > 0 ? "one column" : ""].filter(Boolean))}.`,
  },
  largestArrow: {
    finding: (f) => `Largest arrow: ${f.text("fromName")} → ${f.text("toName")} at ${f.figure("rate")} per time unit.`,
    remedy: () => "Say whether it is meant so.",
  },
};

const ROLES: Readonly<Record<string, string>> = { probabilities: "probabilities", counts: "counts of jumps", costs: "costs of arrows", resets: "resets" };

function refusal(remedy: Words["remedy"]): Words {
  return { finding: () => "", remedy };
}

function rolesIn(lines: readonly Detail[]): string {
  const words: Readonly<Record<string, string>> = { units: "units", notes: "notes", title: "a title", exposure: "times" };
  return listed([...new Set(lines.map((line) => words[String((line as readonly Detail[])[3])] ?? "something else"))]);
}

function clip(text: string, most: number): string {
  return text.length > most ? `${text.slice(0, most - 1)}…` : text;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/** Sums that miss 1 by little need more digits than other figures. */
function figure6(value: number): string {
  return String(Number(value.toPrecision(7)));
}
